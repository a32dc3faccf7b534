/** Draws the whole recording as a thin strip: how hard the cables pull, what went wrong, and the part in sight. */
import type { Palette } from '../palette';
import type { Source } from '../source';
import { lengthOf, type Span } from '../span';
import { channelSeries } from '../ribbons/ribbons';
import { fillColumns, makeColumns, type Columns } from './columns';
import type { MarkedFlag } from './draw-marks';
import type { NoteSlip } from './draw-slips';
import { flagShapes } from './flag-shapes';
import { hatch } from './hatch';
import type { PageLayout } from './page-layout';
import type { TensionLimits } from './string-runs';

/** Highest and lowest tension of any cable in each pixel of the strip; made once per overview and width. */
export function overviewColumns(source: Source, width: number): Columns | null {
  const overview = source.overview();
  if (!overview || width < 1) return null;
  const all = makeColumns(width);
  all.min.fill(Number.NaN);
  all.max.fill(Number.NaN);
  const one = makeColumns(width);
  const extent = source.extent();
  for (const channel of source.channels.tensions) {
    fillColumns([{ stretch: overview, span: { fromS: extent.fromS, toS: extent.toS + 1 } }], ({ stretch }) => channelSeries(stretch, channel), extent, source.rateHz, one);
    for (let x = 0; x < width; x += 1) {
      const [min, max] = [one.min[x] ?? Number.NaN, one.max[x] ?? Number.NaN];
      if (min !== min) continue;
      all.min[x] = all.min[x] === all.min[x] ? Math.min(all.min[x] ?? min, min) : min;
      all.max[x] = all.max[x] === all.max[x] ? Math.max(all.max[x] ?? max, max) : max;
    }
  }
  return all;
}

export interface OverviewContent {
  readonly source: Source;
  readonly limits: TensionLimits;
  readonly flags: readonly MarkedFlag[];
  readonly notes: readonly NoteSlip[];
}

export function drawOverview(context: CanvasRenderingContext2D, columns: Columns | null, content: OverviewContent, layout: PageLayout, view: Span, palette: Palette): void {
  const { top, height } = layout.overview;
  const extent = content.source.extent();
  const length = Math.max(lengthOf(extent), 1e-9);
  const x = (atS: number) => layout.left + ((atS - extent.fromS) / length) * layout.across;
  const inner = { top: top + 4, height: height - 8 };

  const [from, to] = [Math.max(layout.left, x(view.fromS)), Math.min(layout.left + layout.across, x(view.toS))];
  const whole = to - from >= layout.across - 0.5;
  if (!whole) {
    context.fillStyle = palette.sheet;
    context.fillRect(from, top, Math.max(2, to - from), height);
  }
  if (columns) {
    const y = (tension: number) => inner.top + inner.height * (1 - Math.min(1, Math.max(0, tension / content.limits.tensionMax)));
    context.fillStyle = palette.string;
    context.globalAlpha = 0.32;
    for (let i = 0; i < columns.min.length; i += 1) {
      const [min, max] = [columns.min[i] ?? Number.NaN, columns.max[i] ?? Number.NaN];
      if (min === min) context.fillRect(layout.left + i, y(max), 1, Math.max(1, y(min) - y(max)));
    }
    context.globalAlpha = 1;
  }
  for (const gap of content.source.gaps()) {
    const x0 = x(gap.startS);
    const width = Math.max(2, x(gap.endS) - x0);
    context.fillStyle = palette.paper;
    context.fillRect(x0, inner.top, width, inner.height);
    hatch(context, x0, inner.top, width, inner.height, palette.gap, 4);
  }
  // Slack is at the foot, everything at the limit at the head, as on the strip's own scale.
  for (const flag of content.flags) {
    if (flag.kind === 'gap') continue;
    const low = flag.kind === 'slack';
    context.fillStyle = palette[flagShapes[flag.kind].role];
    context.fillRect(x(flag.startS), low ? inner.top + inner.height - 2 : inner.top - 1, Math.max(2.5, Math.min(x(flag.endS) - x(flag.startS), 40)), 3.5);
  }
  context.fillStyle = palette.ink;
  for (const note of content.notes) {
    context.beginPath();
    context.arc(x(note.startS), top + height - 2, 1.6, 0, 2 * Math.PI);
    context.fill();
  }
  context.fillStyle = palette.rule;
  context.fillRect(layout.left, top + height, layout.across, 1);
  if (whole) return;
  context.strokeStyle = palette.ink;
  context.lineWidth = 1.5;
  context.strokeRect(from + 0.75, top + 0.75, Math.max(2, to - from) - 1.5, height - 1.5);
}
