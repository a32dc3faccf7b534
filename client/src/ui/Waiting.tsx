import { classNames } from './class-names';

/** Empty ruled lines where rows will stand, so that nothing jumps when they come. */
export function WaitingLines({ lines = 4, className }: { lines?: number; className?: string }) {
  return (
    <div role="status" className={classNames('border-t border-rule-strong', className)}>
      <span className="sr-only">Loading</span>
      {Array.from({ length: lines }, (_, index) => (
        <div key={index} aria-hidden className="h-13 border-b border-rule flex items-center">
          <span className="waiting-line h-2.5" style={{ width: `${36 - ((index * 7) % 20)}%` }} />
        </div>
      ))}
    </div>
  );
}
