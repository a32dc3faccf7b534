/** The foot of the list: what can be done with the moment at hand, each with its key. */
import type { Ref } from 'react';
import type { VerdictValue } from '@shared/api/verdict';
import { KeyCap } from '../../ui/KeyCap';
import { ProblemNote } from '../../ui/ProblemNote';

const VERDICTS: readonly { value: VerdictValue; key: string; word: string }[] = [
  { value: 'confirmed', key: 'Y', word: 'confirm' },
  { value: 'dismissed', key: 'X', word: 'dismiss' },
  { value: 'unsure', key: 'U', word: 'unsure' },
];

interface JudgeBarProps {
  readonly mayJudge: boolean;
  readonly empty: boolean;
  /** How many are marked; 0: the verdict goes to the moment at hand. */
  readonly marked: number;
  readonly undoable: boolean;
  readonly reason: string;
  readonly onReason: (reason: string) => void;
  readonly reasonField: Ref<HTMLInputElement>;
  readonly onReasonDone: () => void;
  readonly onJudge: (value: VerdictValue) => void;
  readonly onOpen: () => void;
  readonly onTakeBack: () => void;
  readonly onUnmark: () => void;
  readonly error: unknown;
}

const BUTTON = 'inline-flex items-center gap-2 min-h-8 text-small hover:underline underline-offset-4 disabled:opacity-55 disabled:no-underline';

export function JudgeBar(props: JudgeBarProps) {
  const { mayJudge, empty, marked } = props;
  return (
    <section aria-label="Judge" className="border-t border-rule-strong bg-paper px-6 max-sm:px-4 py-2">
      <ProblemNote error={props.error} className="mb-2" />
      <div className="flex flex-wrap items-center gap-x-6 gap-y-1">
        {mayJudge ? (
          <>
            {VERDICTS.map(({ value, key, word }) => (
              <button key={value} type="button" disabled={empty} onClick={() => props.onJudge(value)} className={BUTTON}><KeyCap>{key}</KeyCap>{word}{marked > 1 ? ` ${marked}` : ''}</button>
            ))}
            <label className="inline-flex items-center gap-2 text-small flex-1 min-w-48 max-w-96">
              <KeyCap>R</KeyCap><span className="sr-only">Reason, goes with the next verdict</span>
              <input
                ref={props.reasonField}
                value={props.reason}
                maxLength={400}
                placeholder="reason for the next verdict"
                onChange={(event) => props.onReason(event.target.value)}
                onKeyDown={(event) => {
                  if (event.key === 'Enter' || event.key === 'Escape') {
                    event.preventDefault();
                    props.onReasonDone();
                  }
                }}
                className="w-full bg-sheet border-0 border-b border-rule-field px-2 h-8 placeholder:text-faint"
              />
            </label>
          </>
        ) : <p className="text-small text-soft">Leads of the study judge its moments.</p>}
        {marked > 0 ? <button type="button" onClick={props.onUnmark} className={BUTTON}>{marked} marked, let go</button> : null}
        <span className="ml-auto flex flex-wrap gap-x-6">
          <button type="button" disabled={empty} onClick={props.onOpen} className={BUTTON}><KeyCap>O</KeyCap>open the trial here</button>
          {mayJudge ? <button type="button" disabled={!props.undoable} onClick={props.onTakeBack} className={BUTTON}><KeyCap>Z</KeyCap>take back</button> : null}
        </span>
      </div>
    </section>
  );
}
