import type { ReactNode } from 'react';

/** Facts as pairs of word and value on ruled lines. */
export function Facts({ children }: { children: ReactNode }) {
  return <dl className="border-t border-rule-strong">{children}</dl>;
}

export function Fact({ name, children }: { name: string; children: ReactNode }) {
  return (
    <div className="border-b border-rule py-2 grid sm:grid-cols-[12rem_1fr] gap-x-5">
      <dt className="text-small text-soft sm:pt-0.5">{name}</dt>
      <dd className="min-w-0">{children}</dd>
    </div>
  );
}
