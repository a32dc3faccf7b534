/**
 * Rules: what counts as a flag, as data. A study's rule set replaces the defaults; a kind set to null is not looked for.
 */
import { z } from 'zod';
import type { RigModel } from '../rig/rig-model';

const duration = z.number().nonnegative().max(60);
/** Two flags of one cable closer than this are one; 0 merges nothing beyond the hysteresis. */
const mergeGapS = duration.default(0);

const minDurationS = z.number().positive({ error: 'A duration of zero would flag every single sample; give at least one sample period.' }).max(60);

const slackRule = z
  .strictObject({ onsetN: z.number().positive(), releaseN: z.number().positive(), minDurationS, mergeGapS })
  .refine((rule) => rule.releaseN >= rule.onsetN, { path: ['releaseN'], error: 'Slack ends above releaseN, so releaseN must not lie below onsetN.' });

const saturationRule = z
  .strictObject({ onsetN: z.number().positive(), releaseN: z.number().positive(), minDurationS, mergeGapS })
  .refine((rule) => rule.releaseN <= rule.onsetN, { path: ['releaseN'], error: 'Saturation ends below releaseN, so releaseN must not lie above onsetN.' });

const gapRule = z.strictObject({ periods: z.number().gt(1, { error: 'Every step is one period long; a gap needs more than 1 period.' }).max(1000) });

const slipRule = z
  .strictObject({ departureM: z.number().positive(), releaseM: z.number().positive(), minDurationS, mergeGapS })
  .refine((rule) => rule.releaseM <= rule.departureM, { path: ['releaseM'], error: 'A slip ends below releaseM, so releaseM must not lie above departureM.' });

const oscillationRule = z
  .strictObject({
    lowHz: z.number().positive(),
    highHz: z.number().positive(),
    /** How far the shaking stands out from the recording's own floor, as a multiple of it. */
    timesFloor: z.number().gt(1),
    /** Shaking smaller than this is none, however quiet the recording. */
    leastAmplitudeM: z.number().positive(),
    minDurationS,
    mergeGapS,
  })
  .refine((rule) => rule.highHz > rule.lowHz, { path: ['highHz'], error: 'The band needs highHz above lowHz.' });

export const rulesSchema = z.strictObject({
  format: z.literal('tautbook.rules/1'),
  slack: slackRule.nullable(),
  saturation: saturationRule.nullable(),
  gap: gapRule.nullable(),
  slip: slipRule.nullable(),
  oscillation: oscillationRule.nullable(),
});
export type Rules = z.infer<typeof rulesSchema>;
export type SlackRule = NonNullable<Rules['slack']>;
export type SaturationRule = NonNullable<Rules['saturation']>;
export type GapRule = NonNullable<Rules['gap']>;
export type SlipRule = NonNullable<Rules['slip']>;
export type OscillationRule = NonNullable<Rules['oscillation']>;

/** A rules file may leave kinds out; the defaults of the rig stand for them. */
export const rulesFileSchema = rulesSchema.partial().required({ format: true });

export type RulesFault = { readonly code: 'RULES'; readonly path: string; readonly message: string };
export type RulesResult = { readonly ok: true; readonly rules: Rules } | { readonly ok: false; readonly faults: readonly RulesFault[] };

/** The rules that hold when a study has none (CONTRACTS.md section 4). */
export function defaultRules(rig: Pick<RigModel, 'slackBelow' | 'tensionMax'>): Rules {
  return {
    format: 'tautbook.rules/1',
    slack: { onsetN: rig.slackBelow, releaseN: rig.slackBelow + 0.2, minDurationS: 0.01, mergeGapS: 0 },
    saturation: { onsetN: rig.tensionMax - 0.05, releaseN: rig.tensionMax - 0.25, minDurationS: 0.01, mergeGapS: 0 },
    gap: { periods: 1.5 },
    slip: { departureM: 0.001, releaseM: 0.0009, minDurationS: 0.05, mergeGapS: 0 },
    oscillation: { lowHz: 20, highHz: 50, timesFloor: 8, leastAmplitudeM: 25e-6, minDurationS: 0.2, mergeGapS: 0.1 },
  };
}

/** Rules from a file's JSON, kinds left out filled from the rig; or every fault with where it is. */
export function parseRules(value: unknown, rig: Pick<RigModel, 'slackBelow' | 'tensionMax'>): RulesResult {
  const parsed = rulesFileSchema.safeParse(value);
  if (parsed.success) return { ok: true, rules: { ...defaultRules(rig), ...parsed.data } };
  return { ok: false, faults: parsed.error.issues.map((issue) => ({ code: 'RULES', path: issue.path.join('.'), message: issue.message })) };
}
