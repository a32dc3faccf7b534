/** Details of an entry as "name value" pairs, in the order they were written. */
export function Details({ detail }: { detail: Readonly<Record<string, unknown>> }) {
  const pairs = Object.entries(detail).filter(([, value]) => value !== null && value !== undefined && value !== '');
  if (pairs.length === 0) return null;
  return (
    <dl className="flex flex-wrap gap-x-4 text-small text-soft">
      {pairs.map(([name, value]) => (
        <div key={name} className="flex gap-x-1.5 min-w-0">
          <dt>{words(name)}</dt>
          <dd className="text-ink break-words min-w-0">{typeof value === 'object' ? JSON.stringify(value) : String(value)}</dd>
        </div>
      ))}
    </dl>
  );
}

/** startUncertaintyUs -> start uncertainty us */
const words = (name: string): string => name.replace(/([a-z])([A-Z])/g, '$1 $2').toLowerCase();
