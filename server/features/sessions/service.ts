/** Planning and running: what people do with sessions and trials. */
import type { DeviceId, RecordingId, SessionId, StudyId, TrialId } from '@shared/api/common';
import { sessionId, trialId } from '@shared/api/common';
import type { BodyOf } from '@shared/api/contract';
import type { judgeTrial, planSession, TrialState } from '@shared/api/sessions';
import type { RigFile } from '@shared/rig';
import type { Database } from '../../db/engine';
import type { DeviceControl } from '../../ingest/ports';
import type { Bus } from '../../live/bus';
import {
  conditionsIn, fileUnderTrial, type HeldSession, holdDevice, holdSession, insertSession, insertTrials, markRemoved, moveTrial, participantIsIn, placeOfTrial, type PlannedTrial, rigOfSession, rigRevisionExists,
  setSessionState, stateOfStudy, tasksIn, trialHeldBy, type TrialPlace, trialsInState,
} from './change-queries';
import { refuse } from './errors';
import { appendLog } from './log-queries';
import { type MoveName, moves, runningStates } from './trial-states';

/** Who did it, as the log names them. */
export interface Actor {
  id: string;
  name: string;
}

export interface SessionDeps {
  db: Database;
  bus: Bus;
  control: DeviceControl;
  now: () => Date;
}

const isOver = (session: HeldSession) => session.state === 'closed' || session.state === 'signed';
const earliestPlan = Date.UTC(2000, 0, 1);
const latestPlan = Date.UTC(2200, 0, 1);

export type SessionService = ReturnType<typeof createSessionService>;

