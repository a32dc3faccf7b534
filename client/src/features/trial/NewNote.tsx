/** A new note at its place: point or span, with the strings it is about. */
import { useState } from 'react';
import type { TrialId } from '@shared/api/common';
import { clock } from '../../lib/format';
import { spanText } from '../../replay/moment-text';
import { CableChoice, NoteForm } from './NoteForm';
import { useAddNote } from './queries';

export interface NotePlace {
  readonly startS: number;
  readonly endS: number | null;
  readonly cables: readonly number[];
}

interface NewNoteProps {
  readonly trialId: TrialId;
  readonly place: NotePlace;
  readonly cableCount: number;
  readonly onPlace: (place: NotePlace) => void;
  readonly onDone: () => void;
  readonly onCancel: () => void;
}

export function NewNote({ trialId, place, cableCount, onPlace, onDone, onCancel }: NewNoteProps) {
  const add = useAddNote(trialId);
  const [cables, setCables] = useState<readonly number[]>(place.cables);
  const where = place.endS === null ? clock(place.startS, 3) : spanText(place.startS, place.endS);
  return (
    <section aria-label="New note" className="bg-sheet border-b border-rule-strong px-6 max-sm:px-5 pt-2">
      <NoteForm
        draftPlace={`new:${trialId}`}
        label={`What did you see at ${where}?`}
        sendWord="Write it down"
        send={(text, clientKey) => add.mutateAsync({ text, clientKey, startS: place.startS, endS: place.endS, cables: [...cables] })}
        onDone={onDone}
        onCancel={onCancel}
      >
        <div className="flex flex-wrap items-center justify-between gap-x-5">
          <p className="text-small"><b>{where}</b>{place.endS === null ? <span className="text-soft">, one moment</span> : <> <button type="button" className="text-soft underline decoration-rule-field underline-offset-4 hover:text-ink" onClick={() => onPlace({ ...place, endS: null })}>only its start</button></>}</p>
          <CableChoice count={cableCount} chosen={cables} onChange={setCables} />
        </div>
      </NoteForm>
    </section>
  );
}
