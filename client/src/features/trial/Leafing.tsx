import { Link } from 'react-router-dom';
import type { Trial } from '@shared/api/sessions';

/** To the trials before and after in the session. */
export function Leafing({ trial }: { trial: Trial }) {
  if (trial.previous === null && trial.next === null) return null;
  return (
    <nav aria-label="Trials of this session" className="flex gap-x-4 text-small whitespace-nowrap">
      {trial.previous ? <Link to={`/trials/${trial.previous}`} className="text-soft hover:text-ink">before</Link> : null}
      {trial.next ? <Link to={`/trials/${trial.next}`} className="text-soft hover:text-ink">next</Link> : null}
    </nav>
  );
}
