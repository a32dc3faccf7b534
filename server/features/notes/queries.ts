import { and, asc, desc, eq, inArray, isNotNull, isNull, or } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { Database } from '../../db/engine';
import { notes, noteVersions, people, recordings, rigRevisions, trials } from '../../db/schema';

const resolver = alias(people, 'resolver');

const noteRows = (db: Database) => db
  .select({
    id: notes.id, trialId: notes.trialId, replyTo: notes.replyTo, authorId: notes.authorId, author: people.name, startS: notes.startS, endS: notes.endS, cables: notes.cables,
    version: notes.version, text: noteVersions.text, writtenAt: noteVersions.at, createdAt: notes.createdAt,
    resolvedBy: notes.resolvedBy, resolver: resolver.name, resolvedAt: notes.resolvedAt, removedAt: trials.removedAt,
  })
  .from(notes)
  .innerJoin(noteVersions, and(eq(noteVersions.noteId, notes.id), eq(noteVersions.version, notes.version)))
  .innerJoin(people, eq(people.id, notes.authorId))
  .innerJoin(trials, eq(trials.id, notes.trialId))
  .leftJoin(resolver, eq(resolver.id, notes.resolvedBy));

export type NoteRow = Awaited<ReturnType<typeof notesOfTrial>>[number];

/** Notes by place, each reply after its note in order of writing. */
export const notesOfTrial = (db: Database, trialId: string) => noteRows(db).where(eq(notes.trialId, trialId)).orderBy(asc(notes.startS), asc(notes.createdAt), asc(notes.id));

/** A note with its replies. */
export const thread = (db: Database, noteId: string) => noteRows(db).where(or(eq(notes.id, noteId), eq(notes.replyTo, noteId))).orderBy(asc(notes.createdAt), asc(notes.id));

export async function findNote(db: Database, noteId: string): Promise<NoteRow | null> {
  const [row] = await noteRows(db).where(eq(notes.id, noteId));
  return row ?? null;
}

export async function findByClientKey(db: Database, authorId: string, clientKey: string): Promise<{ id: string; trialId: string; replyTo: string | null } | null> {
  const [row] = await db.select({ id: notes.id, trialId: notes.trialId, replyTo: notes.replyTo }).from(notes).where(and(eq(notes.authorId, authorId), eq(notes.clientKey, clientKey)));
  return row ?? null;
}

/** Whether the trial stands; held until the transaction ends, so that it is not removed between look and write. */
export async function trialStands(tx: Database, trialId: string): Promise<boolean> {
  return (await tx.select({ id: trials.id }).from(trials).where(and(eq(trials.id, trialId), isNull(trials.removedAt))).for('share')).length > 0;
}

export async function isRemoved(db: Database, trialId: string): Promise<boolean> {
  return (await db.select({ id: trials.id }).from(trials).where(and(eq(trials.id, trialId), isNotNull(trials.removedAt)))).length > 0;
}

/** What a note on a trial can point into. */
export async function findRecordingSpan(db: Database, trialId: string) {
  const [row] = await db.select({ state: recordings.state, lastUs: recordings.lastUs, startedAt: recordings.startedAt, rig: rigRevisions.file }).from(recordings)
    .innerJoin(rigRevisions, eq(rigRevisions.id, recordings.rigRevisionId))
    .where(eq(recordings.trialId, trialId)).orderBy(desc(recordings.startedAt), desc(recordings.id)).limit(1);
  return row ? { state: row.state, lastUs: row.lastUs, startedAt: row.startedAt, cableCount: row.rig.cables.length } : null;
}

export interface NewNote {
  trialId: string;
  replyTo: string | null;
  authorId: string;
  clientKey: string;
  startS: number;
  endS: number | null;
  cables: number[];
  createdAt: Date;
}

/** @returns null when the same author has used the client key before */
export async function insertNote(tx: Database, values: NewNote, text: string): Promise<string | null> {
  const [row] = await tx.insert(notes).values(values).onConflictDoNothing({ target: [notes.authorId, notes.clientKey] }).returning({ id: notes.id });
  if (!row) return null;
  await tx.insert(noteVersions).values({ noteId: row.id, version: 1, text, authorId: values.authorId, at: values.createdAt });
  return row.id;
}

/** @returns false when another version came between */
export async function addVersion(tx: Database, values: { noteId: string; onVersion: number; text: string; authorId: string; at: Date }): Promise<boolean> {
  const version = values.onVersion + 1;
  const rows = await tx.update(notes).set({ version }).where(and(eq(notes.id, values.noteId), eq(notes.version, values.onVersion))).returning({ id: notes.id });
  if (rows.length === 0) return false;
  await tx.insert(noteVersions).values({ noteId: values.noteId, version, text: values.text, authorId: values.authorId, at: values.at });
  return true;
}

/** Who resolved it first stays who resolved it. */
export async function setResolved(db: Database, noteId: string, resolved: { by: string; at: Date } | null): Promise<void> {
  await db.update(notes).set({ resolvedBy: resolved?.by ?? null, resolvedAt: resolved?.at ?? null })
    .where(and(eq(notes.id, noteId), resolved === null ? undefined : isNull(notes.resolvedAt)));
}

export const versionsOf = (db: Database, noteIds: readonly string[]) => db
  .select({ version: noteVersions.version, text: noteVersions.text, authorId: noteVersions.authorId, author: people.name, at: noteVersions.at })
  .from(noteVersions).innerJoin(people, eq(people.id, noteVersions.authorId))
  .where(inArray(noteVersions.noteId, [...noteIds])).orderBy(asc(noteVersions.version));
