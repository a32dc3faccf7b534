import {
  addTrial, armTrial, closeSession, disarmTrial, getSession, getSessionLog, getTrial, judgeTrial, listSessions, listToday, planSession, removeTrial, stopTrial,
} from '@shared/api/sessions';
import type { Gate } from '../../auth';
import { type ApiRouter, serve } from '../../http';
import type { SessionReader } from './read-service';
import type { SessionService } from './service';

export function sessionRoutes(router: ApiRouter, sessions: SessionService, reader: SessionReader, gate: Pick<Gate, 'membershipsOf'>): void {
  serve(router, listToday, async ({ person }) => reader.today(await gate.membershipsOf(person)));
  serve(router, listSessions, async ({ membership }) => ({ sessions: await reader.list(membership) }));
  serve(router, planSession, async ({ params, body, person, membership }) => reader.get(await sessions.plan(params.studyId, body, person), membership));
  serve(router, getSession, ({ params, membership }) => reader.get(params.sessionId, membership));
  serve(router, getSessionLog, ({ params }) => reader.log(params.sessionId));
  serve(router, closeSession, async ({ params, person, membership }) => {
    await sessions.close(params.sessionId, person);
    return reader.get(params.sessionId, membership);
  });
  serve(router, addTrial, async ({ params, body, person, membership }) => reader.getTrialSummary(await sessions.addTrial(params.sessionId, body, person), membership));
  serve(router, getTrial, ({ params, membership }) => reader.getTrial(params.trialId, membership));
  serve(router, armTrial, async ({ params, body, person, membership, note }) => {
    note({ detail: { deviceId: body.deviceId } });
    await sessions.arm(params.trialId, body.deviceId, person);
    return reader.getTrialSummary(params.trialId, membership);
  });
  serve(router, disarmTrial, async ({ params, person, membership }) => {
    await sessions.disarm(params.trialId, person);
    return reader.getTrialSummary(params.trialId, membership);
  });
  serve(router, stopTrial, async ({ params, person, membership }) => {
    await sessions.stop(params.trialId, person);
    return reader.getTrialSummary(params.trialId, membership);
  });
  serve(router, judgeTrial, async ({ params, body, person, membership, note }) => {
    note({ detail: { ...body } });
    await sessions.judge(params.trialId, body, person);
    return reader.getTrialSummary(params.trialId, membership);
  });
  serve(router, removeTrial, async ({ params, body, person, note }) => {
    note({ detail: { ...body } });
    await sessions.remove(params.trialId, body.reason, person);
    return { done: true as const };
  });
}
