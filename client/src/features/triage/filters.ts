/** Which moments the list shows, and in which order; kept in the address, so that a list can be sent to somebody. */
import type { Moment } from '@shared/api/review';
import { flagKind } from '@shared/api/sessions';
import { FLAG_WORDS } from '../../lib/words';

export const stateOfMoment = (moment: Pick<Moment, 'verdict'>): 'open' | 'confirmed' | 'dismissed' | 'unsure' => {
  const value = moment.verdict?.value;
  return value === undefined || value === 'withdrawn' ? 'open' : value;
};

export const STATE_WORDS = { open: 'to judge', confirmed: 'confirmed', dismissed: 'dismissed', unsure: 'unsure' } as const;

export interface Choice {
  readonly value: string;
  readonly label: string;
}

/** One line of choices each: its name in the address, its word, what a moment has there. */
interface Filter {
  readonly name: string;
  readonly word: string;
  readonly of: (moment: Moment) => string;
  readonly label: (moment: Moment) => string;
}

const visitOf = (moment: Moment) => `${moment.participantCode}, visit ${moment.visit}`;

export const filters: readonly Filter[] = [
  { name: 'kind', word: 'kind', of: ({ kind }) => kind, label: ({ kind }) => FLAG_WORDS[kind].toLowerCase() },
  { name: 'cable', word: 'cable', of: ({ cable }) => String(cable ?? ''), label: ({ cable }) => (cable === null ? 'none' : String(cable)) },
  { name: 'state', word: 'state', of: stateOfMoment, label: (moment) => STATE_WORDS[stateOfMoment(moment)] },
  { name: 'condition', word: 'condition', of: ({ condition }) => condition.blindCode, label: ({ condition }) => condition.label ?? condition.blindCode },
  { name: 'session', word: 'session', of: ({ sessionId }) => sessionId, label: visitOf },
];

export const orders = { oldest: 'oldest first', newest: 'newest first', longest: 'longest first', kind: 'by kind' } as const;
export type Order = keyof typeof orders;

export const orderOf = (query: URLSearchParams): Order => {
  const wanted = query.get('order');
  return wanted !== null && wanted in orders ? (wanted as Order) : 'oldest';
};

/** The choices that the study's moments offer, each once, in a sensible order. */
export function choicesOf(filter: Filter, moments: readonly Moment[]): Choice[] {
  if (filter.name === 'state') return Object.entries(STATE_WORDS).map(([value, label]) => ({ value, label }));
  const found = new Map(moments.map((moment) => [filter.of(moment), filter.label(moment)]));
  return [...found].map(([value, label]) => ({ value, label })).sort((a, b) => a.label.localeCompare(b.label, 'en', { numeric: true }));
}

const rankOfKind = (moment: Moment) => flagKind.options.indexOf(moment.kind);

/** @param kept ids that stay in the list though they no longer fit: those judged while it was open */
export function shownMoments(moments: readonly Moment[], query: URLSearchParams, kept: ReadonlySet<string>): Moment[] {
  const wanted = filters.map((filter) => ({ filter, value: query.get(filter.name) })).filter(({ value }) => value !== null);
  const fitting = moments.filter((moment) => kept.has(moment.id) || wanted.every(({ filter, value }) => filter.of(moment) === value));
  switch (orderOf(query)) {
    case 'newest': return fitting.reverse();
    case 'longest': return fitting.sort((a, b) => b.endS - b.startS - (a.endS - a.startS));
    case 'kind': return fitting.sort((a, b) => rankOfKind(a) - rankOfKind(b));
    case 'oldest': return fitting;
  }
}
