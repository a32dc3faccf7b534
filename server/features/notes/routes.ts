import { addNote, addReply, editNote, listNotes, listNoteVersions, resolveNote } from '@shared/api/notes';
import { type ApiRouter, serve } from '../../http';
import type { NoteService } from './service';

export function noteRoutes(router: ApiRouter, notes: NoteService): void {
  serve(router, listNotes, async ({ params, person }) => ({ notes: await notes.list(params.trialId, person.id) }));
  serve(router, addNote, ({ params, body, person }) => notes.add(params.trialId, body, person));
  serve(router, addReply, ({ params, body, person }) => notes.reply(params.noteId, body, person));
  serve(router, editNote, ({ params, body, person }) => notes.edit(params.noteId, body.text, body.onVersion, person));
  serve(router, resolveNote, ({ params, body, person, note }) => {
    note({ detail: { ...body } });
    return notes.resolve(params.noteId, body.resolved, person);
  });
  serve(router, listNoteVersions, ({ params }) => notes.versions(params.noteId));
}
