/** Notes: written once, edited by versions, answered, resolved, and refused where they cannot stand. */
import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Note } from '@shared/api/notes';
import { makeMiniLab, type MiniLab, startApp, type TestApp } from '../support/app';
import { BenchDevice } from '../support/bench-device';
import type { HttpClient } from '../support/http-client';

let app: TestApp;
let lab: MiniLab;
let operator: HttpClient;
let lead: HttpClient;
let reader: HttpClient;
let path: string;
/** At 1 kHz: the recording ends at 0.999 s. */
const samples = 1000;

beforeAll(async () => {
  app = await startApp();
  lab = await makeMiniLab(app);
  [operator, lead, reader] = await Promise.all([app.signedIn(lab.people.operator), app.signedIn(lab.people.lead), app.signedIn(lab.people.administrator)]);
  path = `/api/trials/${lab.trialIds[0]}/notes`;
  const device = await BenchDevice.connect(app.url, lab.deviceKey);
  for (const [i, trial] of lab.trialIds.slice(0, 2).entries()) {
    await app.book.services.sessions.arm(trial, lab.deviceId, lab.people.operator);
    await device.begin(trial, `run-${i}`, samples);
    await device.end(`run-${i}`, samples);
  }
  await device.leave();
});
afterAll(() => app.close());

const codeOf = ({ status, body }: { status: number; body: unknown }) => [status, (body as { code?: string }).code];
const aNote = (more: object = {}) => ({ startS: 0.2, text: 'The hand stops here.', clientKey: randomUUID(), ...more });

