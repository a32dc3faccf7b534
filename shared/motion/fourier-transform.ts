import FFT from 'fft.js';

/** Squared sizes of the Fourier coefficients of real samples, made once for a length and used for many segments. */
export interface PowerTransform {
  /** Number of bins, from 0 to half the sampling rate: floor(size / 2) + 1. */
  readonly bins: number;
  /** Writes |X_k|^2 of `size` real samples into `out`. */
  power(samples: ArrayLike<number>, out: Float64Array): void;
}

/**
 * Discrete Fourier transform for any length: a power of two directly, any other by Bluestein's chirp.
 *
 * @param size number of samples, 1 or more
 * @source fft.js (radix 4); Bluestein 1970 for other lengths, the chirp's phase reduced in whole numbers so that it stays exact
 */
export function powerTransform(size: number): PowerTransform {
  const bins = Math.floor(size / 2) + 1;
  if (size === 1) return { bins, power: (samples, out) => void (out[0] = (samples[0] as number) ** 2) };
  return (size & (size - 1)) === 0 ? direct(size, bins) : chirped(size, bins);
}

function direct(size: number, bins: number): PowerTransform {
  const fft = new FFT(size);
  const data = new Float64Array(2 * size);
  const result = new Float64Array(2 * size);
  return {
    bins,
    power(samples, out) {
      for (let i = 0; i < size; i++) data[2 * i] = samples[i] as number;
      fft.transform(result, data);
      for (let k = 0; k < bins; k++) out[k] = (result[2 * k] as number) ** 2 + (result[2 * k + 1] as number) ** 2;
    },
  };
}

function chirped(size: number, bins: number): PowerTransform {
  let padded = 2;
  while (padded < 2 * size - 1) padded *= 2;
  const fft = new FFT(padded);
  const cosine = new Float64Array(size);
  const sine = new Float64Array(size);
  const kernel = new Float64Array(2 * padded);
  for (let i = 0; i < size; i++) {
    const angle = (Math.PI * ((i * i) % (2 * size))) / size;
    cosine[i] = Math.cos(angle);
    sine[i] = Math.sin(angle);
    for (const place of i === 0 ? [0] : [i, padded - i]) {
      kernel[2 * place] = cosine[i] as number;
      kernel[2 * place + 1] = sine[i] as number;
    }
  }
  const kernelSpectrum = new Float64Array(2 * padded);
  fft.transform(kernelSpectrum, kernel);
  const data = new Float64Array(2 * padded);
  const spectrum = new Float64Array(2 * padded);
  return {
    bins,
    power(samples, out) {
      data.fill(0);
      for (let i = 0; i < size; i++) {
        data[2 * i] = (samples[i] as number) * (cosine[i] as number);
        data[2 * i + 1] = -(samples[i] as number) * (sine[i] as number);
      }
      fft.transform(spectrum, data);
      for (let k = 0; k < 2 * padded; k += 2) {
        const re = spectrum[k] as number;
        const im = spectrum[k + 1] as number;
        const kernelRe = kernelSpectrum[k] as number;
        const kernelIm = kernelSpectrum[k + 1] as number;
        spectrum[k] = re * kernelRe - im * kernelIm;
        spectrum[k + 1] = re * kernelIm + im * kernelRe;
      }
      fft.inverseTransform(data, spectrum);
      // The last chirp only turns the phase, which a squared size does not see.
      for (let k = 0; k < bins; k++) out[k] = (data[2 * k] as number) ** 2 + (data[2 * k + 1] as number) ** 2;
    },
  };
}
