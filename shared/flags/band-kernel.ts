/**
 * A complex band-pass kernel whose output's magnitude is the amplitude of shaking within a band.
 *
 * A Kaiser-windowed low-pass moved to the band's centre (Kaiser 1974; the window formulas are quoted from memory and
 * checked by the test's frequency response), with constants, slopes, parabolas and cubics projected out, so that
 * neither a position nor a reach leaks into the band. Stopband at 0.6 of the lower edge is below -50 dB.
 */
export type BandKernel = {
  /** Taps run from -half to half. */
  readonly half: number;
  readonly real: Float64Array;
  readonly imaginary: Float64Array;
};

const beta = 5;

export function bandKernel(lowHz: number, highHz: number, rateHz: number): BandKernel {
  const half = Math.ceil((2.95 / lowHz) * rateHz);
  const size = 2 * half + 1;
  const centre = (Math.PI * (lowHz + highHz)) / rateHz;
  const cutoff = (2 * Math.PI * ((highHz - lowHz) / 2 + 0.12 * lowHz)) / rateHz;
  const window = Float64Array.from({ length: size }, (_, k) => besselI0(beta * Math.sqrt(1 - ((k - half) / half) ** 2)) / besselI0(beta));
  const lowpass = window.map((w, k) => (k === half ? cutoff / Math.PI : Math.sin(cutoff * (k - half)) / (Math.PI * (k - half))) * w);
  const real = withoutCubics(lowpass.map((h, k) => h * Math.cos(centre * (k - half))), window, half);
  const imaginary = withoutCubics(lowpass.map((h, k) => h * Math.sin(centre * (k - half))), window, half);
  // A sine of amplitude 1 at the centre must come out with magnitude 1.
  let gain = 0;
  for (let k = 0; k < size; k += 1) {
    const angle = centre * (k - half);
    gain += (real[k] as number) * Math.cos(angle) + (imaginary[k] as number) * Math.sin(angle);
  }
  const scale = 2 / gain;
  return { half, real: real.map((h) => h * scale), imaginary: imaginary.map((h) => h * scale) };
}

/** Takes `window * (a + b u + c u2 + d u3)` away so that the moments of order 0 to 3 vanish; u runs from -1 to 1. */
function withoutCubics(kernel: Float64Array, window: Float64Array, half: number): Float64Array {
  const moment = (values: Float64Array, order: number) => values.reduce((sum, value, k) => sum + value * ((k - half) / half) ** order, 0);
  const w = [0, 2, 4, 6].map((order) => moment(window, order)) as [number, number, number, number];
  // Even and odd orders do not mix under a symmetric window: two systems of two.
  const [a, c] = solve2(w[0], w[1], w[1], w[2], moment(kernel, 0), moment(kernel, 2));
  const [b, d] = solve2(w[1], w[2], w[2], w[3], moment(kernel, 1), moment(kernel, 3));
  return kernel.map((h, k) => {
    const u = (k - half) / half;
    return h - (window[k] as number) * (a + u * (b + u * (c + u * d)));
  });
}

function solve2(m00: number, m01: number, m10: number, m11: number, y0: number, y1: number): [number, number] {
  const determinant = m00 * m11 - m01 * m10;
  return [(y0 * m11 - m01 * y1) / determinant, (m00 * y1 - m10 * y0) / determinant];
}

/** Modified Bessel function of the first kind, order 0, by its power series. */
function besselI0(x: number): number {
  let term = 1;
  let sum = 1;
  for (let k = 1; term > 1e-12 * sum; k += 1) {
    term *= (x / (2 * k)) ** 2;
    sum += term;
  }
  return sum;
}
