/** A note in the margin: place, words, replies, and what can be done with it. */
import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import type { TrialId } from '@shared/api/common';
import type { Note, Reply } from '@shared/api/notes';
import { clock, wallTime } from '../../lib/format';
import { spanText } from '../../replay/moment-text';
import { Button } from '../../ui/Button';
import { classNames } from '../../ui/class-names';
import { Dialog } from '../../ui/Dialog';
import { ProblemNote } from '../../ui/ProblemNote';
import { WaitingLines } from '../../ui/Waiting';
import { MarginEntry } from './MarginEntry';
import { NoteForm } from './NoteForm';
import { useAddReply, useEditNote, useResolveNote, versionsQuery } from './queries';

interface NoteEntryProps {
  readonly note: Note;
  readonly trialId: TrialId;
  readonly mayNote: boolean;
  readonly here: boolean;
  readonly onGo: () => void;
  readonly onLight: (on: boolean) => void;
  readonly myId: string;
}

type Doing = { what: 'reply' } | { what: 'edit'; part: Note | Reply } | { what: 'versions'; part: Note | Reply } | null;

export function NoteEntry({ note, trialId, mayNote, here, onGo, onLight, myId }: NoteEntryProps) {
  const [doing, setDoing] = useState<Doing>(null);
  const reply = useAddReply(trialId, note.id);
  const edit = useEditNote(trialId, doing?.what === 'edit' ? doing.part.id : note.id);
  const resolve = useResolveNote(trialId, note.id);
  const close = () => setDoing(null);
  const editing = (part: Note | Reply) => doing?.what === 'edit' && doing.part.id === part.id;

  return (
    <MarginEntry
      id={`note-${note.id}`}
      place={note.endS === null ? clock(note.startS, 1) : spanText(note.startS, note.endS)}
      here={here}
      onGo={onGo}
      onLight={onLight}
      state={note.resolved ? <span className="text-confirmed-text font-semibold">resolved</span> : null}
    >
      <div className={classNames(note.resolved && 'text-soft')}>
        {editing(note) ? null : <p className="whitespace-pre-wrap break-words"><b>{note.author.name}</b> {note.text}</p>}
        {editing(note) ? <EditForm part={note} send={edit.mutateAsync} onDone={close} /> : null}
        <p className="text-small text-soft">
          {note.cables.length > 0 ? <>{note.cables.length === 1 ? 'cable' : 'cables'} {note.cables.join(', ')} · </> : null}
          {wallTime(note.createdAt)}
          <Edited part={note} onShow={() => setDoing({ what: 'versions', part: note })} />
          {note.resolved ? <> · resolved by {note.resolved.by.name}</> : null}
        </p>
        {note.replies.length > 0 ? (
          <ul className="mt-1 grid gap-1">
            {note.replies.map((answer) => (
              <li key={answer.id} className="border-l border-rule-field pl-3">
                {editing(answer) ? <EditForm part={answer} send={edit.mutateAsync} onDone={close} /> : (
                  <p className="text-small whitespace-pre-wrap break-words">
                    <b>{answer.author.name}</b> {answer.text}
                    <span className="text-soft"> · {wallTime(answer.createdAt)}<Edited part={answer} onShow={() => setDoing({ what: 'versions', part: answer })} /></span>
                    {mayNote && answer.author.id === myId ? <Button tone="faint" className="ml-2" onClick={() => setDoing({ what: 'edit', part: answer })} about="this reply">Edit</Button> : null}
                  </p>
                )}
              </li>
            ))}
          </ul>
        ) : null}
        <ProblemNote error={resolve.error} className="mt-1" />
        {doing?.what === 'reply' ? (
          <NoteForm draftPlace={`reply:${note.id}`} label={`Reply to ${note.author.name}`} sendWord="Reply" send={(text, clientKey) => reply.mutateAsync({ text, clientKey })} onDone={close} onCancel={close} />
        ) : mayNote && doing?.what !== 'edit' ? (
          <p className="flex gap-x-4">
            <Button tone="faint" onClick={() => setDoing({ what: 'reply' })} about={`to ${note.author.name}`}>Reply</Button>
            {note.mine ? <Button tone="faint" onClick={() => setDoing({ what: 'edit', part: note })} about="this note">Edit</Button> : null}
            <Button tone="faint" busy={resolve.isPending} onClick={() => resolve.mutate(note.resolved === null)} about="this note">{note.resolved ? 'Open again' : 'Resolve'}</Button>
          </p>
        ) : null}
      </div>
      {doing?.what === 'versions' ? <Versions part={doing.part} onClose={close} /> : null}
    </MarginEntry>
  );
}

function EditForm({ part, send, onDone }: { part: Note | Reply; send: (body: { text: string; onVersion: number }) => Promise<unknown>; onDone: () => void }) {
  return <NoteForm draftPlace={`edit:${part.id}:${part.version}`} label="Your words" firstText={part.text} sendWord="Keep as a new version" send={(text) => send({ text, onVersion: part.version })} onDone={onDone} onCancel={onDone} />;
}

function Edited({ part, onShow }: { part: Note | Reply; onShow: () => void }) {
  if (part.version < 2) return null;
  return <> · <Button tone="faint" onClick={onShow}>version {part.version}</Button></>;
}

function Versions({ part, onClose }: { part: Note | Reply; onClose: () => void }) {
  const versions = useQuery(versionsQuery(part.id, part.version));
  return (
    <Dialog open onOpenChange={onClose} title="Versions" description="Nothing is overwritten: each change adds a version.">
      <ProblemNote error={versions.error} onRetry={() => void versions.refetch()} />
      {versions.isPending ? <WaitingLines lines={2} /> : null}
      <ol className="border-t border-rule-strong" reversed>
        {[...(versions.data ?? [])].reverse().map((version) => (
          <li key={version.version} className="border-b border-rule py-2">
            <p className="text-small text-soft">Version {version.version}, {version.author.name}, {wallTime(version.at)}</p>
            <p className="whitespace-pre-wrap break-words">{version.text}</p>
          </li>
        ))}
      </ol>
    </Dialog>
  );
}
