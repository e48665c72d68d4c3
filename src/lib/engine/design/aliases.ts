import type { RowSpace } from './row-space';

/** Columns that depend on each other: knowing all but one gives the last. */
export interface Alias {
  columns: string[];
  /** Weight of each column in the combination that the design cannot see. */
  weights: number[];
}

/**
 * The columns a design cannot tell apart, as short lists: one per missing rank. The null space of M is brought to
 * reduced echelon form, so that unrelated dependences do not run into one another.
 *
 * A column without events, or one that is itself drift, stands alone in its list.
 * @returns empty where the rank is full
 */
export function aliasesOf(space: RowSpace, names: readonly string[]): Alias[] {
  const blind = space.vectors
    .slice(space.rank)
    .map((vector) => Array.from(vector, (value, j) => value * (space.inverseLengths[j]! || 1)));
  return reduced(blind).map((row) => {
    const largest = Math.max(...row.map(Math.abs));
    const involved = names.map((_, j) => j).filter((j) => Math.abs(row[j]!) > 1e-6 * largest);
    const first = row[involved[0]!]!;
    return { columns: involved.map((j) => names[j]!), weights: involved.map((j) => row[j]! / first) };
  });
}

/** Gauss–Jordan with full pivoting over the rows: each ends with a column of its own. */
function reduced(rows: number[][]): number[][] {
  const work = rows.map((row) => [...row]);
  const taken = new Set<number>();
  work.forEach((_, r) => {
    let [best, pivot, size] = [r, 0, 0];
    for (let i = r; i < work.length; i += 1)
      work[i]!.forEach((value, j) => {
        if (!taken.has(j) && Math.abs(value) > size + 1e-9) [best, pivot, size] = [i, j, Math.abs(value)];
      });
    taken.add(pivot);
    [work[r], work[best]] = [work[best]!, work[r]!];
    const scale = work[r]![pivot]!;
    work[r] = work[r]!.map((value) => value / scale);
    work.forEach((row, i) => {
      const factor = row[pivot]!;
      if (i !== r) work[i] = row.map((value, j) => value - factor * work[r]![j]!);
    });
  });
  return work;
}
