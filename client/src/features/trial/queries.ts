import { queryOptions, useMutation, useQueryClient, type QueryClient } from '@tanstack/react-query';
import type { NoteId, TrialId } from '@shared/api/common';
import type { BodyInput } from '@shared/api/contract';
import { addNote, addReply, editNote, listNoteVersions, listNotes, resolveNote, type Note } from '@shared/api/notes';
import { getTrial, listFlags } from '@shared/api/sessions';
import { call } from '../../lib/api';

export const trialQuery = (trialId: TrialId) => queryOptions({
  queryKey: ['trial', trialId],
  queryFn: ({ signal }) => call(getTrial, { params: { trialId }, signal }),
  /** A growing recording is asked for again, so that the page grows with it. */
  refetchInterval: (query) => (query.state.data?.recording?.state === 'growing' ? 2000 : false),
});

export const flagsQuery = (trialId: TrialId) => queryOptions({
  queryKey: ['trial', trialId, 'flags'],
  queryFn: ({ signal }) => call(listFlags, { params: { trialId }, signal }),
  refetchInterval: (query) => (query.state.data?.state === 'pending' ? 2000 : false),
});

export const notesQuery = (trialId: TrialId) => queryOptions({
  queryKey: ['trial', trialId, 'notes'],
  queryFn: async ({ signal }) => (await call(listNotes, { params: { trialId }, signal })).notes,
});

export const versionsQuery = (noteId: NoteId, version: number) => queryOptions({
  queryKey: ['note-versions', noteId, version],
  queryFn: async ({ signal }) => (await call(listNoteVersions, { params: { noteId }, signal })).versions,
});

/** Puts a note where it belongs in the list at hand; a newer version is never replaced by an older one. */
export function placeNote(queries: QueryClient, trialId: TrialId, note: Note): void {
  queries.setQueryData(notesQuery(trialId).queryKey, (notes) => withNote(notes ?? [], note));
}

export function withNote(notes: readonly Note[], note: Note): Note[] {
  const had = notes.find((candidate) => candidate.id === note.id);
  if (had && (had.version > note.version || had.replies.length > note.replies.length)) return [...notes];
  return [...notes.filter((candidate) => candidate.id !== note.id), note].sort((a, b) => a.startS - b.startS || a.createdAt.localeCompare(b.createdAt));
}

function useNoteChange<Input>(trialId: TrialId, send: (input: Input) => Promise<Note>) {
  const queries = useQueryClient();
  return useMutation({ mutationFn: send, onSuccess: (note) => placeNote(queries, trialId, note) });
}

export const useAddNote = (trialId: TrialId) => useNoteChange(trialId, (body: BodyInput<typeof addNote>) => call(addNote, { params: { trialId }, body }));

export const useAddReply = (trialId: TrialId, noteId: NoteId) => useNoteChange(trialId, (body: BodyInput<typeof addReply>) => call(addReply, { params: { noteId }, body }));

/** @param noteId of the note or of the reply that is edited */
export const useEditNote = (trialId: TrialId, noteId: NoteId) => useNoteChange(trialId, (body: BodyInput<typeof editNote>) => call(editNote, { params: { noteId }, body }));

export const useResolveNote = (trialId: TrialId, noteId: NoteId) => useNoteChange(trialId, (resolved: boolean) => call(resolveNote, { params: { noteId }, body: { resolved } }));
