/** Notes on a point or a span of a trial, with replies, a resolved state and versions. */
import { z } from 'zod';
import { noteId, passage, personRef, trialId, wallTime } from './common';
import { route } from './contract';

/** A note sits at a point (`endS` null) or on a span, in seconds of the recording's own clock. */
const place = z.object({
  startS: z.number().min(0),
  endS: z.number().nullable().default(null),
  cables: z.array(z.number().int().min(1).max(64)).max(64).default([]),
});

const spanInOrder = <T extends { startS: number; endS: number | null }>(value: T) => value.endS === null || value.endS > value.startS;

export const reply = z.object({ id: noteId, author: personRef, text: z.string(), version: z.number().int(), createdAt: wallTime, editedAt: wallTime.nullable() });

export const note = z.object({
  id: noteId,
  trialId,
  author: personRef,
  startS: z.number(),
  endS: z.number().nullable(),
  cables: z.array(z.number().int()),
  text: z.string(),
  version: z.number().int().positive(),
  createdAt: wallTime,
  editedAt: wallTime.nullable(),
  resolved: z.object({ by: personRef, at: wallTime }).nullable(),
  replies: z.array(reply),
  mine: z.boolean(),
});
export type Note = z.infer<typeof note>;
export type Reply = z.infer<typeof reply>;

export const noteVersion = z.object({ version: z.number().int(), text: z.string(), author: personRef, at: wallTime });

const onTrial = z.object({ trialId });
const onNote = z.object({ noteId });

export const listNotes = route({ id: 'notes.list', method: 'GET', path: '/api/trials/:trialId/notes', summary: 'Notes of a trial, by place', params: onTrial, response: z.object({ notes: z.array(note) }) });

export const addNote = route({
  id: 'notes.add',
  method: 'POST',
  path: '/api/trials/:trialId/notes',
  summary: 'Write a note on a point or a span',
  params: onTrial,
  body: place.extend({
    text: passage(4000),
    /** Made by the writer's client, so that sending twice after a broken connection writes once. */
    clientKey: z.uuid(),
  }).refine(spanInOrder, { path: ['endS'], message: 'A span ends after it starts' }),
  response: note,
});

export const addReply = route({
  id: 'notes.reply',
  method: 'POST',
  path: '/api/notes/:noteId/replies',
  summary: 'Reply to a note',
  params: onNote,
  body: z.object({ text: passage(4000), clientKey: z.uuid() }),
  response: note,
});

export const editNote = route({
  id: 'notes.edit',
  method: 'PATCH',
  path: '/api/notes/:noteId',
  summary: 'Edit one’s own note or reply by adding a version; refused when somebody’s version came between',
  params: onNote,
  body: z.object({ text: passage(4000), onVersion: z.number().int().positive() }),
  response: note,
});

export const resolveNote = route({
  id: 'notes.resolve',
  method: 'PUT',
  path: '/api/notes/:noteId/resolved',
  summary: 'Mark a note as resolved, or open it again',
  params: onNote,
  body: z.object({ resolved: z.boolean() }),
  response: note,
});

export const listNoteVersions = route({
  id: 'notes.versions',
  method: 'GET',
  path: '/api/notes/:noteId/versions',
  summary: 'Every version of a note',
  params: onNote,
  response: z.object({ versions: z.array(noteVersion) }),
});
