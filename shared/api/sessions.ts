/** Sessions (visits), their planned and recorded trials, and the session's own log. */
import { z } from 'zod';
import { causeKinds, severities } from '../flags';
import { condition, task } from './studies';
import {
  conditionId, deviceId, done, flagId, line, participantId, recordingId, rigRevisionId, sessionId, studyId, taskId, trialId, wallTime,
} from './common';
import { route } from './contract';
import { verdict, verdictId } from './verdict';

export const outcome = z.enum(['completed', 'aborted', 'void']);
export type Outcome = z.infer<typeof outcome>;

/**
 * planned -> armed -> recording -> stopped -> judged. `stopped` is recorded and waits for its outcome;
 * `away` is recording whose device has lost the link and not gone on with it yet.
 */
export const trialState = z.enum(['planned', 'armed', 'recording', 'away', 'stopped', 'judged']);
export type TrialState = z.infer<typeof trialState>;

export const sessionState = z.enum(['planned', 'open', 'closed', 'signed']);

export const recordingMeta = z.object({
  id: recordingId,
  state: z.enum(['growing', 'closed']),
  rateHz: z.number(),
  channels: z.array(z.string()),
  samples: z.number().int(),
  /** Last sample's time since the start, device clock, s. */
  durationS: z.number(),
  gaps: z.array(z.object({ startS: z.number(), endS: z.number(), missing: z.number().int() })),
  marks: z.array(z.object({ atS: z.number(), label: z.string() })),
  /** SHA-256 over the samples, hex; null while it grows. */
  digest: z.string().nullable(),
  /** How it ended: done, stopped, fault as the device said; lost when a rule closed it. */
  endReason: z.enum(['done', 'stopped', 'fault', 'lost']).nullable(),
  /** Server's wall time of the first sample and its uncertainty. */
  startedAt: wallTime,
  startUncertaintyUs: z.number().nullable(),
  rigRevisionId,
  deviceName: z.string(),
});
export type RecordingMeta = z.infer<typeof recordingMeta>;

export const trialSummary = z.object({
  id: trialId,
  number: z.number().int().positive(),
  state: trialState,
  outcome: outcome.nullable(),
  outcomeReason: z.string().nullable(),
  task,
  condition,
  durationS: z.number().nullable(),
  flags: z.number().int(),
  notes: z.number().int(),
  deviceId: deviceId.nullable(),
  deviceName: z.string().nullable(),
});
export type TrialSummary = z.infer<typeof trialSummary>;

export const sessionSummary = z.object({
  id: sessionId,
  studyId,
  studyCode: z.string(),
  studyTitle: z.string(),
  participantId,
  participantCode: z.string(),
  visit: z.number().int().positive(),
  state: sessionState,
  plannedAt: wallTime,
  rigRevisionId,
  rigTitle: z.string(),
  rigRevision: z.number().int(),
  trialsPlanned: z.number().int(),
  trialsRecorded: z.number().int(),
  flags: z.number().int(),
});
export type SessionSummary = z.infer<typeof sessionSummary>;

export const session = sessionSummary.extend({ trials: z.array(trialSummary) });
export type Session = z.infer<typeof session>;

export const trial = trialSummary.extend({
  session: sessionSummary,
  trialsInSession: z.number().int(),
  recording: recordingMeta.nullable(),
  /** Neighbours in the session, for leafing. */
  previous: trialId.nullable(),
  next: trialId.nullable(),
  may: z.object({ note: z.boolean(), run: z.boolean(), remove: z.boolean(), export: z.boolean(), judge: z.boolean() }),
});
export type Trial = z.infer<typeof trial>;

export const logEntry = z.object({
  n: z.number().int().nonnegative(),
  at: wallTime,
  who: z.string(),
  what: z.string(),
  detail: z.record(z.string(), z.unknown()),
  /** SHA-256 over the canonical JSON of the entry with the hash before it, hex. */
  hash: z.string(),
});
export type LogEntry = z.infer<typeof logEntry>;

const inStudy = z.object({ studyId });
const inSession = z.object({ sessionId });
const onTrial = z.object({ trialId });

export const listSessions = route({
  id: 'sessions.list',
  method: 'GET',
  path: '/api/studies/:studyId/sessions',
  summary: 'Sessions of a study, newest first',
  params: inStudy,
  response: z.object({ sessions: z.array(sessionSummary) }),
});

export const listToday = route({
  id: 'sessions.today',
  method: 'GET',
  path: '/api/today',
  summary: 'What waits for the reader today: sessions planned or open, trials without an outcome, latest recorded trials',
  response: z.object({
    sessions: z.array(sessionSummary),
    toJudge: z.array(trialSummary.extend({ session: sessionSummary })),
    recent: z.array(trialSummary.extend({ session: sessionSummary })),
  }),
});

