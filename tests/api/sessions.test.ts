/** A session from its plan to its close, with a device on the real link. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { LogEntry, Session, Trial, TrialSummary } from '@shared/api/sessions';
import { makeMiniLab, type MiniLab, startApp, type TestApp } from '../support/app';
import { BenchDevice } from '../support/bench-device';
import type { HttpClient } from '../support/http-client';

let app: TestApp;
let lab: MiniLab;
let operator: HttpClient;
let lead: HttpClient;
beforeAll(async () => {
  app = await startApp();
  lab = await makeMiniLab(app);
  operator = await app.signedIn(lab.people.operator);
  lead = await app.signedIn(lab.people.lead);
});
afterAll(() => app.close());

const codeOf = ({ status, body }: { status: number; body: unknown }) => [status, (body as { code?: string }).code];
const trialPath = (i: number) => `/api/trials/${lab.trialIds[i]}`;
const stateOf = async (i: number) => (await operator.get<Trial>(trialPath(i))).body.state;
const arm = (i: number, deviceId = lab.deviceId) => operator.post<TrialSummary>(`${trialPath(i)}/arm`, { deviceId });
const becomes = (i: number, wanted: string) => new Promise<void>((resolve) => {
  const stop = app.book.bus.on('trial', ({ trialId, state }) => {
    if (trialId !== lab.trialIds[i] || state !== wanted) return;
    stop();
    resolve();
  });
});

describe('planning', () => {
  it('numbers visits of a participant and trials of a session', async () => {
    const trial = { taskId: lab.study.tasks[0]!.id, conditionId: lab.study.conditions[0]!.id };
    const plan = { participantId: lab.participantId, rigRevisionId: lab.rig.id, plannedAt: '2031-05-04T09:00:00.000Z', trials: [trial, trial] };
    const { status, body } = await lead.post<Session>(`/api/studies/${lab.study.id}/sessions`, plan);
    expect(status).toBe(200);
    expect(body).toMatchObject({ visit: 2, state: 'planned', trialsPlanned: 2, trialsRecorded: 0, participantCode: 'K-001', rigRevision: 1 });
    const added = await lead.post<TrialSummary>(`/api/sessions/${body.id}/trials`, trial);
    expect(added.body).toMatchObject({ number: 3, state: 'planned' });
    // A removed trial's number is not given again: paper notes may name it.
    await lead.delete(`/api/trials/${added.body.id}`, { reason: 'added by mistake' });
    expect((await lead.post<TrialSummary>(`/api/sessions/${body.id}/trials`, trial)).body.number).toBe(4);
  });

  it('refuses what does not belong to the study, and dates that cannot be meant', async () => {
    const trial = { taskId: lab.study.tasks[0]!.id, conditionId: lab.study.conditions[0]!.id };
    const plan = { participantId: lab.participantId, rigRevisionId: lab.rig.id, plannedAt: new Date().toISOString(), trials: [trial] };
    const stranger = '0190a000-0000-7000-8000-000000000000';
    const attempt = async (change: object) => codeOf(await lead.post(`/api/studies/${lab.study.id}/sessions`, { ...plan, ...change }));
    expect(await attempt({ participantId: stranger })).toEqual([422, 'PARTICIPANT_UNKNOWN']);
    expect(await attempt({ rigRevisionId: stranger })).toEqual([422, 'RIG_REVISION_UNKNOWN']);
    expect(await attempt({ trials: [{ ...trial, taskId: stranger }] })).toEqual([422, 'TASK_UNKNOWN']);
    expect(await attempt({ trials: [{ ...trial, conditionId: stranger }] })).toEqual([422, 'CONDITION_UNKNOWN']);
    expect(await attempt({ plannedAt: '0000-01-01T00:00:00Z' })).toEqual([422, 'PLAN_TIME']);
    expect(await attempt({ plannedAt: 'tomorrow' })).toEqual([422, 'INVALID']);
  });
});

describe('a trial', () => {
  it('is armed only on a device that is connected, known, free and the right rig', async () => {
    expect(codeOf(await arm(0))).toEqual([409, 'DEVICE_AWAY']);
    expect(codeOf(await arm(0, '0190a000-0000-7000-8000-000000000000' as typeof lab.deviceId))).toEqual([422, 'DEVICE_UNKNOWN']);

    // The device says a second revision of the rig; the session is planned on the first.
    await app.book.services.rigs.import({ ...lab.rig.file, tensionMax: 26 }, 'stronger motors', lab.people.lead);
    const mistaken = await BenchDevice.connect(app.url, lab.deviceKey, { code: 'heron-8', revision: 2 });
    expect(codeOf(await arm(0))).toEqual([409, 'RIG_MISMATCH']);
    await mistaken.leave();
    expect(await stateOf(0)).toBe('planned');
  });

  it('is armed, recorded, stopped and judged, and the log says so in order', async () => {
    const device = await BenchDevice.connect(app.url, lab.deviceKey);
    const armed = await arm(0);
    expect([armed.status, armed.body.state]).toEqual([200, 'armed']);
    expect((await device.hear('arm')).trial).toBe(lab.trialIds[0]);
    expect(codeOf(await arm(1))).toEqual([409, 'DEVICE_ARMED']);

    expect((await operator.post<TrialSummary>(`${trialPath(0)}/disarm`)).body.state).toBe('planned');
    expect((await device.hear('disarm')).trial).toBe(lab.trialIds[0]);
    await arm(0);
    await device.begin(lab.trialIds[0]!, 'run-1', 500);
    expect(await stateOf(0)).toBe('recording');
    expect(codeOf(await arm(1))).toEqual([409, 'DEVICE_BUSY']);
    expect(codeOf(await operator.put(`${trialPath(0)}/outcome`, { outcome: 'completed' }))).toEqual([409, 'TRIAL_STATE']);
    expect(codeOf(await lead.delete(trialPath(0), { reason: 'too early' }))).toEqual([409, 'TRIAL_STATE']);
    expect(codeOf(await operator.post(`/api/sessions/${lab.sessionId}/close`))).toEqual([409, 'SESSION_RUNNING']);

    expect((await operator.post(`${trialPath(0)}/stop`)).status).toBe(200);
    expect((await device.hear('stop')).run).toBe('run-1');
    const stopped = becomes(0, 'stopped');
    await device.end('run-1', 500, 'stopped');
    await stopped;
    await app.book.analysis.settled();

    const { body: trial } = await operator.get<Trial>(trialPath(0));
    expect(trial).toMatchObject({ state: 'stopped', trialsInSession: 3, previous: null, next: lab.trialIds[1], may: { note: true, run: true, remove: false } });
    // 500 samples at 1 kHz: the last one lies 499 ms after the first.
    expect(trial.recording).toMatchObject({ state: 'closed', samples: 500, durationS: 0.499, endReason: 'stopped', gaps: [], deviceName: 'bench one' });
    expect((await operator.get(`${trialPath(0)}/flags`)).body).toEqual({ state: 'found', flags: [] });
    expect((await operator.get<{ toJudge: Trial[] }>('/api/today')).body.toJudge.map(({ id }) => id)).toEqual([lab.trialIds[0]]);

    expect(codeOf(await operator.post(`/api/sessions/${lab.sessionId}/close`))).toEqual([409, 'SESSION_UNJUDGED']);
    expect(codeOf(await operator.put(`${trialPath(0)}/outcome`, { outcome: 'void' }))).toEqual([422, 'OUTCOME_REASON']);
    expect((await operator.put(`${trialPath(0)}/outcome`, { outcome: 'void', reason: 'the cue was off' })).body).toMatchObject({ state: 'judged', outcome: 'void' });
    expect((await operator.put(`${trialPath(0)}/outcome`, { outcome: 'completed' })).body).toMatchObject({ outcome: 'completed', outcomeReason: null });

    const { body: log } = await operator.get<{ entries: LogEntry[]; holds: boolean }>(`/api/sessions/${lab.sessionId}/log`);
    expect(log.holds).toBe(true);
    expect(log.entries.map(({ who, what }) => `${who}: ${what}`)).toEqual([
      'operator: session planned', 'operator: session opened', 'operator: trial armed', 'operator: trial disarmed', 'operator: trial armed',
      'bench one: recording began', 'operator: stop asked', 'bench one: recording ended', 'operator: outcome given', 'operator: outcome given',
    ]);
    await device.leave();
  });

  it('is away while its device is, and goes on when it comes back', async () => {
    const device = await BenchDevice.connect(app.url, lab.deviceKey);
    await arm(1);
    await device.begin(lab.trialIds[1]!, 'run-2', 100);
    const away = becomes(1, 'away');
    await device.leave();
    await away;
    expect(codeOf(await operator.post(`${trialPath(1)}/stop`))).toEqual([409, 'DEVICE_AWAY']);
    const again = await BenchDevice.connect(app.url, lab.deviceKey);
    // Connected alone says nothing of the run: the device may have forgotten it.
    expect(await stateOf(1)).toBe('away');
    const back = becomes(1, 'recording');
    await again.goOn('run-2', 100);
    await back;
    const stopped = becomes(1, 'stopped');
    await again.end('run-2', 200, 'done', 2);
    await stopped;
    await again.leave();
    expect((await operator.put(`${trialPath(1)}/outcome`, { outcome: 'aborted', reason: 'hand slipped' })).status).toBe(200);
  });

  it('taken out by a lead reads as absent, and its recording stays', async () => {
    expect(codeOf(await lead.delete(trialPath(1), {}))).toEqual([422, 'INVALID']);
    expect((await lead.delete(trialPath(1), { reason: 'wrong participant' })).body).toEqual({ done: true });
    expect(codeOf(await lead.get(trialPath(1)))).toEqual([404, 'TRIAL_UNKNOWN']);
    expect(codeOf(await arm(1))).toEqual([404, 'TRIAL_UNKNOWN']);
    const { rows } = await app.open.db.execute(`select count(*)::int as n from recordings where trial_id = '${lab.trialIds[1]}'`) as unknown as { rows: { n: number }[] };
    expect(rows[0]!.n).toBe(1);
  });
});

describe('a session', () => {
  it('closes once every recorded trial has its outcome, and then stays as it is', async () => {
    const { body } = await operator.post<Session>(`/api/sessions/${lab.sessionId}/close`);
    expect(body).toMatchObject({ state: 'closed', trialsPlanned: 2, trialsRecorded: 1 });
    expect(codeOf(await arm(2))).toEqual([409, 'SESSION_CLOSED']);
    expect(codeOf(await operator.put(`${trialPath(0)}/outcome`, { outcome: 'completed' }))).toEqual([409, 'SESSION_CLOSED']);
    expect((await operator.get<Trial>(trialPath(0))).body.may).toMatchObject({ note: true, run: false, remove: false });
  });

  it('shows that its log was tampered with', async () => {
    await app.open.db.execute(`update log_entries set who = 'somebody else' where session_id = '${lab.sessionId}' and n = 3`);
    expect((await lead.get(`/api/sessions/${lab.sessionId}/log`)).body['holds']).toBe(false);
  });

  it('shows condition codes without labels to members who are blind', async () => {
    await app.book.services.studies.setMember(lab.study.id, lab.people.operator.id, 'operator', true);
    const { body } = await operator.get<Session>(`/api/sessions/${lab.sessionId}`);
    expect(body.trials.map(({ condition }) => [condition.blindCode, condition.label])).toEqual([['A', null], ['B', null]]);
    expect(JSON.stringify((await operator.get(`/api/studies/${lab.study.id}`)).body['conditions'])).not.toContain('cue');
    expect(JSON.stringify((await operator.get('/api/today')).body)).not.toContain('with cue');
    expect((await lead.get<Session>(`/api/sessions/${lab.sessionId}`)).body.trials[0]!.condition.label).toBe('with cue');
  });
});

it('logs no warning while all this happens as expected', () => {
  expect(app.logged).toEqual([]);
});
