/** Writes a note, a reply or a new version. What is typed is kept until the server has it. */
import { useEffect, useRef, useState } from 'react';
import { asProblem } from '../../lib/api-problem';
import { useMe } from '../../lib/me';
import { Button } from '../../ui/Button';
import { classNames } from '../../ui/class-names';
import { TextArea } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { dropDraft, keepDraft, readDraft, type Draft } from './drafts';

interface NoteFormProps {
  /** Names the draft: `new:<trial>`, `reply:<note>`, `edit:<note>`. */
  readonly draftPlace: string;
  readonly label: string;
  readonly send: (text: string, clientKey: string) => Promise<unknown>;
  readonly sendWord: string;
  readonly onDone: () => void;
  readonly onCancel: () => void;
  /** Stands there at first when no draft is kept: the text that is edited. */
  readonly firstText?: string;
  readonly children?: React.ReactNode;
}

export function NoteForm({ draftPlace: placeInPage, label, send, sendWord, onDone, onCancel, firstText = '', children }: NoteFormProps) {
  // A draft is its writer's: whoever signs in at this tab next begins with an empty page.
  const draftPlace = `${useMe().id}:${placeInPage}`;
  const [draft, setDraft] = useState<Draft>(() => {
    const kept = readDraft(draftPlace);
    return kept.text === '' ? { ...kept, text: firstText } : kept;
  });
  const [busy, setBusy] = useState(false);
  const [error, setError] = useState<unknown>(null);
  const [copied, setCopied] = useState(false);
  const field = useRef<HTMLTextAreaElement>(null);
  useEffect(() => field.current?.focus({ preventScroll: false }), []);

  const change = (text: string) => {
    const next = { ...draft, text };
    setDraft(next);
    keepDraft(draftPlace, next);
  };
  const submit = async () => {
    if (draft.text.trim() === '' || busy) return;
    setBusy(true);
    setError(null);
    try {
      await send(draft.text, draft.clientKey);
      dropDraft(draftPlace);
      onDone();
    } catch (thrown) {
      setError(thrown);
      setBusy(false);
    }
  };
  const gone = error !== null && ['TRIAL_GONE', 'NOT_FOUND', 'NOTE_UNKNOWN'].includes(asProblem(error).code);
  return (
    <form
      noValidate
      className="grid gap-2 py-2"
      onSubmit={(event) => {
        event.preventDefault();
        void submit();
      }}
      onKeyDown={(event) => {
        if (event.key === 'Enter' && (event.ctrlKey || event.metaKey)) void submit();
        if (event.key === 'Escape') onCancel();
      }}
    >
      {children}
      <TextArea ref={field} label={label} labelHidden rows={3} maxLength={4000} value={draft.text} onChange={(event) => change(event.target.value)} placeholder={label} />
      <ProblemNote error={error} />
      {gone ? (
        <p className="text-small">
          Your text stays here.{' '}
          <Button tone="quiet" onClick={() => void navigator.clipboard.writeText(draft.text).then(() => setCopied(true), () => field.current?.select())}>{copied ? 'Copied' : 'Copy it'}</Button>
        </p>
      ) : null}
      <div className="flex flex-wrap items-center gap-4">
        <Button tone="main" type="submit" busy={busy} disabled={draft.text.trim() === ''} className="min-h-8 px-3 text-small">{sendWord}</Button>
        <Button tone="faint" onClick={onCancel}>Not now</Button>
        <span className="text-fine text-faint max-sm:hidden">Ctrl Enter sends</span>
      </div>
    </form>
  );
}

interface CableChoiceProps {
  readonly count: number;
  readonly chosen: readonly number[];
  readonly onChange: (cables: number[]) => void;
}

/** Which strings a note is about; none means all of it. */
export function CableChoice({ count, chosen, onChange }: CableChoiceProps) {
  return (
    <fieldset className="flex flex-wrap items-center gap-x-1">
      <legend className="sr-only">Cables this note is about</legend>
      <span aria-hidden className="text-small text-soft mr-1.5">cables</span>
      {Array.from({ length: count }, (_, i) => i + 1).map((cable) => {
        const on = chosen.includes(cable);
        return (
          <button
            key={cable}
            type="button"
            aria-pressed={on}
            aria-label={`Cable ${cable}`}
            onClick={() => onChange(on ? chosen.filter((other) => other !== cable) : [...chosen, cable].sort((a, b) => a - b))}
            className={classNames('size-7 text-small rounded-edge', on ? 'bg-ink text-paper font-bold' : 'text-soft hover:bg-hover')}
          >
            {cable}
          </button>
        );
      })}
    </fieldset>
  );
}