export function createSessionService({ db, bus, control, now }: SessionDeps) {
  const tellTrial = (id: TrialId, session: SessionId, state: TrialState) => bus.tell('trial', { trialId: id, sessionId: session, state });
  const tellSession = (session: SessionId) => bus.tell('session', { sessionId: session });

  const entry = (by: Actor, what: string, detail: Record<string, unknown> = {}) => ({ at: now(), who: by.name, what, detail: { ...detail, personId: by.id } });

  async function requireOpenSession(tx: Database, id: string): Promise<HeldSession> {
    const session = await holdSession(tx, id);
    if (session === null) throw refuse('SESSION_UNKNOWN');
    if (isOver(session)) throw refuse('SESSION_CLOSED');
    return session;
  }

  async function requireTrial(tx: Database, id: string): Promise<TrialPlace> {
    const trial = await placeOfTrial(tx, id);
    if (trial === null) throw refuse('TRIAL_UNKNOWN');
    return trial;
  }

  async function requireTasksAndConditions(tx: Database, study: string, planned: readonly PlannedTrial[]): Promise<void> {
    const [tasks, conditions] = [await tasksIn(tx, study), await conditionsIn(tx, study)];
    if (planned.some((each) => !tasks.has(each.taskId))) throw refuse('TASK_UNKNOWN');
    if (planned.some((each) => !conditions.has(each.conditionId))) throw refuse('CONDITION_UNKNOWN');
  }

  /** Holds the session of a trial, checks that both are as the move wants them, and runs the change in one transaction. */
  async function change<T>(id: string, move: MoveName | null, work: (tx: Database, trial: TrialPlace, session: HeldSession) => Promise<T>): Promise<T> {
    return db.transaction(async (tx) => {
      const { sessionId: place } = await requireTrial(tx, id);
      const session = await requireOpenSession(tx, place);
      const trial = await requireTrial(tx, id); // again, now that nobody else can move it
      const from: readonly TrialState[] = move === null ? [trial.state] : moves[move].from;
      if (!from.includes(trial.state)) throw refuse('TRIAL_STATE', { state: trial.state });
      return work(tx, trial, session);
    });
  }

  async function requireFreeDevice(tx: Database, id: DeviceId, session: HeldSession): Promise<string> {
    const device = await holdDevice(tx, id);
    if (device === null) throw refuse('DEVICE_UNKNOWN');
    const state = control.stateOf(id);
    if (state === 'gone') throw refuse('DEVICE_AWAY', { device: device.name });
    if (state === 'recording') throw refuse('DEVICE_BUSY', { device: device.name });
    const found = control.rigOf(id);
    if (found === null) throw refuse('DEVICE_AWAY', { device: device.name });
    if (found.code !== session.rigCode || found.revision !== session.rigRevision) {
      throw refuse('RIG_MISMATCH', { device: device.name, planned: `${session.rigCode} revision ${session.rigRevision}`, found: `${found.code} revision ${found.revision}` });
    }
    if (await trialHeldBy(tx, id)) throw refuse('DEVICE_ARMED', { device: device.name });
    return device.name;
  }

  async function disarm(id: TrialId, by: Actor, why: string): Promise<void> {
    const trial = await change(id, 'disarm', async (tx, place) => {
      await moveTrial(tx, id, 'disarm', { deviceId: null });
      await appendLog(tx, place.sessionId, entry(by, 'trial disarmed', { trial: place.number, why }));
      return place;
    });
    if (trial.deviceId !== null) control.disarm(trial.deviceId as DeviceId, id);
    tellTrial(id, sessionId.parse(trial.sessionId), 'planned');
  }

  return {
    async plan(study: StudyId, body: BodyOf<typeof planSession>, by: Actor): Promise<SessionId> {
      const plannedAt = new Date(body.plannedAt);
      if (!(plannedAt.getTime() >= earliestPlan && plannedAt.getTime() < latestPlan)) throw refuse('PLAN_TIME');
      const state = await stateOfStudy(db, study);
      if (state === 'closed' || state === 'archived') throw refuse('STUDY_CLOSED', { state });
      const made = await db.transaction(async (tx) => {
        if (!(await participantIsIn(tx, study, body.participantId))) throw refuse('PARTICIPANT_UNKNOWN');
        if (!(await rigRevisionExists(tx, body.rigRevisionId))) throw refuse('RIG_REVISION_UNKNOWN');
        await requireTasksAndConditions(tx, study, body.trials);
        const id = await insertSession(tx, { studyId: study, participantId: body.participantId, rigRevisionId: body.rigRevisionId, plannedAt, createdBy: by.id });
        await insertTrials(tx, id, body.trials);
        await appendLog(tx, id, entry(by, 'session planned', { trials: body.trials.length }));
        return sessionId.parse(id);
      });
      tellSession(made);
      return made;
    },

    async close(id: SessionId, by: Actor): Promise<void> {
      await db.transaction(async (tx) => {
        await requireOpenSession(tx, id);
        if ((await trialsInState(tx, id, runningStates)) > 0) throw refuse('SESSION_RUNNING');
        const unjudged = await trialsInState(tx, id, ['stopped']);
        if (unjudged > 0) throw refuse('SESSION_UNJUDGED', { count: unjudged });
        await setSessionState(tx, id, 'closed');
        await appendLog(tx, id, entry(by, 'session closed'));
      });
      tellSession(id);
    },

    async addTrial(id: SessionId, planned: PlannedTrial, by: Actor): Promise<TrialId> {
      const made = await db.transaction(async (tx) => {
        const session = await requireOpenSession(tx, id);
        await requireTasksAndConditions(tx, session.studyId, [planned]);
        const [trial] = await insertTrials(tx, id, [planned]);
        await appendLog(tx, id, entry(by, 'trial added', { trialId: trial }));
        return trialId.parse(trial);
      });
      tellSession(id);
      return made;
    },

    /** The first arming opens the session. */
    async arm(id: TrialId, device: DeviceId, by: Actor): Promise<void> {
      const session = await change(id, 'arm', async (tx, trial, held) => {
        const deviceName = await requireFreeDevice(tx, device, held);
        await moveTrial(tx, id, 'arm', { deviceId: device });
        if (held.state === 'planned') {
          await setSessionState(tx, held.id, 'open');
          await appendLog(tx, held.id, entry(by, 'session opened'));
        }
        await appendLog(tx, held.id, entry(by, 'trial armed', { trial: trial.number, device: deviceName }));
        return sessionId.parse(held.id);
      });
      // Told only now: a device that begins at once must find the arming in the book.
      const sent = control.arm(device, id);
      if (sent !== 'sent') {
        await disarm(id, by, 'the device was no longer free');
        throw refuse(sent === 'gone' ? 'DEVICE_AWAY' : 'DEVICE_BUSY', { device: 'chosen' });
      }
      tellTrial(id, session, 'armed');
    },

    disarm: (id: TrialId, by: Actor) => disarm(id, by, 'taken back'),

    /** Asks the device; the trial is stopped when the device has ended its run. */
    async stop(id: TrialId, by: Actor): Promise<void> {
      await change(id, 'end', async (tx, trial) => {
        const sent = control.stop(id);
        if (sent === 'gone') throw refuse('DEVICE_AWAY', { device: 'of this trial' });
        if (sent === 'not-recording') throw refuse('TRIAL_STATE', { state: trial.state });
        await appendLog(tx, trial.sessionId, entry(by, 'stop asked', { trial: trial.number }));
      });
    },

    async judge(id: TrialId, { outcome, reason }: BodyOf<typeof judgeTrial>, by: Actor): Promise<void> {
      if (outcome !== 'completed' && reason === '') throw refuse('OUTCOME_REASON');
      const session = await change(id, 'judge', async (tx, trial) => {
        await moveTrial(tx, id, 'judge', { outcome, outcomeReason: reason === '' ? null : reason, judgedBy: by.id, judgedAt: now() });
        await appendLog(tx, trial.sessionId, entry(by, 'outcome given', { trial: trial.number, outcome, ...(reason === '' ? {} : { reason }) }));
        return sessionId.parse(trial.sessionId);
      });
      tellTrial(id, session, 'judged');
    },

    async remove(id: TrialId, reason: string, by: Actor): Promise<void> {
      const session = await change(id, null, async (tx, trial) => {
        if (runningStates.includes(trial.state)) throw refuse('TRIAL_STATE', { state: trial.state });
        await markRemoved(tx, id, now());
        await appendLog(tx, trial.sessionId, entry(by, 'trial removed', { trial: trial.number, reason }));
        return sessionId.parse(trial.sessionId);
      });
      tellSession(session);
    },

    /** Rig of the session that a recording is about to be filed into. Asked before a long import; the filing asks again. */
    async rigForFiling(id: TrialId): Promise<{ rigRevisionId: string; rig: RigFile }> {
      return change(id, 'file', async (tx, _trial, held) => rigOfSession(tx, held.id));
    },

    /** Puts a whole recording that was made elsewhere into the book as this planned trial's. */
    async fileRecording(id: TrialId, recordingId: RecordingId, by: Actor): Promise<void> {
      const session = await change(id, 'file', async (tx, trial, held) => {
        await moveTrial(tx, id, 'file', {});
        await fileUnderTrial(tx, recordingId, id);
        if (held.state === 'planned') {
          await setSessionState(tx, held.id, 'open');
          await appendLog(tx, held.id, entry(by, 'session opened'));
        }
        await appendLog(tx, held.id, entry(by, 'recording filed', { trial: trial.number, recordingId }));
        return sessionId.parse(held.id);
      });
      tellTrial(id, session, 'stopped');
      bus.tell('recordingClosed', { recordingId, trialId: id });
    },
  };
}
