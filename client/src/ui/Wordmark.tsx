/** A taut string over a sagging, broken one: the two states that the book is about. */
export function Mark({ className }: { className?: string }) {
  return (
    <svg viewBox="0 0 30 18" width="30" height="18" aria-hidden className={className}>
      <path d="M1 3.5h28" fill="none" stroke="var(--ink)" strokeWidth="2.4" />
      <path d="M1 10c4.5 7.5 23.5 7.5 28 0" fill="none" stroke="var(--slack)" strokeWidth="1.8" strokeDasharray="2.8 1.9" />
    </svg>
  );
}

export function Wordmark() {
  return (
    <span className="flex items-center gap-2.5">
      <Mark />
      <span className="text-lead font-extrabold tracking-tight">tautbook</span>
    </span>
  );
}
