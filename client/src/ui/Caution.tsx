import type { ReactNode } from 'react';

/** Said wherever a reader could take a picture of the past for protection in the present. */
export function Caution({ children }: { children?: ReactNode }) {
  return (
    <p className="text-small text-soft max-w-[46rem] border-t border-rule pt-2">
      A research record, not a medical device and not a safety system. {children}
    </p>
  );
}
