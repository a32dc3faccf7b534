/** The right page of the spread: flags and notes in the order of time. */
import { Tabs } from 'radix-ui';
import { useState } from 'react';
import type { TrialId } from '@shared/api/common';
import type { Note } from '@shared/api/notes';
import type { JudgedFlag } from '@shared/api/sessions';
import { Button } from '../../ui/Button';
import { ProblemNote } from '../../ui/ProblemNote';
import { WaitingLines } from '../../ui/Waiting';
import { FlagEntry } from './FlagEntry';
import { NoteEntry } from './NoteEntry';

export type MarginTab = 'margin' | 'flags' | 'notes';

interface MarginProps {
  readonly trialId: TrialId;
  readonly flags: readonly JudgedFlag[];
  readonly flagState: 'growing' | 'pending' | 'found' | 'loading';
  readonly notes: readonly Note[] | null;
  readonly error: unknown;
  readonly onRetry: () => void;
  readonly mayNote: boolean;
  readonly myId: string;
  /** Entries that the reading line stands in. */
  readonly hereIds: ReadonlySet<string>;
  readonly onGo: (startS: number, endS: number | null, id: string) => void;
  readonly onLight: (id: string | null) => void;
  readonly onWrite: () => void;
  readonly onNoteFlag: (flag: JudgedFlag) => void;
  /** Null where the reader may not judge. */
  readonly onJudgeFlag: ((flag: JudgedFlag) => void) | null;
  readonly writing: React.ReactNode;
}

const TAB = 'py-3 text-small text-soft hover:text-ink data-[state=active]:text-ink data-[state=active]:font-bold border-b-2 border-transparent data-[state=active]:border-ink -mb-px';

export function Margin(props: MarginProps) {
  const [tab, setTab] = useState<MarginTab>('margin');
  const { flags, notes } = props;
  return (
    <Tabs.Root value={tab} onValueChange={(value) => setTab(value as MarginTab)} className="flex flex-col min-h-0 h-full">
      <div className="flex items-baseline justify-between gap-4 border-b border-rule-strong pl-6 pr-6 max-sm:pl-5 max-sm:pr-5">
        <Tabs.List aria-label="What is in the margin" className="flex gap-x-6">
          <Tabs.Trigger value="margin" className={TAB}>Margin</Tabs.Trigger>
          <Tabs.Trigger value="flags" className={TAB}>Flags {flags.length}</Tabs.Trigger>
          <Tabs.Trigger value="notes" className={TAB}>Notes {notes?.length ?? 0}</Tabs.Trigger>
        </Tabs.List>
        {props.mayNote ? <button type="button" onClick={props.onWrite} className="text-small text-soft hover:text-ink py-2 whitespace-nowrap">Write a note <kbd aria-hidden className="font-sans">N</kbd></button> : null}
      </div>
      {(['margin', 'flags', 'notes'] as const).map((which) => (
        <Tabs.Content key={which} value={which} className="flex-1 min-h-0 overflow-auto outline-offset-[-2px]" data-testid={`margin-${which}`}>
          {which === tab ? <>{props.writing}<Entries {...props} which={which} /></> : null}
        </Tabs.Content>
      ))}
    </Tabs.Root>
  );
}

function Entries(props: MarginProps & { which: MarginTab }) {
  const { which, flags, notes, flagState } = props;
  const entries = [
    ...(which === 'notes' ? [] : flags.map((flag) => ({ atS: flag.startS, key: flag.id as string, flag, note: null }))),
    ...(which === 'flags' ? [] : (notes ?? []).map((note) => ({ atS: note.startS, key: note.id as string, flag: null, note }))),
  ].sort((a, b) => a.atS - b.atS);
  return (
    <>
      {props.error ? <div className="px-6 py-3"><ProblemNote error={props.error} onRetry={props.onRetry} /></div> : null}
      {which !== 'notes' && flagState === 'pending' ? <p role="status" className="px-6 py-2 text-small text-soft border-b border-rule">The recording is being looked through for flags; they appear here by themselves.</p> : null}
      {which !== 'notes' && flagState === 'growing' ? <p role="status" className="px-6 py-2 text-small text-soft border-b border-rule">The recording still grows; its flags are written down when it ends.</p> : null}
      {notes === null && !props.error ? <WaitingLines lines={5} /> : null}
      <ol>
        {entries.map(({ key, flag, note }) => (flag ? (
          <FlagEntry
            key={key}
            flag={flag}
            here={props.hereIds.has(key)}
            onGo={() => props.onGo(flag.startS, flag.endS, key)}
            onLight={(on) => props.onLight(on ? key : null)}
            onNote={props.mayNote ? () => props.onNoteFlag(flag) : null}
            onJudge={props.onJudgeFlag ? () => props.onJudgeFlag?.(flag) : null}
          />
        ) : (
          <NoteEntry
            key={key}
            note={note}
            trialId={props.trialId}
            mayNote={props.mayNote}
            myId={props.myId}
            here={props.hereIds.has(key)}
            onGo={() => props.onGo(note.startS, note.endS, key)}
            onLight={(on) => props.onLight(on ? key : null)}
          />
        )))}
      </ol>
      {entries.length === 0 && notes !== null && flagState === 'found' ? (
        <div className="px-6 py-5 text-soft">
          <p className="font-semibold text-ink">{which === 'flags' ? 'No flags' : which === 'notes' ? 'No notes yet' : 'Nothing in the margin yet'}</p>
          <p>{which === 'flags' ? 'The rules found no slack, saturation, gap, slip or oscillation here.' : 'Stop at a moment, or drag over a span with Shift held, and write down what you saw.'}</p>
          {which !== 'flags' && props.mayNote ? <Button tone="quiet" onClick={props.onWrite}>Write the first note</Button> : null}
        </div>
      ) : null}
    </>
  );
}
