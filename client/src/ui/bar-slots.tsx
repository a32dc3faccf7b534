/** Places in the top bar that a page fills: crumbs instead of the chapters, and who is here at the end. */
import { createContext, use, useState, type ReactNode } from 'react';
import { createPortal } from 'react-dom';
import { Link } from 'react-router-dom';

const Places = createContext<{ crumbs: HTMLElement | null; end: HTMLElement | null }>({ crumbs: null, end: null });

interface SlotRefs {
  crumbs: (element: HTMLElement | null) => void;
  end: (element: HTMLElement | null) => void;
}

export function BarSlots({ children }: { children: (slots: SlotRefs) => ReactNode }) {
  const [crumbs, setCrumbs] = useState<HTMLElement | null>(null);
  const [end, setEnd] = useState<HTMLElement | null>(null);
  return <Places value={{ crumbs, end }}>{children({ crumbs: setCrumbs, end: setEnd })}</Places>;
}

/** The way back from a page deep in the book: each step a link, the last one where the reader is. */
export function Crumbs({ steps, here }: { steps: readonly { to: string; name: string }[]; here: string }) {
  const { crumbs } = use(Places);
  if (crumbs === null) return null;
  return createPortal(
    <nav aria-label="Where you are" className="text-small">
      <ol className="flex flex-wrap gap-x-2">
        {steps.map((step) => (
          <li key={step.to} className="text-soft">
            <Link to={step.to} className="hover:text-ink hover:underline underline-offset-4">{step.name}</Link>
            <span aria-hidden className="ml-2">/</span>
          </li>
        ))}
        <li aria-current="page" className="font-bold">{here}</li>
      </ol>
    </nav>,
    crumbs,
  );
}

/** What a page shows at the end of the bar, for example who reads along. */
export function BarEnd({ children }: { children: ReactNode }) {
  const { end } = use(Places);
  return end === null ? null : createPortal(children, end);
}
