/** Finds the decimal grid that a sensor's values lie on: the fewest decimals d with every value = float32(k / 10^d), k whole. */

export type DecimalGrid = {
  readonly decimals: number;
  /** k of each value; where a value is off the grid, the k before it. */
  readonly integers: Int32Array;
  readonly isStray: Uint8Array;
  readonly strays: number;
  /** The grid is as fine as float32 itself somewhere, so that plain bit patterns could be cheaper. */
  readonly finerThanFloat: boolean;
};

const maxDecimals = 9;
const probes = 8;
/** Of the values that are numbers, this share may be off the grid before the grid is given up. */
const strayShare = 1 / 16;
/** Beyond 2^23 grid steps, float32 no longer tells neighbours on the grid apart. */
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
    while (d <= maxDecimals && !isOn(value, 10 ** d)) d += 1;
    if (d <= maxDecimals) decimals = d;
    else if ((off += 1) > 1) return maxDecimals + 1;
  }
  return decimals;
}

function isOn(value: number, scale: number): boolean {
  const k = (value * scale + (value < 0 ? -0.5 : 0.5)) | 0;
  return Math.fround(k / scale) === value;
}

function layOnGrid(column: Float32Array, bits: Uint32Array, count: number, decimals: number): DecimalGrid | null {
  const scale = 10 ** decimals;
  const integers = new Int32Array(count);
  const isStray = new Uint8Array(count);
  const mayMiss = Math.floor(count * strayShare);
  let missed = 0;
  let strays = 0;
  let before = 0;
  let largest = 0;
  let firstOn = -1;
  for (let i = 0; i < count; i += 1) {
    const value = column[i] as number;
    const k = (value * scale + (value < 0 ? -0.5 : 0.5)) | 0;
    // Negative zero passes the comparison but loses its sign as an integer.
    if (Math.fround(k / scale) === value && (k !== 0 || bits[i] === 0)) {
      if (firstOn < 0) firstOn = i;
      integers[i] = before = k;
      largest |= k < 0 ? -k : k;
    } else {
      integers[i] = before;
      isStray[i] = 1;
      strays += 1;
      if (value === value && value !== 0 && (missed += 1) > mayMiss) return null;
    }
  }
  if (firstOn < 0) return null;
  integers.fill(integers[firstOn] as number, 0, firstOn);
  return { decimals, integers, isStray, strays, finerThanFloat: (largest >>> 0) >= floatSteps };
}
