/** Recordings that come as files: looked through whole, stored or refused whole, and printed again digit for digit. */
import { readFileSync } from 'node:fs';
import { request } from 'node:http';
import { gunzipSync, gzipSync } from 'node:zlib';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { Problem } from '@shared/api/common';
import { importLine, type ImportLine } from '@shared/api/recordings';
import type { Session, Trial } from '@shared/api/sessions';
import { channelNames } from '@shared/recording';
import { recordings } from '@server/db/schema';
import { makeMiniLab, startApp, type MiniLab, type TestApp } from '../support/app';
import type { HttpClient } from '../support/http-client';

/** Made by an independent simulator of the same rig; the truth file beside it lists every incident. */
const fixture = (name: string) => readFileSync(new URL(`../conformance/recordings/${name}`, import.meta.url));
const sessionA = fixture('session-a.csv.gz');
const truth = JSON.parse(fixture('session-a.truth.json').toString()) as { rows: number; incidents: { kind: string; cable?: number; start: number; end: number }[] };
const trueOnes = (kind: string) => truth.incidents.filter((incident) => incident.kind === kind);

let app: TestApp;
let lab: MiniLab;
let lead: HttpClient;
let operator: HttpClient;

beforeAll(async () => {
  app = await startApp();
  lab = await makeMiniLab(app);
  [lead, operator] = await Promise.all([app.signedIn(lab.people.lead), app.signedIn(lab.people.operator)]);
});
afterAll(() => app.close());

const header = ['t_s', ...channelNames(8)].join(',');
const row = (t: string, change: Partial<Record<string, string>> = {}) => [t, ...channelNames(8).map((name) => change[name] ?? (name === 'qw' ? '1' : name.startsWith('l') ? '0.5' : name.startsWith('t') ? '5' : '0'))].join(',');
const rows = (count: number, change?: (i: number) => Partial<Record<string, string>>) => Array.from({ length: count }, (_, i) => row((i / 1000).toFixed(3), change?.(i)));

async function file(by: HttpClient, trial: string, body: string | Uint8Array<ArrayBuffer>, query = 'fileName=made.csv'): Promise<{ status: number; problem: Problem; lines: ImportLine[] }> {
  const response = await by.raw('POST', `/api/trials/${trial}/recording?${query}`, { body, headers: { 'content-type': typeof body === 'string' ? 'text/csv' : 'application/gzip' } });
  const text = await response.text();
  return response.status === 200
    ? { status: 200, problem: {} as Problem, lines: text.trim().split('\n').map((line) => importLine.parse(JSON.parse(line))) }
    : { status: response.status, problem: JSON.parse(text) as Problem, lines: [] };
}

const addTrial = async () => (await operator.post<{ id: string }>(`/api/sessions/${lab.sessionId}/trials`, { taskId: lab.study.tasks[0]?.id, conditionId: lab.study.conditions[0]?.id })).body.id;
const stateOf = async (trial: string) => (await operator.get<Trial>(`/api/trials/${trial}`)).body;
const kept = () => app.open.db.select({ id: recordings.id }).from(recordings);

