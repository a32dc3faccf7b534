/** A strip of the stave round one flag: enough to judge most of them without opening the trial. */
import { useQuery } from '@tanstack/react-query';
import { useEffect, useMemo, useRef } from 'react';
import type { Moment } from '@shared/api/review';
import { parseChannels } from '@shared/recording/channels';
import { rigModel, type RigModel } from '@shared/rig/rig-model';
import type { Palette } from '../../replay/palette';
import { usePalette } from '../../replay/palette';
import { channelSeries } from '../../replay/ribbons/ribbons';
import type { Span } from '../../replay/span';
import { fillColumns, makeColumns } from '../../replay/stave/columns';
import { drawGaps, drawString } from '../../replay/stave/draw-strings';
import { halfThickness } from '../../replay/stave/string-runs';
import type { Stretch } from '../../replay/stretch';
import { rigRevisionQuery } from '../rigs';
import { stripQuery } from './queries';

/** Room round a flag: a half of what it lasts, at least so long, s. */
const LEAST_ROOM_S = 0.4;

export function stripSpan({ startS, endS, durationS }: Pick<Moment, 'startS' | 'endS' | 'durationS'>): Span {
  const room = Math.max(LEAST_ROOM_S, (endS - startS) * 0.75);
  const fromS = Math.max(0, startS - room);
  return { fromS, toS: Math.max(fromS + 0.05, Math.min(durationS + 0.001, endS + room)) };
}

export function Strip({ moment, height }: { moment: Moment; height: number }) {
  const span = useMemo(() => stripSpan(moment), [moment]);
  const stretch = useQuery(stripQuery(moment.recordingId, moment.channels.length, span)).data;
  const revision = useQuery(rigRevisionQuery(moment.rigRevisionId)).data;
  const rig = useMemo(() => (revision ? rigModel(revision.file) : null), [revision]);
  const palette = usePalette();
  const canvas = useRef<HTMLCanvasElement>(null);

  useEffect(() => {
    const sheet = canvas.current;
    if (!sheet || !stretch || !rig) return;
    const draw = () => {
      const density = Math.min(2, devicePixelRatio || 1);
      sheet.width = Math.round(sheet.clientWidth * density);
      sheet.height = Math.round(height * density);
      const context = sheet.getContext('2d');
      if (!context || sheet.width === 0) return;
      context.setTransform(density, 0, 0, density, 0, 0);
      drawStrip(context, { moment, span, stretch, rig, palette, width: sheet.width, height, density });
    };
    draw();
    const observer = new ResizeObserver(draw);
    observer.observe(sheet);
    return () => observer.disconnect();
  }, [moment, span, stretch, rig, palette, height]);

  return <canvas ref={canvas} aria-hidden data-drawn={stretch && rig ? '' : undefined} className="block w-full" style={{ height }} />;
}

interface StripPicture {
  moment: Moment;
  span: Span;
  stretch: Stretch;
  rig: RigModel;
  palette: Palette;
  /** Pixels across. */
  width: number;
  /** CSS px. */
  height: number;
  density: number;
}

function drawStrip(context: CanvasRenderingContext2D, { moment, span, stretch, rig, palette, width, height, density }: StripPicture): void {
  const parsed = parseChannels(moment.channels, rig.cableCount);
  if (!parsed.ok) return;
  const row = height / rig.cableCount;
  const columns = makeColumns(width);
  const across = width / density;
  const x = (atS: number) => ((atS - span.fromS) / (span.toS - span.fromS)) * across;
  context.clearRect(0, 0, across, height);
  context.fillStyle = palette.wash;
  context.globalAlpha = 0.55;
  context.fillRect(x(moment.startS), 0, Math.max(1, x(moment.endS) - x(moment.startS)), height);
  context.globalAlpha = 1;
  const hole = moment.kind === 'gap' ? [{ startS: moment.startS, endS: moment.endS, missing: null }] : [];
  drawGaps(context, hole, x, 0, height, { left: 0, right: across }, palette);
  parsed.map.tensions.forEach((channel, i) => {
    fillColumns([{ stretch, span }], ({ stretch: of }) => channelSeries(of, channel), span, moment.rateHz, columns);
    const middle = (i + 0.5) * row;
    // The flag's own string with all that it did; the others as a quiet line of their tension. A flag of no cable is about all.
    if (moment.cable === i + 1 || moment.cable === null) {
      drawString(context, columns, rig, { left: 0, middle, row: Math.max(row, 12), density }, palette, () => 'gap');
      return;
    }
    context.fillStyle = palette.stringDim;
    for (let column = 0; column < width; column += 1) {
      const tension = columns.mean[column] ?? Number.NaN;
      if (tension !== tension) continue;
      const half = halfThickness(tension, rig.tensionMax, row);
      context.fillRect(column / density, middle - half, 1 / density, 2 * half);
    }
  });
}
