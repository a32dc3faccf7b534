import { asProblem } from '../lib/api-problem';
import { Button } from './Button';
import { classNames } from './class-names';

interface ProblemNoteProps {
  /** Anything thrown; nothing shows for null and undefined. */
  error: unknown;
  /** Offered as a button when trying again can help. */
  onRetry?: () => void;
  className?: string;
}

/** What went wrong, in a sentence, with the way out and every fault by its place. Read out when it appears. */
export function ProblemNote({ error, onRetry, className }: ProblemNoteProps) {
  if (error === null || error === undefined) return null;
  const problem = asProblem(error);
  return (
    <div role="alert" className={classNames('border-l-4 border-attention pl-3 py-0.5 text-body max-w-[42rem]', className)}>
      <p className="font-semibold">{problem.detail}</p>
      {problem.wayOut ? <p className="text-small text-soft">{problem.wayOut}</p> : null}
      {problem.faults.length > 0 ? <FaultList faults={problem.faults} /> : null}
      {problem.requestId && problem.status >= 500 ? <p className="text-small text-faint">Request {problem.requestId}</p> : null}
      {onRetry ? <Button tone="quiet" className="mt-1" onClick={onRetry}>Try again</Button> : null}
    </div>
  );
}

/** Faults of an input by their place in it. */
function FaultList({ faults }: { faults: readonly { code: string; path: string; message: string }[] }) {
  return (
    <ol className="mt-2 border-t border-rule" aria-label="Faults by place">
      {faults.map((fault, index) => (
        <li key={`${fault.path} ${fault.code} ${index}`} className="border-b border-rule py-1.5 grid sm:grid-cols-[minmax(8rem,14rem)_1fr] gap-x-4 text-small">
          <span className="font-semibold break-all">{fault.path === '' ? 'the whole' : fault.path}</span>
          <span>{fault.message}</span>
        </li>
      ))}
    </ol>
  );
}
