/**
 * Chance that can be had again: the same seed gives the same run on every machine.
 *
 * The generator is sfc32, "small fast counter", 128 bits of state (Doty-Humphrey, PractRand, 2010), filled from the seed by
 * SplitMix-like mixing (Steele, Lea and Flood 2014, constants of MurmurHash3 by Appleby) and run twelve steps in, as its
 * author advises. Normal values come from the polar method (Marsaglia and Bray 1964). All three are written from memory.
 */
export interface Random {
  /** [0, 1), 32 bits. */
  uniform(): number;
  between(low: number, high: number): number;
  /** Mean 0, standard deviation 1. */
  normal(): number;
  pick<T>(items: readonly T[]): T;
  /** A stream of its own for one purpose, so that asking more of one does not move the others. */
  branch(purpose: string): Random;
}

/** @param seed any whole number; only its low 53 bits count */
export function seededRandom(seed: number): Random {
  return fromWords(mixer(seed >>> 0, Math.floor(seed / 2 ** 32) >>> 0));
}

function fromWords(nextWord: () => number): Random {
  let a = nextWord();
  let b = nextWord();
  let c = nextWord();
  let counter = 1;
  let spare: number | null = null;

  const next = (): number => {
    const sum = (a + b + counter) | 0;
    counter = (counter + 1) | 0;
    a = b ^ (b >>> 9);
    b = (c + (c << 3)) | 0;
    c = (((c << 21) | (c >>> 11)) + sum) | 0;
    return sum >>> 0;
  };
  for (let i = 0; i < 12; i += 1) next();
  const [branchLow, branchHigh] = [next(), next()];

  const uniform = (): number => next() / 2 ** 32;
  return {
    uniform,
    between: (low, high) => low + (high - low) * uniform(),
    normal() {
      if (spare !== null) {
        const kept = spare;
        spare = null;
        return kept;
      }
      for (;;) {
        const x = 2 * uniform() - 1;
        const y = 2 * uniform() - 1;
        const s = x * x + y * y;
        if (s >= 1 || s === 0) continue;
        const scale = Math.sqrt((-2 * Math.log(s)) / s);
        spare = y * scale;
        return x * scale;
      }
    },
    pick<T>(items: readonly T[]): T {
      const item = items[Math.floor(uniform() * items.length)];
      if (item === undefined) throw new Error('nothing to pick from');
      return item;
    },
    branch: (purpose) => fromWords(mixer((branchLow ^ hashText(purpose)) >>> 0, branchHigh)),
  };
}

function mixer(low: number, high: number): () => number {
  let state = (low ^ Math.imul(high, 0x9e3779b9)) | 0;
  return () => {
    state = (state + 0x9e3779b9) | 0;
    let z = state;
    z = Math.imul(z ^ (z >>> 16), 0x85ebca6b);
    z = Math.imul(z ^ (z >>> 13), 0xc2b2ae35);
    return z ^ (z >>> 16);
  };
}

/** FNV-1a, 32 bits (Fowler, Noll and Vo). */
function hashText(text: string): number {
  let hash = 0x811c9dc5;
  for (let i = 0; i < text.length; i += 1) hash = Math.imul(hash ^ text.charCodeAt(i), 0x01000193);
  return hash >>> 0;
}
