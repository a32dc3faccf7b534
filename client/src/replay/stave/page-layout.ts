/**
 * Where everything stands on the stave's page, top to bottom: flags, strings, notes, ribbons, time, overview. CSS px.
 * One function of the width and what there is to show, so that drawing and pointing agree.
 */
import { lengthOf, type Span } from '../span';

export interface PageInput {
  readonly width: number;
  readonly cables: number;
  readonly ribbons: number;
  /** Room that the page may take; strings and ribbons give way down to their least height. */
  readonly height: number;
  readonly notes: boolean;
  /** The strip of the whole recording at the foot. */
  readonly overview: boolean;
}

export interface Lane {
  readonly top: number;
  readonly height: number;
}

export interface PageLayout {
  readonly width: number;
  readonly height: number;
  /** Left edge and width of what runs over time; cable numbers and values stand left of it. */
  readonly left: number;
  readonly across: number;
  readonly narrow: boolean;
  readonly marks: Lane & { readonly lines: number; readonly lineHeight: number };
  readonly strings: Lane & { readonly row: number };
  readonly slips: Lane & { readonly lines: number; readonly lineHeight: number };
  readonly ribbons: readonly Lane[];
  readonly times: Lane;
  readonly overview: Lane;
}

const ROW = { least: 15, most: 26 };
const RIBBON = { least: 24, most: 34 };

export function layOutPage({ width, cables, ribbons, height, notes, overview: hasOverview }: PageInput): PageLayout {
  const narrow = width < 560;
  const left = narrow ? 66 : 104;
  const right = narrow ? 12 : 24;
  const marks = { top: 6, lines: 2, lineHeight: 15, height: 34 };
  const slipLine = 19;
  const slipLines = notes ? (narrow ? 1 : 2) : 0;
  const slips = { lines: slipLines, lineHeight: slipLine, height: notes ? 10 + slipLines * slipLine : 4 };
  const fixed = marks.top + marks.height + 6 + slips.height + 6 + 20 + (hasOverview ? 30 : 6);
  // Strings first, ribbons with what is left.
  const rowsWanted = cables * ROW.most + ribbons * RIBBON.most;
  const share = Math.min(1, Math.max(0, (height - fixed - cables * ROW.least - ribbons * RIBBON.least) / Math.max(1, rowsWanted - cables * ROW.least - ribbons * RIBBON.least)));
  const row = Math.round(ROW.least + share * (ROW.most - ROW.least));
  const ribbonHeight = Math.round(RIBBON.least + share * (RIBBON.most - RIBBON.least));
  const strings = { top: marks.top + marks.height + 2, height: cables * row, row };
  const slipsTop = strings.top + strings.height + 4;
  const ribbonsTop = slipsTop + slips.height + 6;
  const lanes = Array.from({ length: ribbons }, (_, i) => ({ top: ribbonsTop + i * ribbonHeight, height: ribbonHeight }));
  const timesTop = ribbonsTop + ribbons * ribbonHeight;
  const overview = { top: timesTop + 20, height: hasOverview ? 24 : 0 };
  return {
    width,
    height: overview.top + overview.height + 6,
    left,
    across: Math.max(1, width - left - right),
    narrow,
    marks,
    strings,
    slips: { ...slips, top: slipsTop },
    ribbons: lanes,
    times: { top: timesTop, height: 20 },
    overview,
  };
}

export const xOf = (layout: PageLayout, view: Span, atS: number): number => layout.left + ((atS - view.fromS) / lengthOf(view)) * layout.across;

export const timeAt = (layout: PageLayout, view: Span, x: number): number => view.fromS + ((x - layout.left) / layout.across) * lengthOf(view);

export const stringMiddle = (layout: PageLayout, cable: number): number => layout.strings.top + (cable - 0.5) * layout.strings.row;

/** What a pointer is over. */
export type Zone = 'marks' | 'strings' | 'slips' | 'ribbons' | 'times' | 'overview' | 'gutter';

export function zoneAt(layout: PageLayout, x: number, y: number): Zone {
  if (y >= layout.overview.top) return 'overview';
  if (x < layout.left) return 'gutter';
  if (y < layout.strings.top) return 'marks';
  if (y < layout.strings.top + layout.strings.height) return 'strings';
  if (y < layout.slips.top + layout.slips.height) return 'slips';
  return y < layout.times.top ? 'ribbons' : 'times';
}
