/** What a run really holds, for tests and for people who judge detectors: written from noise-free values. */

export type Truth = {
  kind: 'slack' | 'saturation' | 'gap' | 'slip' | 'oscillation';
  /** Numbered from 1; null where the whole rig is meant. */
  cable: number | null;
  startS: number;
  /** First time out of it; null: until the run ends. */
  endS: number | null;
  /** N of the lowest or highest tension; m of a slip's step. */
  peak: number | null;
};

/** Shortest slack or saturation that counts, s. */
const SHORTEST_S = 0.01;

/** Watches noise-free tensions for slack and saturation, by the default rules of CONTRACTS of the product. */
export class TensionWatch {
  readonly #open: (Truth | null)[];
  readonly found: Truth[] = [];

  constructor(private readonly limits: { slackBelow: number; tensionMax: number }, private readonly cableCount: number) {
    this.#open = new Array<Truth | null>(2 * cableCount).fill(null);
  }

  see(tS: number, tensions: Float64Array): void {
    const { slackBelow, tensionMax } = this.limits;
    for (let i = 0; i < this.cableCount; i += 1) {
      const n = tensions[i] as number;
      this.#step(2 * i, 'slack', i + 1, tS, n, n < slackBelow, n > slackBelow + 0.2, Math.min);
      this.#step(2 * i + 1, 'saturation', i + 1, tS, n, n >= tensionMax - 0.05, n < tensionMax - 0.25, Math.max);
    }
  }

  close(tS: number): void {
    this.#open.forEach((_, slot) => this.#end(slot, tS));
  }

  #step(slot: number, kind: 'slack' | 'saturation', cable: number, tS: number, n: number, begins: boolean, ends: boolean, further: (a: number, b: number) => number): void {
    const open = this.#open[slot];
    if (!open) {
      if (begins) this.#open[slot] = { kind, cable, startS: tS, endS: null, peak: n };
    } else if (ends) this.#end(slot, tS);
    else open.peak = further(open.peak as number, n);
  }

  #end(slot: number, tS: number): void {
    const open = this.#open[slot];
    this.#open[slot] = null;
    if (open && tS - open.startS >= SHORTEST_S - 1e-9) this.found.push({ ...open, endS: tS });
  }
}
