/** Finds the decimal grid that a sensor's values lie on: the fewest decimals d with every value = float32(k / 10^d), k whole. */
import { powersOfTen } from './csv-number';

export type DecimalGrid = {
  readonly decimals: number;
  /** k of each value; where a value is off the grid, the k before it. */
  readonly integers: Int32Array;
  readonly isStray: Uint8Array;
  readonly strays: number;
};

const maxDecimals = 9;
const probes = 8;
/** Of the values that are numbers, this share may be off the grid before the grid is given up. */
const strayShare = 1 / 16;
/** From 2^23 grid steps on, float32 no longer tells neighbours on the grid apart: every value would be "on" it, and nothing gained. */
const floatSteps = 1 << 23;

export function findGrid(column: Float32Array, bits: Uint32Array, count: number): DecimalGrid | null {
  let decimals = fewestForProbes(column, count);
  while (decimals <= maxDecimals) {
    const grid = layOnGrid(column, bits, count, decimals);
    if (grid) return grid;
    decimals += 1;
  }
  return null;
}

function fewestForProbes(column: Float32Array, count: number): number {
  let decimals = 0;
  const stride = Math.max(1, Math.floor(count / probes));
  let off = 0;
  for (let i = 0; i < count; i += stride) {
    const value = column[i] as number;
    if (value !== value) continue;
    let d = decimals;
    while (d <= maxDecimals && !isOn(value, powersOfTen[d] as number)) d += 1;
    if (d <= maxDecimals) decimals = d;
    else if ((off += 1) > 1) return maxDecimals + 1;
  }
  return decimals;
}

function isOn(value: number, scale: number): boolean {
  const k = (value * scale + (value < 0 ? -0.5 : 0.5)) | 0;
  return Math.fround(k / scale) === value && k < floatSteps && k > -floatSteps;
}

function layOnGrid(column: Float32Array, bits: Uint32Array, count: number, decimals: number): DecimalGrid | null {
  const scale = powersOfTen[decimals] as number;
  const integers = new Int32Array(count);
  const isStray = new Uint8Array(count);
  const mayMiss = Math.floor(count * strayShare);
  let missed = 0;
  let strays = 0;
  let before = 0;
  let firstOn = -1;
  for (let i = 0; i < count; i += 1) {
    const value = column[i] as number;
    const k = (value * scale + (value < 0 ? -0.5 : 0.5)) | 0;
    // Negative zero passes the comparison but loses its sign as an integer.
    if (Math.fround(k / scale) === value && k < floatSteps && k > -floatSteps && (k !== 0 || bits[i] === 0)) {
      if (firstOn < 0) firstOn = i;
      integers[i] = before = k;
    } else {
      integers[i] = before;
      isStray[i] = 1;
      strays += 1;
      if (value === value && value !== 0 && (missed += 1) > mayMiss) return null;
    }
  }
  if (firstOn < 0) return null;
  integers.fill(integers[firstOn] as number, 0, firstOn);
  return { decimals, integers, isStray, strays };
}
