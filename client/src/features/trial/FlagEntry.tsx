import type { JudgedFlag } from '@shared/api/sessions';
import { clock } from '../../lib/format';
import { FlagMark } from '../../replay/FlagMark';
import { classNames } from '../../ui/class-names';
import { flagDetail, flagHead, flagTone } from './flag-words';
import { MarginEntry } from './MarginEntry';

interface FlagEntryProps {
  readonly flag: JudgedFlag;
  readonly here: boolean;
  readonly onGo: () => void;
  readonly onLight: (on: boolean) => void;
  readonly onNote: (() => void) | null;
  readonly onJudge: (() => void) | null;
}

const WORD = 'text-soft hover:text-ink underline decoration-rule-field decoration-1 underline-offset-4';

/** A flag in the margin: what the rules found, and where. */
export function FlagEntry({ flag, here, onGo, onLight, onNote, onJudge }: FlagEntryProps) {
  return (
    <MarginEntry
      id={`flag-${flag.id}`}
      place={clock(flag.startS, 1)}
      here={here}
      onGo={onGo}
      onLight={onLight}
      state={(
        <span className="flex gap-x-3">
          {flag.verdict ? <span className={flag.verdict.value === 'confirmed' ? 'text-confirmed-text font-semibold' : 'font-semibold'}>{flag.verdict.value}</span> : null}
          {onJudge ? <button type="button" onClick={onJudge} className={WORD}>judge<span className="sr-only"> this flag</span></button> : null}
          {onNote ? <button type="button" onClick={onNote} className={WORD}>note<span className="sr-only"> on this flag</span></button> : null}
        </span>
      )}
    >
      <p>
        <FlagMark kind={flag.kind} className="inline-block mr-2 align-[-2px]" />
        <b className={classNames(flagTone[flag.kind])}>{flagHead(flag)}</b> <span className="text-soft">{flagDetail(flag)}</span>
      </p>
    </MarginEntry>
  );
}
