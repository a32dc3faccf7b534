/** Notes on trials: written once however often they are sent, edited by adding versions, never lost unread. */
import type { PersonId, TrialId } from '@shared/api/common';
import { noteId, personId, trialId } from '@shared/api/common';
import type { BodyOf, ResponseOf } from '@shared/api/contract';
import type { addNote, addReply, listNoteVersions, Note, Reply } from '@shared/api/notes';
import type { SignedIn } from '../../auth';
import type { Database } from '../../db/engine';
import type { Bus } from '../../live/bus';
import { refuse } from './errors';
import {
  addVersion, findByClientKey, findNote, findRecordingSpan, insertNote, isRemoved, type NewNote, type NoteRow, notesOfTrial, setResolved, thread, trialStands, versionsOf,
} from './queries';

/** s; the screen of a running trial may be ahead of what is stored, by the time that a batch takes to become durable. */
const growingAheadS = 5;
/** s; a span drawn to the very end may round past the last sample. */
const endToleranceS = 0.05;

const refOf = (id: string, name: string) => ({ id: personId.parse(id), name });
const editedAt = (row: NoteRow) => (row.version > 1 ? row.writtenAt.toISOString() : null);

const toReply = (row: NoteRow): Reply => ({
  id: noteId.parse(row.id), author: refOf(row.authorId, row.author), text: row.text, version: row.version, createdAt: row.createdAt.toISOString(), editedAt: editedAt(row),
});

const toNote = (row: NoteRow, replies: readonly NoteRow[], reader: PersonId): Note => ({
  id: noteId.parse(row.id),
  trialId: trialId.parse(row.trialId),
  author: refOf(row.authorId, row.author),
  startS: row.startS,
  endS: row.endS,
  cables: row.cables,
  text: row.text,
  version: row.version,
  createdAt: row.createdAt.toISOString(),
  editedAt: editedAt(row),
  resolved: row.resolvedBy !== null && row.resolver !== null && row.resolvedAt !== null ? { by: refOf(row.resolvedBy, row.resolver), at: row.resolvedAt.toISOString() } : null,
  replies: replies.map(toReply),
  mine: row.authorId === reader,
});

export type NoteService = ReturnType<typeof createNoteService>;

