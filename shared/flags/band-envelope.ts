/**
 * Amplitude of shaking of the palm within a band, about two hundred times a second, sample by sample and without end effects
 * that look like shaking.
 *
 * The recording falls into segments: a hole of more than 20 ms in the measured positions ends one, a shorter one is
 * bridged by a straight line. The kernel is centred, so a value comes half a kernel later; at both ends of a segment
 * the positions are continued by point reflection (Gustafsson 1996), which keeps their slope.
 */
import { bandKernel, type BandKernel } from './band-kernel';

export type Envelope = { readonly timeUs: number; readonly amplitudeM: number };

export type EnvelopeState = {
  /** Samples of the segment so far. */
  count: number;
  lastUs: number;
  /**
   * Rings of the last 2 half + 1 samples, x, y, z one after another, each written twice one ring apart, so that the last
   * samples always lie in one piece; and their times.
   */
  positions: Float64Array;
  timesUs: Float64Array;
};

const longestBridgeS = 0.02;
const valuesPerS = 200;

export type BandEnvelope = {
  readonly hopUs: number;
  start(): EnvelopeState;
  copy(state: EnvelopeState): EnvelopeState;
  /** Changes the state it is given. */
  push(state: EnvelopeState, timeUs: number, x: number, y: number, z: number, out: Envelope[]): void;
  /** What is still to come from the samples so far, if nothing follows them. Does not change the state. */
  rest(state: EnvelopeState): Envelope[];
};

export function bandEnvelope(lowHz: number, highHz: number, rateHz: number): BandEnvelope {
  const kernel = bandKernel(lowHz, highHz, rateHz);
  const { half } = kernel;
  const ring = 2 * half + 1;
  const hop = Math.max(1, Math.round(rateHz / valuesPerS));
  const periodUs = 1e6 / rateHz;
  const longestBridge = Math.max(1, Math.floor(longestBridgeS * rateHz));
  const segment = new Float64Array(6 * ring);

  /** Amplitude at sample `centre` of the segment; `segment` is filled from the ring, ends reflected. */
  const at = (state: EnvelopeState, centre: number): Envelope => {
    const last = state.count - 1;
    const timeUs = state.timesUs[centre % ring] as number;
    if (centre >= half && centre + half <= last) return { timeUs, amplitudeM: magnitude(kernel, state.positions, 2 * ring, ((centre - half) % ring) + half) };
    for (let axis = 0; axis < 3; axis += 1) {
      const from = 2 * axis * ring;
      const value = (n: number) => state.positions[from + (n % ring)] as number;
      for (let k = -half; k <= half; k += 1) {
        const n = centre + k;
        segment[from + k + half] = n < 0 ? 2 * value(0) - value(-n) : n > last ? 2 * value(last) - value(2 * last - n) : value(n);
      }
    }
    return { timeUs, amplitudeM: magnitude(kernel, segment, 2 * ring, half) };
  };

  const append = (state: EnvelopeState, timeUs: number, x: number, y: number, z: number, out: Envelope[]): void => {
    const slot = state.count % ring;
    const { positions } = state;
    positions[slot] = x;
    positions[ring + slot] = x;
    positions[2 * ring + slot] = y;
    positions[3 * ring + slot] = y;
    positions[4 * ring + slot] = z;
    positions[5 * ring + slot] = z;
    state.timesUs[slot] = timeUs;
    state.count += 1;
    state.lastUs = timeUs;
    const centre = state.count - 1 - half;
    if (centre >= 0 && centre % hop === 0) out.push(at(state, centre));
  };

  const rest = (state: EnvelopeState): Envelope[] => {
    const out: Envelope[] = [];
    // Reflection needs as many samples as it makes up.
    if (state.count < half + 1) return out;
    const done = state.count - 1 - half;
    for (let centre = Math.floor(done / hop) * hop + hop; centre < state.count; centre += hop) out.push(at(state, centre));
    return out;
  };

  return {
    hopUs: hop * periodUs,
    start: () => ({ count: 0, lastUs: 0, positions: new Float64Array(6 * ring), timesUs: new Float64Array(ring) }),
    copy: (state) => ({ ...state, positions: state.positions.slice(), timesUs: state.timesUs.slice() }),
    push(state, timeUs, x, y, z, out) {
      if (!(x - x === 0 && y - y === 0 && z - z === 0)) return;
      if (state.count > 0) {
        const steps = Math.max(1, Math.round((timeUs - state.lastUs) / periodUs));
        if (steps - 1 > longestBridge) {
          out.push(...rest(state));
          state.count = 0;
        } else if (steps > 1) {
          bridge(state, steps, timeUs, [x, y, z], ring, (t, bx, by, bz) => append(state, t, bx, by, bz, out));
        }
      }
      append(state, timeUs, x, y, z, out);
    },
    rest,
  };
}

function bridge(
  state: EnvelopeState,
  steps: number,
  timeUs: number,
  to: readonly [number, number, number],
  ring: number,
  append: (timeUs: number, x: number, y: number, z: number) => void,
): void {
  const slot = (state.count - 1) % ring;
  const [x, y, z] = [0, 1, 2].map((axis) => state.positions[2 * axis * ring + slot] as number) as [number, number, number];
  const startUs = state.lastUs;
  for (let k = 1; k < steps; k += 1) {
    const s = k / steps;
    append(startUs + s * (timeUs - startUs), x + s * (to[0] - x), y + s * (to[1] - y), z + s * (to[2] - z));
  }
}

/**
 * The real part of the kernel is the same on both sides of its middle, the imaginary part the same with the other sign: two taps
 * are taken in one.
 *
 * @param stride from one axis to the next
 * @param middle of the window, within an axis
 */
function magnitude({ half, real, imaginary }: BandKernel, values: Float64Array, stride: number, middle: number): number {
  let power = 0;
  for (let axis = 0; axis < 3; axis += 1) {
    const at = axis * stride + middle;
    let re = (real[half] as number) * (values[at] as number);
    let im = 0;
    for (let k = 1; k <= half; k += 1) {
      const later = values[at + k] as number;
      const earlier = values[at - k] as number;
      re += (real[half + k] as number) * (later + earlier);
      im += (imaginary[half + k] as number) * (later - earlier);
    }
    power += re * re + im * im;
  }
  return Math.sqrt(power);
}
