import type { Flag } from '@shared/api/sessions';
import { clock } from '../../lib/format';
import { FlagMark } from '../../replay/FlagMark';
import { classNames } from '../../ui/class-names';
import { flagDetail, flagHead, flagTone } from './flag-words';
import { MarginEntry } from './MarginEntry';

interface FlagEntryProps {
  readonly flag: Flag;
  readonly here: boolean;
  readonly onGo: () => void;
  readonly onLight: (on: boolean) => void;
  readonly onNote: (() => void) | null;
}

/** A flag in the margin: what the rules found, and where. */
export function FlagEntry({ flag, here, onGo, onLight, onNote }: FlagEntryProps) {
  return (
    <MarginEntry
      id={`flag-${flag.id}`}
      place={clock(flag.startS, 1)}
      here={here}
      onGo={onGo}
      onLight={onLight}
      state={onNote ? <button type="button" onClick={onNote} className="text-soft hover:text-ink underline decoration-rule-field decoration-1 underline-offset-4">note<span className="sr-only"> on this flag</span></button> : null}
    >
      <p>
        <FlagMark kind={flag.kind} className="inline-block mr-2 align-[-2px]" />
        <b className={classNames(flagTone[flag.kind])}>{flagHead(flag)}</b> <span className="text-soft">{flagDetail(flag)}</span>
      </p>
    </MarginEntry>
  );
}
