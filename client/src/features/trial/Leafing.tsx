import { Link } from 'react-router-dom';
import { exportCsv } from '@shared/api/recordings';
import type { Trial } from '@shared/api/sessions';
import { addressOf } from '../../lib/api';

/** To the trials before and after in the session, and the recording as a file. */
export function Leafing({ trial }: { trial: Trial }) {
  return (
    <div className="flex gap-x-4">
      <nav aria-label="Trials of this session" className="flex gap-x-4 text-small whitespace-nowrap">
        {trial.previous ? <Link to={`/trials/${trial.previous}`} className="text-soft hover:text-ink">before</Link> : null}
        {trial.next ? <Link to={`/trials/${trial.next}`} className="text-soft hover:text-ink">next</Link> : null}
      </nav>
      {trial.may.export && trial.recording?.state === 'closed' ? <a href={addressOf(exportCsv, { params: { trialId: trial.id }, query: { gz: '1' } })} download className="text-small text-soft hover:text-ink">CSV<span className="sr-only"> of the recording, gzipped</span></a> : null}
    </div>
  );
}
