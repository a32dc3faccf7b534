/** Draws what moves every frame: the reading line, the others' lines, and the values at the line. */
import type { Palette } from '../palette';
import type { Moment } from '../source';
import { clock } from '../../lib/format';
import type { Ribbon } from '../ribbons/ribbons';
import { font } from './page-font';
import { stringMiddle, type PageLayout } from './page-layout';
import { stateOf, type TensionLimits } from './string-runs';

export interface OtherReader {
  readonly id: string;
  readonly initials: string;
  readonly atS: number;
}

export function drawReadingLine(context: CanvasRenderingContext2D, x: number, layout: PageLayout, palette: Palette, held: boolean): void {
  if (x < layout.left - 0.5 || x > layout.left + layout.across + 0.5) return;
  const at = Math.round(x) + 0.5;
  context.strokeStyle = palette.ink;
  context.lineWidth = held ? 2 : 1.5;
  context.beginPath();
  context.moveTo(at, 8);
  context.lineTo(at, layout.times.top + 6);
  context.stroke();
  context.fillStyle = palette.ink;
  const half = held ? 8 : 6.5;
  context.beginPath();
  context.moveTo(at - half, 0);
  context.lineTo(at + half, 0);
  context.lineTo(at, half * 1.35);
  context.closePath();
  context.fill();
}

export function drawOthers(context: CanvasRenderingContext2D, others: readonly OtherReader[], xOf: (atS: number) => number, layout: PageLayout, palette: Palette): void {
  context.font = font(10, 700);
  context.textBaseline = 'top';
  for (const other of others) {
    const x = xOf(other.atS);
    if (x < layout.left || x > layout.left + layout.across) continue;
    const at = Math.round(x) + 0.5;
    context.strokeStyle = palette.slackText;
    context.lineWidth = 1.25;
    context.setLineDash([1.5, 3]);
    context.beginPath();
    context.moveTo(at, 12);
    context.lineTo(at, layout.times.top + 2);
    context.stroke();
    context.setLineDash([]);
    const room = context.measureText(other.initials).width + 4;
    const flip = at + room > layout.left + layout.across;
    context.textAlign = flip ? 'right' : 'left';
    context.fillStyle = palette.paper;
    context.fillRect(flip ? at - room : at + 1, 0, room, 12);
    context.fillStyle = palette.slackText;
    context.fillText(other.initials, flip ? at - 3 : at + 3, 1);
  }
}

/** A faint line under the pointer with its moment. */
export function drawHover(context: CanvasRenderingContext2D, x: number, atS: number, decimals: 0 | 1 | 2 | 3, layout: PageLayout, palette: Palette): void {
  context.strokeStyle = palette.inkFaint;
  context.globalAlpha = 0.5;
  context.lineWidth = 1;
  context.beginPath();
  context.moveTo(Math.round(x) + 0.5, layout.strings.top);
  context.lineTo(Math.round(x) + 0.5, layout.times.top);
  context.stroke();
  context.globalAlpha = 1;
  label(context, clock(atS, decimals), x, layout, palette);
}

function label(context: CanvasRenderingContext2D, text: string, x: number, layout: PageLayout, palette: Palette): void {
  context.font = font(11, 600);
  const width = context.measureText(text).width + 8;
  const left = Math.max(layout.left, Math.min(layout.left + layout.across - width, x - width / 2));
  context.fillStyle = palette.paper;
  context.fillRect(left, layout.times.top + 1, width, 18);
  context.fillStyle = palette.inkSoft;
  context.textAlign = 'center';
  context.textBaseline = 'middle';
  context.fillText(text, left + width / 2, layout.times.top + 11);
}

/** Cable numbers with the tension at the line; a cable in trouble says so by word and tone. */
export function drawTensionValues(context: CanvasRenderingContext2D, moment: Moment, tensions: readonly number[], limits: TensionLimits, layout: PageLayout, palette: Palette): void {
  context.textBaseline = 'middle';
  tensions.forEach((channel, i) => {
    const y = stringMiddle(layout, i + 1) + 0.5;
    const value = moment.values[channel] ?? Number.NaN;
    const state = moment.known === 'loading' || moment.known === 'outside' ? 'taut' : stateOf(value, value, limits, 'taut');
    context.textAlign = 'right';
    context.font = font(12, 800);
    context.fillStyle = palette.ink;
    context.fillText(String(i + 1), layout.narrow ? 16 : 46, y);
    const tone = state === 'slack' ? palette.slackText : state === 'saturated' ? palette.saturatedText : state === 'near' ? palette.nearText : palette.inkFaint;
    context.fillStyle = tone;
    context.font = font(12, state === 'taut' ? 500 : 700);
    const right = layout.left - 12;
    if (moment.known === 'loading') context.fillText('…', right, y);
    else if (Number.isNaN(value)) context.fillText('–', right, y);
    else context.fillText(layout.narrow ? value.toFixed(1) : `${value.toFixed(1)} N`, right, y);
    if (!layout.narrow && (state === 'slack' || state === 'saturated')) {
      context.font = font(10, 700);
      context.textAlign = 'left';
      context.fillText(state === 'slack' ? 'slack' : 'limit', 8, y);
    }
  });
}

export function drawRibbonValues(context: CanvasRenderingContext2D, ribbons: readonly Ribbon[], values: readonly number[], layout: PageLayout, palette: Palette): void {
  context.textBaseline = 'middle';
  ribbons.forEach((ribbon, i) => {
    const lane = layout.ribbons[i];
    if (!lane) return;
    const value = values[i] ?? Number.NaN;
    const text = Number.isFinite(value) ? `${(value * ribbon.scale).toFixed(ribbon.decimals)}${ribbon.unit === '°' ? '' : ' '}${ribbon.unit}` : '–';
    context.textAlign = 'right';
    context.font = font(11, 500);
    context.fillStyle = palette.inkFaint;
    context.fillText(layout.narrow ? ribbon.title.replace(/^hand /, '').replace(/ opening$/, '') : ribbon.title, layout.left - 12, lane.top + lane.height / 2 - 5);
    context.font = font(11, 700);
    context.fillStyle = palette.ink;
    context.fillText(text, layout.left - 12, lane.top + lane.height / 2 + 8);
  });
}
