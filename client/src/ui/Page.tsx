import { useEffect, useRef, type ReactNode } from 'react';
import { classNames } from './class-names';
import { pageTurns } from './page-turns';

const SPREAD = 'md:grid md:grid-cols-[8.5rem_minmax(0,1fr)] md:gap-x-9';

interface PageProps {
  title: string;
  /** The title as it is set on the page, where parts of it must not break; the same words. */
  heading?: ReactNode;
  /** What the browser's tab says, when the heading alone would not tell pages apart. */
  tab?: string;
  /** One line under the title. */
  lead?: ReactNode;
  /** What stands in the margin beside the title. */
  margin?: ReactNode;
  actions?: ReactNode;
  children: ReactNode;
}

/** A page of the book: a wide left margin behind a double rule, the heading, then sections. */
export function Page({ title, heading, tab, lead, margin, actions, children }: PageProps) {
  return (
    <article className="page-sheet relative flex-1 w-full max-w-[88rem] px-5 md:px-6 pb-16">
      <title>{`${tab ?? title} · Tautbook`}</title>
      <div aria-hidden className="margin-rule no-print absolute inset-y-0 left-1.5 md:left-[10.9rem]" />
      <header className={classNames(SPREAD, 'pt-8')}>
        <MarginNote className="md:pt-2">{margin}</MarginNote>
        <div className="flex flex-wrap items-start justify-between gap-x-8 gap-y-3">
          <div className="min-w-0">
            <PageTitle>{heading ?? title}</PageTitle>
            {lead ? <div className="text-soft text-small mt-1">{lead}</div> : null}
          </div>
          {actions ? <div className="no-print flex flex-wrap gap-3">{actions}</div> : null}
        </div>
      </header>
      {children}
    </article>
  );
}

/** The heading takes the focus when a page was turned to, so that a screen reader starts there. */
export function PageTitle({ children }: { children: ReactNode }) {
  const heading = useRef<HTMLHeadingElement>(null);
  useEffect(() => {
    if (pageTurns.take()) heading.current?.focus({ preventScroll: true });
  }, []);
  return <h1 ref={heading} tabIndex={-1}>{children}</h1>;
}

interface SectionProps {
  title?: string;
  /** In the margin beside it: how to read it, or how much of it there is. */
  note?: ReactNode;
  actions?: ReactNode;
  children: ReactNode;
  id?: string;
  className?: string;
  /** For few columns: the eye should not have to cross the whole page. */
  narrow?: boolean;
}

export function Section({ title, note, actions, children, id, className, narrow = false }: SectionProps) {
  return (
    <section id={id} className={classNames(SPREAD, 'mt-9 scroll-mt-6', className)}>
      <MarginNote className="md:pt-1">{note}</MarginNote>
      <div className={classNames('min-w-0', narrow && 'max-w-[54rem]')}>
        {title || actions ? (
          <div className="flex flex-wrap items-baseline justify-between gap-x-6 gap-y-1 mb-2">
            {title ? <h2>{title}</h2> : null}
            {actions ? <div className="no-print flex flex-wrap gap-x-5 gap-y-1">{actions}</div> : null}
          </div>
        ) : null}
        {children}
      </div>
    </section>
  );
}

function MarginNote({ children, className }: { children: ReactNode; className?: string }) {
  if (children === undefined || children === null || children === false) return <div aria-hidden className="max-md:hidden" />;
  return <div className={classNames('text-small text-soft md:text-right max-md:mb-1', className)}>{children}</div>;
}