describe('a recording file', () => {
  test('is filed as a planned trial, telling how far it is; its flags are those of its truth', async () => {
    const trial = lab.trialIds[0] as string;
    const { status, lines } = await file(operator, trial, Uint8Array.from(sessionA), `fileName=session-a.csv.gz&startedAt=${encodeURIComponent('2026-05-14T09:30:00.000Z')}`);
    expect(status).toBe(200);
    expect(lines.at(-1)).toMatchObject({ state: 'done', samples: truth.rows, rateHz: 1000, gaps: trueOnes('gap').length });
    const stored = lines.slice(0, -1).map((line) => (line.state === 'storing' ? line.samples : -1));
    expect(stored).toEqual([...stored].sort((a, b) => a - b));

    const { recording, state, deviceName } = await stateOf(trial);
    expect(state).toBe('stopped');
    expect(deviceName).toBeNull();
    expect(recording).toMatchObject({ samples: truth.rows, rateHz: 1000, startedAt: '2026-05-14T09:30:00.000Z', deviceName: 'file session-a.csv.gz', state: 'closed', endReason: 'done' });
    await app.book.analysis.settled();
    const { body } = await operator.get<{ state: string; flags: { kind: string; cable: number | null; startS: number; endS: number }[] }>(`/api/trials/${trial}/flags`);
    expect(body.state).toBe('found');
    for (const kind of ['slack', 'saturation'] as const) {
      const found = body.flags.filter((flag) => flag.kind === kind);
      expect(found.map(({ cable }) => cable)).toEqual(trueOnes(kind).map(({ cable }) => cable));
      // Tolerance of the truth file: 2 ms.
      trueOnes(kind).forEach(({ start, end }, i) => {
        expect(Math.abs((found[i]?.startS ?? NaN) - start)).toBeLessThanOrEqual(0.0021);
        expect(Math.abs((found[i]?.endS ?? NaN) - end)).toBeLessThanOrEqual(0.0021);
      });
    }
    const log = await operator.get<{ entries: { what: string }[]; holds: boolean }>(`/api/sessions/${lab.sessionId}/log`);
    expect(log.body.holds).toBe(true);
    expect(log.body.entries.map(({ what }) => what)).toContain('recording filed');
  });

  test('comes out again digit for digit, plain and gzipped', async () => {
    const original = gunzipSync(sessionA).toString();
    const plain = await lead.raw('GET', `/api/trials/${lab.trialIds[0]}/recording.csv`);
    expect(plain.headers.get('content-type')).toBe('text/csv; charset=utf-8');
    expect((await plain.text()) === original).toBe(true);
    const gzipped = await lead.raw('GET', `/api/trials/${lab.trialIds[0]}/recording.csv?gz=1`);
    expect(gzipped.headers.get('content-type')).toBe('application/gzip');
    expect(gunzipSync(Buffer.from(await gzipped.arrayBuffer())).toString() === original).toBe(true);
  });

  test('with faults is refused by line and column, found and expected, the first twenty listed; nothing of it is kept', async () => {
    const trial = lab.trialIds[1] as string;
    const before = (await kept()).length;
    const lines = [header, ...rows(60, (i) => (i >= 20 ? { t9_N: '1', t3_N: i % 2 ? 'abc' : 'inf' } : {}))];
    const { status, problem } = await file(operator, trial, `${lines.join('\n')}\n`);
    expect(status).toBe(422);
    expect(problem).toMatchObject({ code: 'FILE_FAULTS', wayOut: expect.any(String) as string });
    expect(problem.faults).toHaveLength(20);
    expect(problem.faults?.[1]).toEqual({ code: 'CSV_NUMBER', path: 'line 23, column 12', message: expect.stringContaining('"abc"') as string });
    expect(await kept()).toHaveLength(before);
    expect((await stateOf(trial)).state).toBe('planned');
  });

  test.each([
    ['without its eighth tension', header.replace(',t8_N', ''), 'CSV_HEADER', 'line 1, column 17'],
    ['with a ninth tension in the middle', header.replace('t8_N', 't8_N,t9_N'), 'CSV_HEADER', 'line 1, column 18'],
    ['whose time stands still', [header, row('0.000'), row('0.000')].join('\n'), 'CSV_TIME', 'line 3, column 1'],
    ['with a field too few', [header, row('0.000'), row('0.001').replace(/,[^,]*$/, '')].join('\n'), 'CSV_FIELDS', 'line 3, column 25'],
    ['with a header alone', header, 'CSV_EMPTY', 'line 2, column 1'],
  ])('%s is refused', async (_what, text, code, path) => {
    const { status, problem } = await file(operator, lab.trialIds[1] as string, `${text}\n`);
    expect(status).toBe(422);
    expect(problem.faults?.[0]).toMatchObject({ code, path });
  });

  test('of one sample, of broken gzip: each its own sentence', async () => {
    const trial = lab.trialIds[1] as string;
    expect((await file(operator, trial, `${header}\n${row('0.000')}\n`)).problem).toMatchObject({ code: 'FILE_TOO_SHORT' });
    const cut = gzipSync(Buffer.from(`${[header, ...rows(3000)].join('\n')}\n`)).subarray(0, 400);
    expect((await file(operator, trial, Uint8Array.from(cut))).problem).toMatchObject({ code: 'FILE_NOT_GZIP' });
    expect((await stateOf(trial)).state).toBe('planned');
  });

  test('is not taken for a trial that has its recording, nor from somebody outside the study', async () => {
    expect((await file(operator, lab.trialIds[0] as string, `${[header, ...rows(10)].join('\n')}\n`)).problem).toMatchObject({ code: 'TRIAL_STATE', status: 409 });
    const outsider = await app.signedIn(await app.person('operator', 'Outside'));
    expect((await file(outsider, lab.trialIds[1] as string, `${[header, ...rows(10)].join('\n')}\n`)).status).toBe(404);
    const clinician = await app.signedIn(lab.people.clinician);
    expect((await file(clinician, lab.trialIds[1] as string, `${[header, ...rows(10)].join('\n')}\n`)).status).toBeGreaterThanOrEqual(403);
  });

  test('whose sending is broken off leaves nothing, and the trial can be filed again', async () => {
    const trial = await addTrial();
    const before = (await kept()).length;
    await new Promise<void>((resolve) => {
      const sending = request(`${app.url}/api/trials/${trial}/recording?fileName=half.csv`, { method: 'POST', headers: { cookie: operator.cookie, origin: app.url, 'content-type': 'text/csv', 'content-length': '10000000' } });
      sending.on('error', () => resolve());
      sending.write(`${[header, ...rows(200)].join('\n')}\n`, () => sending.destroy());
    });
    const { lines } = await file(operator, trial, `${[header, ...rows(2500)].join('\n')}\n`);
    expect(lines.at(-1)).toMatchObject({ state: 'done', samples: 2500 });
    expect(await kept()).toHaveLength(before + 1);
  });

  test('with gaps and missing values keeps both as they are', async () => {
    const trial = await addTrial();
    const text = `${[header, ...rows(500, (i) => (i === 7 ? { t2_N: '', x_m: 'nan' } : {})).filter((_, i) => i < 100 || i >= 150)].join('\n')}\n`;
    const { lines } = await file(operator, trial, text);
    expect(lines.at(-1)).toMatchObject({ state: 'done', samples: 450, gaps: 1 });
    expect((await stateOf(trial)).recording?.gaps).toEqual([{ startS: 0.099, endS: 0.15, missing: 50 }]);
    const exported = await (await lead.raw('GET', `/api/trials/${trial}/recording.csv`)).text();
    expect(exported).toBe(text.replace('nan', ''));
  });

  test('that a stop of the server broke off is swept away when it starts again', async () => {
    const [revision] = await app.open.db.select({ id: recordings.rigRevisionId }).from(recordings).limit(1);
    const id = '01890000-0000-7000-8000-000000000000';
    await app.open.db.insert(recordings).values({ id, deviceId: null, run: 'broken-off.csv', rigRevisionId: revision?.id as string, rateHz: 1000, channels: channelNames(8), startUs: 0, startedAt: new Date() });
    await app.book.services.imports.sweep();
    expect(await app.open.db.select().from(recordings).where(eq(recordings.id, id))).toEqual([]);
  });
});

test('the run sheet counts a filed trial as recorded', async () => {
  const { body } = await operator.get<Session>(`/api/sessions/${lab.sessionId}`);
  expect(body.trialsRecorded).toBe(3);
  expect(body.state).toBe('open');
});
