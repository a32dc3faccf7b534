/** The reader's place in the address bar: `?at=11.600&from=11.591&to=12.057`, so that a link opens the very moment. */
import type { Span } from '../../replay/span';

export interface Place {
  readonly atS: number | null;
  readonly span: Span | null;
  /** What the link asked for that the recording does not have, in a sentence. */
  readonly complaint: 'outside' | 'unreadable' | null;
}

const number = (text: string | null): number | null => {
  if (text === null || text.trim() === '') return null;
  const value = Number(text);
  return Number.isFinite(value) ? value : Number.NaN;
};

/** @param extent of the recording: what lies outside is brought to its edge and said */
export function readPlace(search: string, extent: Span): Place {
  const query = new URLSearchParams(search);
  const [at, from, to] = [number(query.get('at')), number(query.get('from')), number(query.get('to'))];
  const unreadable = [at, from, to].some((value) => value !== null && Number.isNaN(value));
  const clamp = (value: number) => Math.min(extent.toS, Math.max(extent.fromS, value));
  const outside = [at, from, to].some((value) => value !== null && (value < extent.fromS - 5e-4 || value > extent.toS + 5e-4));
  const span = from !== null && to !== null && clamp(to) > clamp(from) ? { fromS: clamp(from), toS: clamp(to) } : null;
  const atS = at !== null && Number.isFinite(at) ? clamp(at) : (span?.fromS ?? null);
  return { atS, span, complaint: unreadable ? 'unreadable' : outside ? 'outside' : null };
}

/** Other parts of the address stay as they are. */
export function writePlace(search: string, atS: number, span: Span | null): string {
  const query = new URLSearchParams(search);
  query.set('at', atS.toFixed(3));
  if (span) {
    query.set('from', span.fromS.toFixed(3));
    query.set('to', span.toS.toFixed(3));
  } else {
    query.delete('from');
    query.delete('to');
  }
  return `?${query.toString()}`;
}

/** What is in sight when a link opens on a span: the span with room around it. */
export function viewAround(span: Span, extent: Span): Span {
  const room = Math.max((span.toS - span.fromS) * 1.5, 0.25);
  return { fromS: Math.max(extent.fromS, span.fromS - room), toS: Math.min(extent.toS, span.toS + room) };
}
