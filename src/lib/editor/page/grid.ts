/**
 * The grid that onsets snap to. A point is always rounded from its own index (`round(k · TR / parts)`, µs) and never
 * summed, so that a fraction of TR that is no whole number of µs does not drift over a long run.
 */
import { gridPoint, snapToGrid, snapToMs } from '$lib/task/time';

export const GRIDS = ['TR', 'TR/2', 'TR/4', 'ms'] as const;
export type Grid = (typeof GRIDS)[number];
export const isGrid = (value: unknown): value is Grid => GRIDS.includes(value as Grid);

const PARTS: Record<Exclude<Grid, 'ms'>, number> = { TR: 1, 'TR/2': 2, 'TR/4': 4 };

/** Nearest point of the grid, µs; `+ 0` because rounding a small negative time gives −0. */
export const snap = (t: number, grid: Grid, tr: number): number =>
  (grid === 'ms' ? snapToMs(t) : snapToGrid(t, tr, PARTS[grid])) + 0;

/**
 * `steps` grid points away from `t`. A time between two points goes to the neighbouring point in that direction
 * first, so that a nudge always ends on the grid.
 */
export function nudge(t: number, steps: number, grid: Grid, tr: number): number {
  const step = grid === 'ms' ? 1000 : tr / PARTS[grid];
  const at = snap(t, grid, tr);
  const index = Math.round(t / step) + steps;
  const correction = at === t ? 0 : steps > 0 ? (at > t ? -1 : 0) : at < t ? 1 : 0;
  const k = index + correction;
  return (grid === 'ms' ? k * 1000 : gridPoint(k, tr, PARTS[grid])) + 0;
}
