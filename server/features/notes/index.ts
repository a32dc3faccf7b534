export { noteRoutes } from './routes';
export { createNoteService, type NoteService } from './service';
