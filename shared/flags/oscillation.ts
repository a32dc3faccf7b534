/**
 * Oscillation: the palm shakes within a band (20-50 Hz by default) and stands out from the recording's own floor.
 *
 * The amplitude in the band is compared with a multiple of the floor of the ten seconds before. The first two seconds
 * are held back until there is a floor. Begin and end are then set where the amplitude passes a quarter of the peak,
 * because the band's edges smear a strong burst by some tens of ms. Common practice, no source.
 */
import type { Chunk } from '../recording/chunk';
import { bandEnvelope, type BandEnvelope, type Envelope, type EnvelopeState } from './band-envelope';
import { secondsOf, type Detector, type DetectorContext } from './detector';
import type { Flag } from './flag';
import type { OscillationRule } from './rules';
import { addToFloor, copyFloor, floorAtStart, floorOf, type FloorState } from './running-floor';

const floorMemoryS = 10;
const floorLeastS = 2;
/** Shaking goes on until it falls below this share of the onset. */
const releaseShare = 0.6;
/** Begin and end lie where the amplitude passes this share of the peak. */
const edgeShare = 0.25;
/** So much of a shaking's begin and end is remembered to set its edges. */
const edgeMemoryS = 1;

type Shaking = {
  readonly releaseM: number;
  peakM: number;
  /** The first second of it. */
  readonly early: Envelope[];
  /** The last second in which it was above the release. */
  readonly late: Envelope[];
};

export type OscillationState = { envelope: EnvelopeState; floor: FloorState; held: Envelope[]; shaking: Shaking | null };

/** A recording too slow for the band (fewer than 2.5 samples a period of its lower edge) has no oscillation flags. */
export function oscillationDetector(rule: OscillationRule, rateHz: number): Detector<OscillationState | null> {
  const highHz = Math.min(rule.highHz, 0.45 * rateHz);
  if (rateHz < 2.5 * rule.lowHz || highHz <= rule.lowHz) return { start: () => null, step: () => [null, []], open: () => [], finish: () => [] };
  return detector(rule, bandEnvelope(rule.lowHz, highHz, rateHz));
}

function detector(rule: OscillationRule, envelope: BandEnvelope): Detector<OscillationState> {
  const perS = 1e6 / envelope.hopUs;
  const leastHeld = Math.round(floorLeastS * perS);

  const judge = (state: OscillationState, value: Envelope, flags: Flag[]): void => {
    const { amplitudeM, timeUs } = value;
    const shaking = state.shaking;
    if (shaking && amplitudeM >= shaking.releaseM) {
      remember(shaking, value, edgeMemoryS * perS);
      return;
    }
    if (shaking) {
      if (timeUs - lastOf(shaking) <= rule.mergeGapS * 1e6) return;
      flags.push(...flagOf(shaking));
      state.shaking = null;
    }
    const onsetM = Math.max(rule.leastAmplitudeM, rule.timesFloor * floorOf(state.floor));
    if (amplitudeM < onsetM) addToFloor(state.floor, amplitudeM);
    else {
      state.shaking = { releaseM: releaseShare * onsetM, peakM: 0, early: [], late: [] };
      remember(state.shaking, value, edgeMemoryS * perS);
    }
  };

  const takeIn = (state: OscillationState, values: readonly Envelope[], flags: Flag[]): void => {
    for (const value of values) {
      if (state.floor.filled > 0) judge(state, value, flags);
      else {
        state.held.push(value);
        if (state.held.length >= leastHeld) release(state, flags);
      }
    }
  };

  /** The held-back begin: its own floor first, then judged as if that had been known. */
  const release = (state: OscillationState, flags: Flag[]): void => {
    const held = state.held;
    state.held = [];
    for (const value of held) addToFloor(state.floor, value.amplitudeM);
    for (const value of held) judge(state, value, flags);
  };

  const flagOf = (shaking: Shaking): Flag[] => {
    const edgeM = edgeShare * shaking.peakM;
    const first = shaking.early.find((value) => value.amplitudeM >= edgeM) ?? (shaking.early[0] as Envelope);
    const last = shaking.late.findLast((value) => value.amplitudeM >= edgeM) ?? (shaking.late.at(-1) as Envelope);
    const lasted = last.timeUs + envelope.hopUs - first.timeUs;
    if (lasted < rule.minDurationS * 1e6 - 0.5) return [];
    return [{ kind: 'oscillation', startS: secondsOf(first.timeUs), endS: secondsOf(Math.round(last.timeUs + envelope.hopUs)), peak: shaking.peakM }];
  };

  const copy = (state: OscillationState): OscillationState => ({
    envelope: envelope.copy(state.envelope),
    floor: copyFloor(state.floor),
    held: state.held.slice(),
    shaking: state.shaking && { ...state.shaking, early: state.shaking.early.slice(), late: state.shaking.late.slice() },
  });

  return {
    start: () => ({ envelope: envelope.start(), floor: floorAtStart(Math.round(floorMemoryS * perS)), held: [], shaking: null }),
    step(before, chunk, context) {
      const state = copy(before);
      const values: Envelope[] = [];
      pushChunk(envelope, state.envelope, chunk, context, values);
      const flags: Flag[] = [];
      takeIn(state, values, flags);
      return [state, flags];
    },
    open: ({ shaking }) => (shaking ? flagOf(shaking).map((flag) => ({ ...flag, open: true })) : []),
    finish(before) {
      const state = copy(before);
      const flags: Flag[] = [];
      takeIn(state, envelope.rest(state.envelope), flags);
      if (state.held.length > 0) release(state, flags);
      return state.shaking ? [...flags, ...flagOf(state.shaking)] : flags;
    },
  };
}

function pushChunk(envelope: BandEnvelope, state: EnvelopeState, chunk: Chunk, { map }: DetectorContext, out: Envelope[]): void {
  const [x, y, z] = map.pose.slice(0, 3).map((index) => chunk.columns[index]) as [Float32Array, Float32Array, Float32Array];
  for (let i = 0; i < chunk.count; i += 1) envelope.push(state, chunk.timesUs[i] as number, x[i] as number, y[i] as number, z[i] as number, out);
}

function remember(shaking: Shaking, value: Envelope, most: number): void {
  shaking.peakM = Math.max(shaking.peakM, value.amplitudeM);
  if (shaking.early.length < most) shaking.early.push(value);
  shaking.late.push(value);
  if (shaking.late.length > most) shaking.late.shift();
}

const lastOf = (shaking: Shaking): number => (shaking.late.at(-1) as Envelope).timeUs;