export const planSession = route({
  id: 'sessions.plan',
  method: 'POST',
  path: '/api/studies/:studyId/sessions',
  summary: 'Plan a session with its trials',
  params: inStudy,
  body: z.object({
    participantId,
    rigRevisionId,
    plannedAt: wallTime,
    trials: z.array(z.object({ taskId, conditionId })).max(200),
  }),
  response: session,
});

export const getSession = route({ id: 'sessions.get', method: 'GET', path: '/api/sessions/:sessionId', summary: 'One session with its trials', params: inSession, response: session });

export const closeSession = route({ id: 'sessions.close', method: 'POST', path: '/api/sessions/:sessionId/close', summary: 'Close a session after its last trial', params: inSession, response: session });

export const getSessionLog = route({
  id: 'sessions.log',
  method: 'GET',
  path: '/api/sessions/:sessionId/log',
  summary: 'The append-only log of a session and whether its chain holds',
  params: inSession,
  response: z.object({ entries: z.array(logEntry), holds: z.boolean() }),
});

export const addTrial = route({
  id: 'trials.add',
  method: 'POST',
  path: '/api/sessions/:sessionId/trials',
  summary: 'Add a trial that was not planned',
  params: inSession,
  body: z.object({ taskId, conditionId }),
  response: trialSummary,
});

export const getTrial = route({ id: 'trials.get', method: 'GET', path: '/api/trials/:trialId', summary: 'One trial with its recording', params: onTrial, response: trial });

export const armTrial = route({
  id: 'trials.arm',
  method: 'POST',
  path: '/api/trials/:trialId/arm',
  summary: 'Arm a trial on a connected device: the device may now begin it',
  params: onTrial,
  body: z.object({ deviceId }),
  response: trialSummary,
});

export const disarmTrial = route({ id: 'trials.disarm', method: 'POST', path: '/api/trials/:trialId/disarm', summary: 'Take the arming back', params: onTrial, response: trialSummary });

export const stopTrial = route({ id: 'trials.stop', method: 'POST', path: '/api/trials/:trialId/stop', summary: 'Ask the device to stop the running trial', params: onTrial, response: trialSummary });

export const judgeTrial = route({
  id: 'trials.judge',
  method: 'PUT',
  path: '/api/trials/:trialId/outcome',
  summary: 'Give a recorded trial its outcome; aborted and void need a reason',
  params: onTrial,
  body: z.object({ outcome, reason: z.string().trim().max(400).default('') }),
  response: trialSummary,
});

export const removeTrial = route({
  id: 'trials.remove',
  method: 'DELETE',
  path: '/api/trials/:trialId',
  summary: 'Take a trial out of its session with a reason; its recording is kept, the trial no longer shows',
  params: onTrial,
  body: z.object({ reason: line(400) }),
  response: done,
});

/** Kinds of flag; which of them are found so far depends on the detectors of the rule revision. */
export const flagKind = z.enum(['slack', 'saturation', 'near-limit', 'gap', 'slip', 'oscillation', 'unreachable', 'active', 'drop']);
export type FlagKind = z.infer<typeof flagKind>;

export const flag = z.object({
  id: flagId,
  kind: flagKind,
  cable: z.number().int().positive().nullable(),
  startS: z.number(),
  endS: z.number(),
  /** Lowest tension of a slack, highest of a saturation (N); step of a slip (m); kinds without one: null. */
  peak: z.number().nullable(),
  /** Null: found before flags had one. */
  severity: z.enum(severities).nullable(),
  /** Why it happened, in short; null: not looked into. */
  cause: z.object({ kind: z.enum(causeKinds), sentence: z.string() }).nullable(),
});
export type Flag = z.infer<typeof flag>;

/** A flag of a closed recording, as people judged it. */
export const judgedFlag = flag.extend({
  /** The one that holds; null: nobody judged it, or all took theirs back. */
  verdict: verdict.nullable(),
  /** The newest entry of all, for saying what one has seen when judging. */
  seen: verdictId.nullable(),
});
export type JudgedFlag = z.infer<typeof judgedFlag>;

export const listFlags = route({
  id: 'flags.list',
  method: 'GET',
  path: '/api/trials/:trialId/flags',
  summary: 'Flags of a closed recording, by start',
  params: onTrial,
  response: z.object({
    /** pending while the recording is being looked through. */
    state: z.enum(['growing', 'pending', 'found']),
    flags: z.array(judgedFlag),
  }),
});
