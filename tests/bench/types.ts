/** One figure of `npm run bench`. */
export interface BenchRow {
  part: string;
  name: string;
  value: number;
  unit: string;
  /** What the product promises; null where there is only a figure to watch. */
  aim: number | null;
  better: 'lower' | 'higher';
  /** The same figure of something else, measured in the same run. */
  against: { name: string; value: number } | null;
}

/** A part's module has this as its default export; it stands in `tests/bench/parts/`. */
export interface BenchPart {
  name: string;
  run(): Promise<BenchRow[]>;
}

/** Whether a row keeps its promise; true without one. */
export const isMet = (row: BenchRow): boolean =>
  row.aim === null || (row.better === 'lower' ? row.value <= row.aim : row.value >= row.aim);
