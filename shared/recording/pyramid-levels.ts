/** Levels of the pyramid and which of them answers a window. Level 0 is the samples themselves. */

/** Buckets of a level hold this many times the samples of the level below. */
export const pyramidFactor = 8;
/** Level 1 has buckets of 64 samples, level 6 of two million: 35 minutes at 1 kHz. */
export const pyramidLevels = 6;

/** Samples of a bucket: 8^(level + 1). A level of 8 would cost more disk than it saves decoding. */
export function bucketSamples(level: number): number {
  return level === 0 ? 1 : pyramidFactor ** (level + 1);
}

/** `samples`: all of them fit. `chunks`: read the chunks and fold them. `blocks`: read pyramid blocks of the level. */
export type WindowSource = { readonly from: 'samples' } | { readonly from: 'chunks' } | { readonly from: 'blocks'; readonly level: number };

/**
 * Where a window is answered from, so that the data read is bounded by the width asked for, whatever the window:
 * at most 32 samples or four buckets for each bucket shown, and never fewer than half as many buckets as asked for.
 *
 * @param rateHz   nominal rate of the recording
 * @param buckets  the most buckets that the reader can show
 */
export function chooseSource(window: { fromUs: number; toUs: number; buckets: number; rateHz: number }): WindowSource {
  const samples = ((window.toUs - window.fromUs) / 1e6) * window.rateHz;
  if (samples <= window.buckets) return { from: 'samples' };
  for (let level = pyramidLevels; level >= 1; level -= 1) {
    if (samples / bucketSamples(level) >= window.buckets / 2) return { from: 'blocks', level };
  }
  return { from: 'chunks' };
}
