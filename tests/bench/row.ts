/** One measured figure of a benchmark, beside what else was measured in the same run. */
export interface Row {
  readonly name: string;
  readonly value: number;
  readonly unit: string;
  /** What the value is compared with, in words and figures; null where the figure stands by itself. */
  readonly baseline: string | null;
  /** value over baseline, or baseline over value where smaller is better: larger is always better. null without a baseline. */
  readonly ratio: number | null;
  /** What is to be reached, in words. */
  readonly target: string;
  /** null where there is nothing to reach: the row only informs. */
  readonly met: boolean | null;
}

/** What a file NAME.bench.ts exports. */
export interface Bench {
  readonly name: string;
  run(): Promise<Row[]>;
}
