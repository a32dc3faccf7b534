import type { ReactNode } from 'react';

/** A blank page of the book: what would stand here, and what to do next. */
export function Empty({ title, children, action }: { title: string; children?: ReactNode; action?: ReactNode }) {
  return (
    <div className="border-y border-rule py-5 max-w-[46rem]">
      <p className="font-semibold">{title}</p>
      {children ? <div className="text-soft mt-0.5">{children}</div> : null}
      {action ? <div className="mt-3 flex flex-wrap gap-3">{action}</div> : null}
    </div>
  );
}
