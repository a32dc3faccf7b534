/** Judging flags: what stands, what was superseded, and two people at once. */
import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { Problem } from '@shared/api/common';
import type { Moment } from '@shared/api/review';
import type { Verdict } from '@shared/api/verdict';
import { makeMiniLab, startApp, type MiniLab, type TestApp } from '../support/app';
import type { HttpClient } from '../support/http-client';

let app: TestApp;
let lab: MiniLab;
let lead: HttpClient;
let second: HttpClient;
let operator: HttpClient;

beforeAll(async () => {
  app = await startApp();
  lab = await makeMiniLab(app);
  const other = await app.person('lead', 'Second Lead');
  await app.book.services.studies.setMember(lab.study.id, other.id, 'lead', true);
  [lead, second, operator] = await Promise.all([app.signedIn(lab.people.lead), app.signedIn(other), app.signedIn(lab.people.operator)]);
  // The reference recording: 17 incidents, of which 14 are flags of these kinds with a cable or a gap.
  const body = Uint8Array.from(readFileSync(new URL('../conformance/recordings/session-a.csv.gz', import.meta.url)));
  const filed = await operator.raw('POST', `/api/trials/${lab.trialIds[0]}/recording?fileName=session-a.csv.gz`, { body, headers: { 'content-type': 'application/gzip' } });
  await filed.text();
  await app.book.analysis.settled();
});
afterAll(() => app.close());

const moments = async (by: HttpClient = lead) => (await by.get<{ moments: Moment[] }>(`/api/studies/${lab.study.id}/moments`)).body.moments;
const give = (by: HttpClient, verdicts: { flagId: string; value: string; seen: string | null; reason?: string }[]) => by.post<{ verdicts: { flagId: string; verdict: Verdict | null; seen: string | null }[] } & Problem>(`/api/studies/${lab.study.id}/verdicts`, { verdicts });
const nth = async (n: number): Promise<Moment> => (await moments())[n] as Moment;

describe('the worklist of a study', () => {
  test('holds every flag with its trial, oldest first, none judged yet', async () => {
    const all = await moments();
    expect(all.length).toBeGreaterThanOrEqual(14);
    expect(all.map(({ startS }) => startS)).toEqual(all.map(({ startS }) => startS).sort((a, b) => a - b));
    expect(all[0]).toMatchObject({ kind: 'slack', cable: 4, trialId: lab.trialIds[0], trialNumber: 1, participantCode: 'K-001', visit: 1, verdict: null, seen: null, condition: { label: 'with cue' } });
  });

  test('shows a member who is blind the code of a condition alone', async () => {
    expect((await moments(second))[0]?.condition).toMatchObject({ blindCode: 'A', label: null });
  });
});

describe('a verdict', () => {
  test('is written with its author, reason and time, and stands', async () => {
    const flag = await nth(0);
    const { status, body } = await give(lead, [{ flagId: flag.id, value: 'confirmed', seen: null, reason: 'The cable hung visibly.' }]);
    expect(status).toBe(200);
    expect(body.verdicts[0]?.verdict).toMatchObject({ value: 'confirmed', reason: 'The cable hung visibly.', by: { name: 'lead' } });
    expect((await nth(0)).verdict).toEqual(body.verdicts[0]?.verdict);
  });

  test('is superseded by a later one, and both stay in the record', async () => {
    const flag = await nth(0);
    await give(second, [{ flagId: flag.id, value: 'dismissed', seen: flag.seen, reason: 'Within the tolerance of the sensor.' }]);
    expect((await nth(0)).verdict).toMatchObject({ value: 'dismissed', by: { name: 'Second Lead' } });
    const { body } = await lead.get<{ verdicts: Verdict[] }>(`/api/trials/${flag.trialId}/verdicts`);
    expect(body.verdicts.map(({ value }) => value)).toEqual(['confirmed', 'dismissed']);
  });

  test('that was taken back uncovers the one before', async () => {
    const flag = await nth(0);
    const { body } = await give(second, [{ flagId: flag.id, value: 'withdrawn', seen: flag.seen }]);
    expect(body.verdicts[0]?.verdict).toMatchObject({ value: 'confirmed', by: { name: 'lead' } });
    const now = await nth(0);
    await give(lead, [{ flagId: now.id, value: 'withdrawn', seen: now.seen }]);
    expect((await nth(0)).verdict).toBeNull();
  });

  test('given without having seen the newest is refused with what the other said; nothing of the batch is written', async () => {
    const [one, two] = [await nth(1), await nth(2)];
    await give(second, [{ flagId: one.id, value: 'unsure', seen: null, reason: 'I would ask the operator.' }]);
    const { status, body } = await give(lead, [{ flagId: two.id, value: 'confirmed', seen: null }, { flagId: one.id, value: 'confirmed', seen: null }]);
    expect(status).toBe(409);
    expect(body).toMatchObject({ code: 'VERDICT_NEWER', faults: [{ path: one.id, message: 'Second Lead: unsure, I would ask the operator.' }] });
    expect((await nth(2)).verdict).toBeNull();
  });

  test('of two people at the same instant: one is written, the other is told', async () => {
    const flag = await nth(3);
    const answers = await Promise.all([lead, second].map((by) => give(by, [{ flagId: flag.id, value: 'confirmed', seen: null }])));
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
  });

  test('of somebody else cannot be taken back', async () => {
    const flag = await nth(1);
    expect((await give(lead, [{ flagId: flag.id, value: 'withdrawn', seen: flag.seen }])).body).toMatchObject({ code: 'VERDICT_NOT_YOURS', status: 409 });
  });

  test('goes to hundreds at once', async () => {
    const open = (await moments()).filter(({ verdict }) => verdict === null);
    const { status } = await give(lead, open.map(({ id, seen }) => ({ flagId: id, value: 'dismissed', seen })));
    expect(status).toBe(200);
    expect((await moments()).every(({ verdict }) => verdict !== null)).toBe(true);
  });

  test('is a lead’s: an operator who is not assigned is told so, a flag of another study reads as absent', async () => {
    const flag = await nth(0);
    expect((await give(operator, [{ flagId: flag.id, value: 'confirmed', seen: flag.seen }])).status).toBe(403);
    expect((await give(lead, [{ flagId: '01890000-0000-7000-8000-000000000000', value: 'confirmed', seen: null }])).body).toMatchObject({ code: 'FLAG_UNKNOWN', status: 404 });
    expect((await give(lead, [])).body).toMatchObject({ code: 'INVALID', status: 422 });
    expect((await give(lead, [{ flagId: flag.id, value: 'perhaps', seen: null }])).status).toBe(422);
  });

  test('on a trial that was taken out meanwhile is refused', async () => {
    const flag = await nth(0);
    await lead.delete(`/api/trials/${flag.trialId}`, { reason: 'The wrong participant.' });
    expect((await give(lead, [{ flagId: flag.id, value: 'confirmed', seen: flag.seen }])).body).toMatchObject({ code: 'FLAG_UNKNOWN' });
    expect(await moments()).toEqual([]);
  });
});
