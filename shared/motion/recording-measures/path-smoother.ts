/** Half the length of the longer of the two smoothing kernels, in seconds. */
const HALF_LENGTH_S = 0.3;
const FINE_HALF_LENGTH_S = 0.08;
/** Keeps movement, its smoothness (up to 10 Hz) and tremor; takes sensor noise away. */
const FINE_HZ = 20;
/** Keeps the movement that was meant; takes tremor away. */
const COARSE_HZ = 5;

/** One smoothed sample: position with tremor and without, and the grasp as it was. */
export type SmoothedSample = (
  fineX: number,
  fineY: number,
  fineZ: number,
  coarseX: number,
  coarseY: number,
  coarseZ: number,
  grasp: number,
) => void;

/** Smooths one stretch after another without shifting it in time, at the memory of 0.6 s. */
export interface PathSmoother {
  push(x: number, y: number, z: number, grasp: number): void;
  /** Ends a stretch: what still waits for its neighbours comes out. @returns false when the stretch was too short to smooth */
  endStretch(): boolean;
}

/**
 * Symmetric low-pass kernels (windowed sinc, so no phase) run over a path as it comes in.
 *
 * Ends of a stretch are continued by their odd mirror image, so that a steady movement stays steady. Output lags input by
 * 0.3 s of samples; the result does not depend on how the samples were cut into chunks.
 *
 * @param rateHz of the samples pushed
 * @param emit   takes every smoothed sample in order
 * @source Harris 1978 (Hamming window); FIR design by windowing, e.g. Oppenheim and Schafer 1989
 */
export function pathSmoother(rateHz: number, emit: SmoothedSample): PathSmoother {
  const half = Math.max(1, Math.round(HALF_LENGTH_S * rateHz));
  const fine = lowPassKernel(Math.max(1, Math.round(FINE_HALF_LENGTH_S * rateHz)), Math.min(FINE_HZ / rateHz, 0.4));
  const coarse = lowPassKernel(half, Math.min(COARSE_HZ / rateHz, 0.4));
  const size = 2 * half + 1;
  const columns = [new Float64Array(4 * size), new Float64Array(4 * size), new Float64Array(4 * size)] as const;
  const [xs, ys, zs] = columns;
  const grasps = new Float64Array(4 * size);
  let filled = 0;
  let centre = half;
  let received = 0;

  const smooth = (column: Float64Array, kernel: Float64Array): number => {
    let sum = (kernel[0] as number) * (column[centre] as number);
    for (let k = 1; k < kernel.length; k++) {
      sum += (kernel[k] as number) * ((column[centre - k] as number) + (column[centre + k] as number));
    }
    return sum;
  };
  const emitReady = (): void => {
    while (centre + half < filled) {
      emit(
        smooth(xs, fine),
        smooth(ys, fine),
        smooth(zs, fine),
        smooth(xs, coarse),
        smooth(ys, coarse),
        smooth(zs, coarse),
        grasps[centre] as number,
      );
      centre += 1;
    }
  };
  const append = (x: number, y: number, z: number, grasp: number): void => {
    if (filled === xs.length) {
      const from = centre - half;
      for (const column of columns) column.copyWithin(0, from, filled);
      grasps.copyWithin(0, from, filled);
      filled -= from;
      centre = half;
    }
    xs[filled] = x;
    ys[filled] = y;
    zs[filled] = z;
    grasps[filled] = grasp;
    filled += 1;
  };

  return {
    push(x, y, z, grasp) {
      // The first `half` places wait for the mirror image of the start.
      if (received === 0) {
        filled = half;
        centre = half;
      }
      append(x, y, z, grasp);
      received += 1;
      if (received === half + 1) {
        for (const column of columns) {
          for (let k = 1; k <= half; k++) column[half - k] = 2 * (column[half] as number) - (column[half + k] as number);
        }
      }
      if (received > half) emitReady();
    },
    endStretch() {
      const longEnough = received > half;
      if (longEnough) {
        const tail = columns.map((column) => column.slice(filled - 1 - half, filled)) as [Float64Array, Float64Array, Float64Array];
        const mirrored = (column: Float64Array, k: number): number => 2 * (column[half] as number) - (column[half - k] as number);
        const lastGrasp = grasps[filled - 1] as number;
        for (let k = 1; k <= half; k++) {
          append(mirrored(tail[0], k), mirrored(tail[1], k), mirrored(tail[2], k), lastGrasp);
          emitReady();
        }
      }
      received = 0;
      filled = 0;
      centre = half;
      return longEnough;
    },
  };
}

/** One half of a symmetric kernel, centre first; the whole sums to 1, so that a level or steadily moving path is kept. */
function lowPassKernel(half: number, cut: number): Float64Array {
  const kernel = new Float64Array(half + 1);
  let sum = 0;
  for (let k = 0; k <= half; k++) {
    const sinc = k === 0 ? 2 * cut : Math.sin(2 * Math.PI * cut * k) / (Math.PI * k);
    kernel[k] = sinc * (0.54 + 0.46 * Math.cos((Math.PI * k) / half));
    sum += (k === 0 ? 1 : 2) * (kernel[k] as number);
  }
  return kernel.map((value) => value / sum);
}
