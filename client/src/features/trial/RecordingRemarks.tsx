/** What a reader must know of this recording before reading it: growing, gaps, no cables, a link that missed, trouble. */
import { useSyncExternalStore } from 'react';
import { Link } from 'react-router-dom';
import type { RecordingMeta, Trial } from '@shared/api/sessions';
import { clock, count, counted } from '../../lib/format';
import type { Source } from '../../replay/source';
import { Button } from '../../ui/Button';
import type { Place } from './place-in-address';

interface RecordingRemarksProps {
  readonly trial: Trial;
  readonly recording: RecordingMeta;
  readonly source: Source;
  readonly complaint: Place['complaint'];
  readonly gaps: number;
}

/** True once the overview is known and holds no tension at all. */
export function noCableMeasured(source: Source): boolean {
  const overview = source.overview();
  if (!overview || overview.count === 0) return false;
  return source.channels.tensions.every((channel) => {
    for (let i = 0; i < overview.count; i += 1) if (!Number.isNaN(overview.max[channel * overview.count + i])) return false;
    return true;
  });
}

export function RecordingRemarks({ trial, recording, source, complaint, gaps }: RecordingRemarksProps) {
  const trouble = useSyncExternalStore(source.onChange, source.trouble);
  const noCables = useSyncExternalStore(source.onChange, () => noCableMeasured(source));
  const remarks = [
    recording.state === 'growing' ? <>This recording still grows. {trial.may.run ? <Link className="link" to={`/sessions/${trial.session.id}/run`}>Watch it live</Link> : null}</> : null,
    complaint === 'outside' ? <>The link points outside this recording, which runs from 0:00.000 to {clock(recording.durationS, 3)}; you are at its nearest moment.</> : null,
    complaint === 'unreadable' ? <>The moment in the link could not be read; you are at the start.</> : null,
    recording.samples < 20 ? <>Only {counted(recording.samples, 'sample')} {recording.samples === 1 ? 'was' : 'were'} recorded.</> : null,
    noCables ? <>No cable was measured in this recording; pose and grasp are shown as far as they were.</> : null,
    gaps > 0 ? <>{counted(gaps, 'gap')}: {count(recording.gaps.reduce((sum, gap) => sum + gap.missing, 0))} samples are missing and hatched.</> : null,
    trial.outcome !== null && trial.outcome !== 'completed' ? <>Outcome: <b>{trial.outcome}</b>{trial.outcomeReason ? `, ${trial.outcomeReason.replace(/[.!?]$/, '')}` : ''}.</> : null,
  ].filter((remark) => remark !== null);
  return (
    <div className="px-6 max-sm:px-5 text-small text-soft">
      {remarks.map((remark, i) => <p key={i}>{remark}</p>)}
      {trouble ? (
        <p role="alert" className="text-attention-text font-semibold">
          {trouble} A part of the stave may be blank. <Button tone="quiet" onClick={() => source.retry()}>Try again</Button>
        </p>
      ) : null}
    </div>
  );
}
