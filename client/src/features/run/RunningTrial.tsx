import { useEffect, useRef } from 'react';
import type { TrialSummary } from '@shared/api/sessions';
import { clock as clockText } from '../../lib/format';
import { FlagMark } from '../../replay/FlagMark';
import { Button } from '../../ui/Button';
import { Actions } from '../../ui/Dialog';
import { ProblemNote } from '../../ui/ProblemNote';
import { StateWord } from '../../ui/StateWord';
import { flagDetail, flagHead, flagTone } from '../trial';
import type { LiveFlag, LivePlayer, Mark } from './live-trial';
import { useStop } from './queries';
import { useFocusOnce } from './use-focus-once';

interface RunningTrialProps {
  readonly trial: TrialSummary;
  readonly flags: readonly LiveFlag[];
  readonly marks: readonly Mark[];
  readonly player: LivePlayer | null;
}

/** Newest first; older ones are a number, and are on the trial's page afterwards. */
const SHOWN = 7;

export function RunningTrial({ trial, flags, marks, player }: RunningTrialProps) {
  const stop = useStop(trial.id);
  const focus = useFocusOnce<HTMLButtonElement>();
  const away = trial.state === 'away';
  const moments = [
    ...flags.map((flag) => ({ key: flag.id, atS: flag.startS, flag, mark: null })),
    ...marks.map((mark, i) => ({ key: `mark ${i}`, atS: mark.atS, flag: null, mark })),
  ].sort((a, b) => b.atS - a.atS);
  return (
    <div className="border-t border-rule pt-3">
      <div className="flex flex-wrap items-baseline gap-x-4 gap-y-1">
        <StateWord tone={away ? 'attention' : 'live'}>{away ? 'device away' : 'recording'}</StateWord>
        <Elapsed player={player} limitS={trial.task.timeLimitS} />
      </div>
      <p role="status" className="text-small text-soft mt-1 min-h-5">
        {away ? `The link of ${trial.deviceName ?? 'the device'} is down. It keeps what it records and sends it when it is back; what came before is safe.` : stop.isSuccess ? 'The device was asked to stop.' : ''}
      </p>
      <ProblemNote className="mt-2" error={stop.error} />
      <Actions>
        <Button ref={focus} tone="main" busy={stop.isPending} disabled={stop.isSuccess && !away} onClick={() => stop.mutate()}>Stop the trial</Button>
      </Actions>
      <h3 className="mt-5 text-body font-bold">Found so far</h3>
      {moments.length === 0 ? <p className="text-small text-soft border-t border-rule mt-1 pt-2">Nothing yet. Slack and saturation appear here as they happen.</p> : (
        <ol className="border-t border-rule mt-1">
          {moments.slice(0, SHOWN).map(({ key, atS, flag, mark }) => (
            <li key={key} className="grid grid-cols-[3.5rem_1fr_auto] gap-x-3 border-b border-rule py-1.5">
              <span className="text-small text-soft pt-0.5">{clockText(atS, 1)}</span>
              {flag ? <span><FlagMark kind={flag.kind} className="inline-block mr-2 align-[-2px]" /><b className={flagTone[flag.kind]}>{flagHead(flag)}</b> <span className="text-soft">{flag.open ? '' : flagDetail(flag)}</span></span> : <span>{mark.label}</span>}
              <span className="text-small text-soft">{flag ? (flag.open ? 'now' : '') : 'mark'}</span>
            </li>
          ))}
        </ol>
      )}
      {moments.length > SHOWN ? <p className="text-small text-soft mt-1">and {moments.length - SHOWN} earlier</p> : null}
    </div>
  );
}

/** Time since the trial's start on the recording's own clock; written past React. */
function Elapsed({ player, limitS }: { player: LivePlayer | null; limitS: number | null }) {
  const text = useRef<HTMLSpanElement>(null);
  useEffect(() => {
    if (!player) return;
    const { source } = player;
    const write = () => {
      if (text.current && Number.isFinite(source.newestS)) text.current.textContent = clockText(source.newestS, 1);
    };
    write();
    return source.onChange(write);
  }, [player]);
  return <p><span ref={text} data-testid="elapsed" className="text-heading font-extrabold">0:00.0</span> <span className="text-small text-soft">{limitS === null ? 'since the start, recording’s clock' : `of ${clockText(limitS, 0)}, recording’s clock`}</span></p>;
}
