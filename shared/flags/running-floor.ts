/**
 * The recording's own floor: the lower quartile of the last ten seconds of amplitudes outside any shaking, kept as a
 * ring of logarithmic classes with their histogram, so that it costs the same however long the recording is.
 */
export type FloorState = { ring: Uint8Array; filled: number; next: number; histogram: Uint16Array };

const classesPerOctave = 8;
const smallestM = 1e-9;
const classes = 256;

export const floorAtStart = (memory: number): FloorState => ({ ring: new Uint8Array(memory), filled: 0, next: 0, histogram: new Uint16Array(classes) });

export const copyFloor = (state: FloorState): FloorState => ({ ...state, ring: state.ring.slice(), histogram: state.histogram.slice() });

/** Changes the state it is given. */
export function addToFloor(state: FloorState, amplitudeM: number): void {
  const cls = Math.min(classes - 1, Math.max(0, Math.round(classesPerOctave * Math.log2(Math.max(amplitudeM, smallestM) / smallestM))));
  const { ring, histogram, next } = state;
  if (state.filled === ring.length) {
    const old = ring[next] as number;
    histogram[old] = (histogram[old] as number) - 1;
  } else state.filled += 1;
  ring[next] = cls;
  histogram[cls] = (histogram[cls] as number) + 1;
  state.next = (next + 1) % ring.length;
}

/** Lower quartile, m, within 5 %; 0 when nothing was added. */
export function floorOf({ filled, histogram }: FloorState): number {
  const wanted = filled / 4;
  let sum = 0;
  for (let cls = 0; cls < classes && filled > 0; cls += 1) {
    sum += histogram[cls] as number;
    if (sum >= wanted) return smallestM * 2 ** (cls / classesPerOctave);
  }
  return 0;
}
