import type { TrialSummary } from '@shared/api/sessions';
import { Button } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { ProblemNote } from '../../ui/ProblemNote';
import { StateWord } from '../../ui/StateWord';
import { useDisarm } from './queries';
import { useFocusOnce } from './use-focus-once';

/** The device may begin; it says when. */
export function ArmedTrial({ trial }: { trial: TrialSummary }) {
  const disarm = useDisarm(trial.id);
  const focus = useFocusOnce<HTMLButtonElement>();
  return (
    <div className="border-t border-rule pt-3">
      <p role="status"><StateWord tone="live">armed</StateWord> <span className="ml-2">{trial.deviceName ?? 'The device'} may begin; the recording starts with its first sample.</span></p>
      <ProblemNote className="mt-3" error={disarm.error} />
      <Actions>
        <Button ref={focus} busy={disarm.isPending} onClick={() => disarm.mutate()}>Take the arming back</Button>
      </Actions>
    </div>
  );
}
