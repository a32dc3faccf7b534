/** Judging flags: the worklist of a study's moments, and verdicts that supersede each other and are never overwritten. */
import { z } from 'zod';
import { flagId, recordingId, rigRevisionId, sessionId, studyId, trialId, wallTime } from './common';
import { route } from './contract';
import { flag } from './sessions';
import { condition } from './studies';
import { verdict, verdictId, verdictValue } from './verdict';

/** A flag with what somebody needs to judge it without opening its trial. */
export const moment = flag.extend({
  trialId,
  trialNumber: z.number().int(),
  task: z.string(),
  condition,
  sessionId,
  participantCode: z.string(),
  visit: z.number().int(),
  plannedAt: wallTime,
  recordingId,
  /** Last sample's time, s: a strip around the flag ends there. */
  durationS: z.number(),
  rateHz: z.number(),
  channels: z.array(z.string()),
  rigRevisionId,
  /** The one that holds: the newest that was not taken back; null: it waits to be judged. */
  verdict: verdict.nullable(),
  /** The newest entry of all, for saying what one has seen when judging. */
  seen: verdictId.nullable(),
});
export type Moment = z.infer<typeof moment>;

const inStudy = z.object({ studyId });

export const listMoments = route({
  id: 'moments.list',
  method: 'GET',
  path: '/api/studies/:studyId/moments',
  summary: 'Every flag of a study’s recordings with its newest verdict, oldest session first',
  params: inStudy,
  response: z.object({ moments: z.array(moment) }),
});

export const giveVerdicts = route({
  id: 'verdicts.give',
  method: 'POST',
  path: '/api/studies/:studyId/verdicts',
  summary: 'Judge flags, one or many; all are written or none. Refused where somebody judged one since it was read',
  params: inStudy,
  body: z.object({
    verdicts: z.array(z.object({
      flagId,
      /** withdrawn takes one’s own newest verdict back. */
      value: verdictValue.or(z.literal('withdrawn')),
      reason: z.string().trim().max(400, 'At most 400 characters').default(''),
      /** The newest verdict that the judge has seen; null: none. */
      seen: verdictId.nullable(),
    })).min(1, 'Nothing to judge').max(500, 'At most 500 at once'),
  }),
  response: z.object({ verdicts: z.array(z.object({ flagId, verdict: verdict.nullable(), seen: verdictId.nullable() })) }),
});

export const listVerdicts = route({
  id: 'verdicts.list',
  method: 'GET',
  path: '/api/trials/:trialId/verdicts',
  summary: 'Every verdict on the flags of a trial, oldest first, those that were superseded too',
  params: z.object({ trialId }),
  response: z.object({ verdicts: z.array(verdict.extend({ flagId })) }),
});
