import type { Moment } from '@shared/api/review';
import { choicesOf, filters, orderOf, orders } from './filters';

interface FilterLineProps {
  readonly moments: readonly Moment[];
  readonly query: URLSearchParams;
  readonly onChange: (changes: Readonly<Record<string, string | null>>) => void;
}

/** Filters as words in a line, each a choice. */
export function FilterLine({ moments, query, onChange }: FilterLineProps) {
  const any = filters.some(({ name }) => query.has(name));
  return (
    <div role="group" aria-label="Which moments" className="flex flex-wrap items-center gap-x-6 gap-y-1 border-y border-rule py-1.5 text-small">
      {filters.map((filter) => (
        <label key={filter.name} className="text-soft">
          {filter.word}{' '}
          <select aria-label={filter.word} value={query.get(filter.name) ?? ''} onChange={(event) => onChange({ [filter.name]: event.target.value === '' ? null : event.target.value })} className="bg-transparent text-ink font-semibold max-w-44 min-h-7">
            <option value="">any</option>
            {choicesOf(filter, moments).map(({ value, label }) => <option key={value} value={value}>{label}</option>)}
          </select>
        </label>
      ))}
      {any ? <button type="button" onClick={() => onChange(Object.fromEntries(filters.map(({ name }) => [name, null])))} className="underline decoration-rule-field underline-offset-4">show all</button> : null}
      <label className="ml-auto text-soft">
        <span className="sr-only">order</span>
        <select aria-label="order" value={orderOf(query)} onChange={(event) => onChange({ order: event.target.value === 'oldest' ? null : event.target.value })} className="bg-transparent min-h-7">
          {Object.entries(orders).map(([value, label]) => <option key={value} value={value}>{label}</option>)}
        </select>
      </label>
    </div>
  );
}