export function createNoteService(db: Database, bus: Bus, now: () => Date = () => new Date()) {
  async function findThread(root: string, reader: PersonId): Promise<Note | null> {
    const rows = await thread(db, root);
    const note = rows.find((row) => row.id === root);
    return note ? toNote(note, rows.filter((row) => row !== note), reader) : null;
  }

  async function getThread(root: string, reader: PersonId): Promise<Note> {
    const note = await findThread(root, reader);
    if (note === null) throw refuse('NOTE_UNKNOWN');
    return note;
  }

  async function requireNote(id: string): Promise<NoteRow> {
    const row = await findNote(db, id);
    if (row === null) throw refuse('NOTE_UNKNOWN');
    if (row.removedAt !== null) throw refuse('TRIAL_GONE');
    return row;
  }

  async function requireRoot(id: string): Promise<NoteRow> {
    const row = await requireNote(id);
    if (row.replyTo !== null) throw refuse('NOTE_IS_REPLY');
    return row;
  }

  /** Tells the rooms, and answers from the reader's view. */
  async function toldTo(root: string, reader: PersonId): Promise<Note> {
    const note = await getThread(root, reader);
    bus.tell('note', { trialId: note.trialId, noteId: note.id });
    return note;
  }

  async function requirePlace(id: TrialId, place: { startS: number; endS: number | null; cables: readonly number[] }): Promise<void> {
    const span = await findRecordingSpan(db, id);
    if (span === null) throw refuse('NOTE_NO_RECORDING');
    const storedS = span.lastUs / 1e6;
    const endS = span.state === 'growing' ? Math.max(storedS, (now().getTime() - span.startedAt.getTime()) / 1000 + growingAheadS) : storedS + endToleranceS;
    if (Math.max(place.startS, place.endS ?? 0) > endS) throw refuse('NOTE_OUTSIDE', { end: storedS });
    const stranger = place.cables.find((cable) => cable > span.cableCount);
    if (stranger !== undefined) throw refuse('NOTE_CABLE', { cable: stranger, count: span.cableCount });
  }

  /** Writes a note or a reply; the same key again finds what was written the first time. */
  async function write(values: NewNote, text: string): Promise<string> {
    return db.transaction(async (tx) => {
      if (!(await trialStands(tx, values.trialId))) throw refuse('TRIAL_GONE');
      const made = await insertNote(tx, values, text);
      if (made !== null) return made;
      const earlier = await findByClientKey(tx, values.authorId, values.clientKey);
      if (earlier === null || earlier.trialId !== values.trialId || earlier.replyTo !== values.replyTo) throw refuse('NOTE_KEY');
      return earlier.id;
    });
  }

  return {
    /** For the live rooms: the note with its replies as this person sees it; null when there is none. */
    noteFor: (id: string, reader: { id: PersonId }) => findThread(id, reader.id),

    async list(id: TrialId, reader: PersonId): Promise<Note[]> {
      if (await isRemoved(db, id)) throw refuse('TRIAL_GONE');
      const rows = await notesOfTrial(db, id);
      const repliesTo = new Map<string, NoteRow[]>();
      for (const row of rows) if (row.replyTo !== null) repliesTo.set(row.replyTo, [...(repliesTo.get(row.replyTo) ?? []), row]);
      return rows.filter((row) => row.replyTo === null).map((row) => toNote(row, repliesTo.get(row.id) ?? [], reader));
    },

    async add(id: TrialId, body: BodyOf<typeof addNote>, by: Pick<SignedIn, 'id'>): Promise<Note> {
      if (await isRemoved(db, id)) throw refuse('TRIAL_GONE');
      await requirePlace(id, body);
      const cables = [...new Set(body.cables)].sort((a, b) => a - b);
      const root = await write({ trialId: id, replyTo: null, authorId: by.id, clientKey: body.clientKey, startS: body.startS, endS: body.endS, cables, createdAt: now() }, body.text);
      return toldTo(root, by.id);
    },

    async reply(id: string, body: BodyOf<typeof addReply>, by: Pick<SignedIn, 'id'>): Promise<Note> {
      const root = await requireRoot(id);
      await write({ trialId: root.trialId, replyTo: root.id, authorId: by.id, clientKey: body.clientKey, startS: root.startS, endS: root.endS, cables: [], createdAt: now() }, body.text);
      return toldTo(root.id, by.id);
    },

    async edit(id: string, text: string, onVersion: number, by: Pick<SignedIn, 'id'>): Promise<Note> {
      const row = await requireNote(id);
      if (row.authorId !== by.id) throw refuse('NOT_YOURS');
      await db.transaction(async (tx) => {
        if (!(await trialStands(tx, row.trialId))) throw refuse('TRIAL_GONE');
        if (!(await addVersion(tx, { noteId: id, onVersion, text, authorId: by.id, at: now() }))) throw refuse('EDIT_CONFLICT', { version: row.version });
      });
      return toldTo(row.replyTo ?? id, by.id);
    },

    async resolve(id: string, resolved: boolean, by: Pick<SignedIn, 'id'>): Promise<Note> {
      const root = await requireRoot(id);
      await setResolved(db, root.id, resolved ? { by: by.id, at: now() } : null);
      return toldTo(root.id, by.id);
    },

    async versions(id: string): Promise<ResponseOf<typeof listNoteVersions>> {
      const row = await requireNote(id);
      const rows = await versionsOf(db, [row.id]);
      return { versions: rows.map(({ version, text, authorId, author, at }) => ({ version, text, author: refOf(authorId, author), at: at.toISOString() })) };
    },
  };
}
