/** Sessions and trials as their readers see them. */
import { type LogEntry, type Session, type SessionSummary, type Trial, type TrialSummary } from '@shared/api/sessions';
import { studyId, type StudyId, trialId } from '@shared/api/common';
import type { ResponseOf } from '@shared/api/contract';
import type { getSessionLog, listToday } from '@shared/api/sessions';
import { may, type Membership, seesSessions } from '../../auth';
import type { Database } from '../../db/engine';
import { refuse } from './errors';
import { chainHolds } from './log-chain';
import { logOf } from './log-queries';
import {
  findRecordingOfTrial, findSession, findTrial, sessionsById, sessionsOfStudy, sessionsToRun, type TrialRow, trialsOfSession, trialsRecorded, trialsToJudge,
} from './queries';
import { toRecordingMeta, toSessionSummary, toTrialSummary } from './views';

const dayMs = 24 * 3600 * 1000;
const recentTrials = 12;

export type SessionReader = ReturnType<typeof createSessionReader>;

export function createSessionReader(db: Database, now: () => Date) {
  async function getSummary(id: string): Promise<SessionSummary> {
    const row = await findSession(db, id);
    if (row === null) throw refuse('SESSION_UNKNOWN');
    return toSessionSummary(row);
  }

  async function requireTrial(id: string): Promise<TrialRow> {
    const row = await findTrial(db, id);
    if (row === null) throw refuse('TRIAL_UNKNOWN');
    return row;
  }

  async function withSessions(rows: readonly TrialRow[], blindIn: ReadonlySet<StudyId>): Promise<(TrialSummary & { session: SessionSummary })[]> {
    if (rows.length === 0) return [];
    const found = await sessionsById(db, [...new Set(rows.map((row) => row.sessionId))]);
    const byId = new Map(found.map((row) => [row.id, toSessionSummary(row)]));
    return rows.flatMap((row) => {
      const session = byId.get(row.sessionId);
      return session ? [{ ...toTrialSummary(row, blindIn.has(session.studyId)), session }] : [];
    });
  }

  return {
    async list(membership: Membership): Promise<SessionSummary[]> {
      if (seesSessions(membership.role) === 'none') return [];
      return (await sessionsOfStudy(db, membership.studyId)).map(toSessionSummary);
    },

    async get(id: string, membership: Pick<Membership, 'blind'>): Promise<Session> {
      const summary = await getSummary(id);
      const rows = await trialsOfSession(db, id);
      return { ...summary, trials: rows.map((row) => toTrialSummary(row, membership.blind)) };
    },

    async getTrialSummary(id: string, membership: Pick<Membership, 'blind'>): Promise<TrialSummary> {
      return toTrialSummary(await requireTrial(id), membership.blind);
    },

    async getTrial(id: string, membership: Membership): Promise<Trial> {
      const row = await requireTrial(id);
      const [session, neighbours, recording] = await Promise.all([getSummary(row.sessionId), trialsOfSession(db, row.sessionId), findRecordingOfTrial(db, id)]);
      const place = neighbours.findIndex((each) => each.id === id);
      const neighbour = (step: number) => {
        const found = neighbours[place + step];
        return found ? trialId.parse(found.id) : null;
      };
      const isOpen = session.state === 'planned' || session.state === 'open';
      return {
        ...toTrialSummary(row, membership.blind),
        session,
        trialsInSession: neighbours.length,
        recording: recording && toRecordingMeta(recording),
        previous: neighbour(-1),
        next: neighbour(1),
        may: { note: may.note(membership.role), run: isOpen && may.run(membership.role), remove: isOpen && may.remove(membership.role), export: may.export(membership.role), judge: may.judge(membership.role) },
      };
    },

    /** @param memberships of the reader, those that count */
    async today(memberships: readonly Membership[]): Promise<ResponseOf<typeof listToday>> {
      const seen = memberships.filter((each) => seesSessions(each.role) === 'all').map((each) => studyId.parse(each.studyId));
      if (seen.length === 0) return { sessions: [], toJudge: [], recent: [] };
      const judged = memberships.filter((each) => may.run(each.role)).map((each) => each.studyId);
      const blindIn = new Set(memberships.filter((each) => each.blind).map((each) => each.studyId));
      const [sessions, toJudge, recent] = await Promise.all([
        sessionsToRun(db, seen, new Date(now().getTime() + dayMs)),
        judged.length > 0 ? trialsToJudge(db, judged) : [],
        trialsRecorded(db, seen, recentTrials),
      ]);
      return { sessions: sessions.map(toSessionSummary), toJudge: await withSessions(toJudge, blindIn), recent: await withSessions(recent, blindIn) };
    },

    async log(id: string): Promise<ResponseOf<typeof getSessionLog>> {
      const rows = await logOf(db, id);
      const entries: LogEntry[] = rows.map(({ n, at, who, what, detail, hash }) => ({ n, at: at.toISOString(), who, what, detail, hash }));
      return { entries, holds: chainHolds(id, rows) };
    },
  };
}
