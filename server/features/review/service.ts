/** The worklist of flags and what people judge of them. */
import { v7 } from 'uuid';
import { conditionId, flagId, personId, recordingId, rigRevisionId, sessionId, type StudyId, trialId } from '@shared/api/common';
import type { BodyOf, ResponseOf } from '@shared/api/contract';
import type { giveVerdicts, listVerdicts, Moment } from '@shared/api/review';
import { verdict, type Verdict, type VerdictId } from '@shared/api/verdict';
import type { Database } from '../../db/engine';
import type { Bus } from '../../live/bus';
import { refuse } from './errors';
import { holdFlags, insertVerdicts, type MomentRow, momentsOf, type VerdictRow, verdictsOfStudy, verdictsOfTrial, verdictsOn } from './queries';
import { standingVerdict } from './standing';

const US = 1e6;

const toVerdict = ({ id, authorId, author, value, reason, at }: Omit<VerdictRow, 'flagId'>): Verdict =>
  verdict.parse({ id, by: { id: personId.parse(authorId), name: author }, value, reason, at: at.toISOString() });

const verdictIdOf = (row: VerdictRow | undefined): VerdictId | null => (row === undefined ? null : (row.id as VerdictId));

/** @param rows verdicts on one flag, oldest first */
function stateOf(rows: readonly VerdictRow[]): Pick<Moment, 'verdict' | 'seen'> {
  const standing = standingVerdict(rows);
  return { verdict: standing === null ? null : toVerdict(standing), seen: verdictIdOf(rows.at(-1)) };
}

function byFlag(rows: readonly VerdictRow[]): Map<string, VerdictRow[]> {
  const groups = new Map<string, VerdictRow[]>();
  for (const row of rows) groups.set(row.flagId, [...(groups.get(row.flagId) ?? []), row]);
  return groups;
}

const toMoment = (row: MomentRow, verdicts: readonly VerdictRow[], blind: boolean): Moment => ({
  id: flagId.parse(row.id), kind: row.kind, cable: row.cable, startS: row.startS, endS: row.endS, peak: row.peak, severity: row.severity, cause: row.cause,
  trialId: trialId.parse(row.trialId), trialNumber: row.trialNumber, task: row.task,
  condition: { id: conditionId.parse(row.condition.id), blindCode: row.condition.blindCode, label: blind ? null : row.condition.label },
  sessionId: sessionId.parse(row.sessionId), participantCode: row.participantCode, visit: row.visit, plannedAt: row.plannedAt.toISOString(),
  recordingId: recordingId.parse(row.recordingId), durationS: row.lastUs / US, rateHz: row.rateHz, channels: row.channels,
  rigRevisionId: rigRevisionId.parse(row.rigRevisionId),
  ...stateOf(verdicts),
});

export type ReviewService = ReturnType<typeof createReviewService>;

export function createReviewService({ db, bus, now }: { db: Database; bus: Bus; now: () => Date }) {
  return {
    async moments(study: StudyId, reader: { blind: boolean }): Promise<Moment[]> {
      const [rows, verdicts] = [await momentsOf(db, study), byFlag(await verdictsOfStudy(db, study))];
      return rows.map((row) => toMoment(row, verdicts.get(row.id) ?? [], reader.blind));
    },

    /** All or none: a judge must know what of theirs is in the record. */
    async give(study: StudyId, { verdicts: given }: BodyOf<typeof giveVerdicts>, by: { id: string; name: string }): Promise<ResponseOf<typeof giveVerdicts>> {
      const ids = [...new Set(given.map((each) => each.flagId as string))];
      const touched = await db.transaction(async (tx) => {
        const held = await holdFlags(tx, study, ids);
        if (held.length < ids.length) throw refuse('FLAG_UNKNOWN', { count: ids.length - held.length });
        const before = byFlag(await verdictsOn(tx, ids));
        const newest = (id: string) => before.get(id)?.at(-1);
        const overtaken = given.filter((each) => verdictIdOf(newest(each.flagId)) !== each.seen);
        if (overtaken.length > 0) {
          throw refuse('VERDICT_NEWER', { count: overtaken.length }, overtaken.slice(0, 20).map((each) => {
            const row = newest(each.flagId);
            const said = row === undefined ? 'no verdict any more' : `${row.author}: ${row.value}${row.reason === '' ? '' : `, ${row.reason}`}`;
            return { code: 'VERDICT_NEWER', path: each.flagId, message: said };
          }));
        }
        if (given.some((each) => each.value === 'withdrawn' && standingVerdict(before.get(each.flagId) ?? [])?.authorId !== by.id)) throw refuse('VERDICT_NOT_YOURS');
        const at = now();
        await insertVerdicts(tx, given.map(({ flagId: on, value, reason }) => ({ id: v7(), flagId: on, authorId: by.id, value, reason, at })));
        return held;
      });
      for (const trial of new Set(touched.map((each) => each.trialId))) bus.tell('verdicts', { studyId: study, trialId: trialId.parse(trial) });
      const after = byFlag(await verdictsOn(db, ids));
      return { verdicts: ids.map((id) => ({ flagId: flagId.parse(id), ...stateOf(after.get(id) ?? []) })) };
    },

    /** How flags stand, by their ids; one that nobody judged is not in it. */
    async standing(flagIds: readonly string[]): Promise<ReadonlyMap<string, Pick<Moment, 'verdict' | 'seen'>>> {
      if (flagIds.length === 0) return new Map();
      return new Map([...byFlag(await verdictsOn(db, flagIds))].map(([id, rows]) => [id, stateOf(rows)]));
    },

    async ofTrial(trial: string): Promise<ResponseOf<typeof listVerdicts>> {
      return { verdicts: (await verdictsOfTrial(db, trial)).map((row) => ({ ...toVerdict(row), flagId: flagId.parse(row.flagId) })) };
    },
  };
}
