/** A stream of numbers that is the same for the same seed on every machine. */
export interface SeededRandom {
  /** Uniform in [0, 1), 32 bits. */
  next(): number;
  /** Whole number in [0, bound), without bias. */
  below(bound: number): number;
  /** Standard normal value. */
  normal(): number;
}

/**
 * Seeded generator for resampling: xoshiro128**, its state filled from the seed by splitmix32. Not for secrets.
 *
 * @param seed whole number; only its low 32 bits count
 * @source Blackman and Vigna 2018 (xoshiro128**); splitmix after Steele, Lea and Flood 2014; normal values by Box and Muller 1958
 */
export function seededRandom(seed: number): SeededRandom {
  let mix = seed >>> 0;
  const split = (): number => {
    mix = (mix + 0x9e3779b9) >>> 0;
    let word = mix;
    word = Math.imul(word ^ (word >>> 16), 0x21f0aaad);
    word = Math.imul(word ^ (word >>> 15), 0x735a2d97);
    return (word ^ (word >>> 15)) >>> 0;
  };
  let s0 = split();
  let s1 = split();
  let s2 = split();
  let s3 = split();
  const word = (): number => {
    const scaled = Math.imul(s1, 5);
    const result = Math.imul((scaled << 7) | (scaled >>> 25), 9) >>> 0;
    const shifted = s1 << 9;
    s2 ^= s0;
    s3 ^= s1;
    s1 ^= s2;
    s0 ^= s3;
    s2 ^= shifted;
    s3 = (s3 << 11) | (s3 >>> 21);
    return result;
  };
  const next = (): number => word() / 0x1_0000_0000;
  return {
    next,
    below(bound) {
      const fair = 0x1_0000_0000 - (0x1_0000_0000 % bound);
      let value = word();
      while (value >= fair) value = word();
      return value % bound;
    },
    normal() {
      return Math.sqrt(-2 * Math.log(1 - next())) * Math.cos(2 * Math.PI * next());
    },
  };
}