describe('a note', () => {
  it('stands on a point or a span, with its cables, and is told to the rooms', async () => {
    const told: string[] = [];
    const stop = app.book.bus.on('note', ({ noteId }) => told.push(noteId));
    const { status, body } = await operator.post<Note>(path, aNote({ startS: 0.3, endS: 0.7, cables: [8, 2, 2] }));
    stop();
    expect(status).toBe(200);
    expect(body).toMatchObject({ startS: 0.3, endS: 0.7, cables: [2, 8], version: 1, editedAt: null, resolved: null, replies: [], mine: true, author: { name: 'operator' } });
    expect(told).toEqual([body.id]);
    const { body: seen } = await lead.get<{ notes: Note[] }>(path);
    expect(seen.notes.find(({ id }) => id === body.id)).toMatchObject({ mine: false });
  });

  it('sent twice after a broken connection is written once', async () => {
    const note = aNote();
    const [first, second] = await Promise.all([operator.post<Note>(path, note), operator.post<Note>(path, note)]);
    expect(second.body.id).toBe(first.body.id);
    const { body } = await operator.get<{ notes: Note[] }>(path);
    expect(body.notes.filter(({ id }) => id === first.body.id)).toHaveLength(1);
    expect(codeOf(await operator.post(`/api/trials/${lab.trialIds[1]}/notes`, note))).toEqual([409, 'NOTE_KEY']);
    // The key is the writer's own: somebody else's equal key is another note.
    expect((await lead.post<Note>(path, note)).body.id).not.toBe(first.body.id);
  });

  it('cannot stand outside the recording, on a cable that the rig has not, or end before it starts', async () => {
    expect(codeOf(await operator.post(path, aNote({ startS: 2 })))).toEqual([422, 'NOTE_OUTSIDE']);
    expect(codeOf(await operator.post(path, aNote({ endS: 60 })))).toEqual([422, 'NOTE_OUTSIDE']);
    expect(codeOf(await operator.post(path, aNote({ cables: [9] })))).toEqual([422, 'NOTE_CABLE']);
    expect(codeOf(await operator.post(`/api/trials/${lab.trialIds[2]}/notes`, aNote()))).toEqual([409, 'NOTE_NO_RECORDING']);
    const backwards = await operator.post<{ faults: { path: string }[] }>(path, aNote({ startS: 0.5, endS: 0.4 }));
    expect(codeOf(backwards)).toEqual([422, 'INVALID']);
    expect(backwards.body.faults.map((fault) => fault.path)).toEqual(['endS']);
  });

  it('is edited by its writer alone, as one more version, and never over somebody’s unread change', async () => {
    const { body: note } = await operator.post<Note>(path, aNote({ text: 'first' }));
    expect(codeOf(await lead.patch(`/api/notes/${note.id}`, { text: 'mine now', onVersion: 1 }))).toEqual([403, 'NOT_YOURS']);
    const edited = await operator.patch<Note>(`/api/notes/${note.id}`, { text: 'second', onVersion: 1 });
    expect(edited.body).toMatchObject({ text: 'second', version: 2, editedAt: expect.any(String) });
    expect(codeOf(await operator.patch(`/api/notes/${note.id}`, { text: 'third', onVersion: 1 }))).toEqual([409, 'EDIT_CONFLICT']);
    const race = await Promise.all([1, 2, 3].map((i) => operator.patch(`/api/notes/${note.id}`, { text: `race ${i}`, onVersion: 2 })));
    expect(race.map(({ status }) => status).sort()).toEqual([200, 409, 409]);
    const { body } = await lead.get<{ versions: { version: number; text: string }[] }>(`/api/notes/${note.id}/versions`);
    expect(body.versions.map(({ version, text }) => [version, text]).slice(0, 2)).toEqual([[1, 'first'], [2, 'second']]);
    expect(body.versions).toHaveLength(3);
  });

  it('is answered and resolved, and opened again', async () => {
    const { body: note } = await operator.post<Note>(path, aNote({ text: 'Was the cue on?' }));
    const answer = { text: 'It was.', clientKey: randomUUID() };
    await lead.post(`/api/notes/${note.id}/replies`, answer);
    const { body: answered } = await lead.post<Note>(`/api/notes/${note.id}/replies`, answer);
    expect(answered.replies.map(({ author, text }) => [author.name, text])).toEqual([['lead', 'It was.']]);
    const reply = answered.replies[0]!;
    expect(codeOf(await operator.post(`/api/notes/${reply.id}/replies`, { ...answer, clientKey: randomUUID() }))).toEqual([422, 'NOTE_IS_REPLY']);
    expect((await lead.patch<Note>(`/api/notes/${reply.id}`, { text: 'It was on.', onVersion: 1 })).body.replies[0]).toMatchObject({ text: 'It was on.', version: 2 });

    expect((await operator.put<Note>(`/api/notes/${note.id}/resolved`, { resolved: true })).body.resolved).toMatchObject({ by: { name: 'operator' } });
    // Resolving again changes neither who nor when.
    expect((await lead.put<Note>(`/api/notes/${note.id}/resolved`, { resolved: true })).body.resolved).toMatchObject({ by: { name: 'operator' } });
    expect((await lead.put<Note>(`/api/notes/${note.id}/resolved`, { resolved: false })).body.resolved).toBeNull();
  });

  it('can be written by an administrator who was let in as a reader', async () => {
    expect((await reader.post(path, aNote())).status).toBe(200);
  });

  it('on a trial that was taken out meanwhile is refused, and what stands is not changed', async () => {
    const gone = `/api/trials/${lab.trialIds[1]}/notes`;
    const { body: note } = await operator.post<Note>(gone, aNote());
    await app.book.services.sessions.judge(lab.trialIds[1]!, { outcome: 'completed', reason: '' }, lab.people.lead);
    await app.book.services.sessions.remove(lab.trialIds[1]!, 'wrong participant', lab.people.lead);
    expect(codeOf(await operator.post(gone, aNote()))).toEqual([410, 'TRIAL_GONE']);
    expect(codeOf(await operator.get(gone))).toEqual([410, 'TRIAL_GONE']);
    expect(codeOf(await operator.post(`/api/notes/${note.id}/replies`, { text: 'late', clientKey: randomUUID() }))).toEqual([410, 'TRIAL_GONE']);
    expect(codeOf(await operator.patch(`/api/notes/${note.id}`, { text: 'late', onVersion: 1 }))).toEqual([410, 'TRIAL_GONE']);
    expect(codeOf(await operator.put(`/api/notes/${note.id}/resolved`, { resolved: true }))).toEqual([410, 'TRIAL_GONE']);
  });
});

it('logs no warning while all this happens as expected', () => {
  expect(app.logged).toEqual([]);
});
