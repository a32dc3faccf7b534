const UUID = /^[0-9a-f]{8}-[0-9a-f]{4}-/;

interface DetailsProps {
  detail: Readonly<Record<string, unknown>>;
  /** Names that say again what stands beside. */
  omit?: readonly string[];
}

/** Details of an entry as "name value" pairs, in the order they were written; ids are shortened to what tells them apart. */
export function Details({ detail, omit = [] }: DetailsProps) {
  const pairs = Object.entries(detail).filter(([name, value]) => value !== null && value !== undefined && value !== '' && !omit.includes(name));
  if (pairs.length === 0) return null;
  return (
    <dl className="flex flex-wrap gap-x-4 text-small text-soft">
      {pairs.map(([name, value]) => {
        const text = typeof value === 'object' ? JSON.stringify(value) : String(value);
        const isId = UUID.test(text);
        return (
          <div key={name} className="flex gap-x-1.5 min-w-0">
            <dt>{words(name)}</dt>
            <dd className="text-ink break-words min-w-0" title={isId ? text : undefined}>{isId ? `…${text.slice(-6)}` : text}</dd>
          </div>
        );
      })}
    </dl>
  );
}

/** startUncertaintyUs -> start uncertainty us */
const words = (name: string): string => name.replace(/([a-z])([A-Z])/g, '$1 $2').toLowerCase().replace(/ id$/, '');
