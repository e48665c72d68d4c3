/**
 * Where a dragged trial goes. Pure: a point on the Page in, a plan out.
 *
 * Over a blank that can hold it, the trial is put at that time (slid so that it overlaps nothing). Over another trial,
 * or over a blank too short for it, it takes its place in the order there and what follows makes room.
 */
import type { CompiledTrial } from '$lib/task/compile';
import { gapsOf } from '$lib/task/compile';
import { snap, type Grid } from './grid';

export type Placing =
  | { kind: 'at'; onset: number }
  /** After this trial, or first of all with null. */
  | { kind: 'after'; after: string | null };

export interface PlacingInput {
  /** Trials that stay where they are, by onset. */
  others: readonly CompiledTrial[];
  /** µs under the pointer, not snapped. */
  pointer: number;
  /** µs where the dragged trial's onset would be, not snapped. */
  onset: number;
  /** µs that it needs. */
  length: number;
  grid: Grid;
  tr: number;
}

export function placingOf({ others, pointer, onset, length, grid, tr }: PlacingInput): Placing {
  const over = others.findIndex((t) => t.onset <= pointer && pointer < t.end);
  const hit = others[over];
  if (hit) {
    const isFirstHalf = pointer < (hit.onset + hit.end) / 2;
    const after = isFirstHalf ? (others[over - 1]?.trial.id ?? null) : hit.trial.id;
    return { kind: 'after', after };
  }
  const following = others.findIndex((t) => t.onset > pointer);
  const next = following < 0 ? undefined : others[following];
  const before = following < 0 ? others.at(-1) : others[following - 1];
  // Before the first trial the blank begins at time zero, or earlier where the pointer is earlier.
  const from = before ? before.end : Math.min(0, pointer);
  const until = next ? next.onset - length : Infinity;
  if (until < from) return { kind: 'after', after: before?.trial.id ?? null };
  const wanted = snap(onset, grid, tr);
  return { kind: 'at', onset: Math.min(until, Math.max(from, wanted)) };
}

/** Whether taking the trials out and putting them after `after` would leave the order as it is. */
export function keepsOrder(
  trials: readonly CompiledTrial[],
  moving: ReadonlySet<string>,
  after: string | null
): boolean {
  const rest = trials.filter((t) => !moving.has(t.trial.id));
  const at = after === null ? 0 : rest.findIndex((t) => t.trial.id === after) + 1;
  const order = [...rest.slice(0, at), ...trials.filter((t) => moving.has(t.trial.id)), ...rest.slice(at)];
  return order.every((t, i) => t === trials[i]);
}

/** The gap that a new trial is given: the run's median one that is no overlap, else one TR; snapped. */
export function usualGap(trials: readonly CompiledTrial[], grid: Grid, tr: number): number {
  const gaps = gapsOf(trials)
    .filter((g) => g >= 0)
    .sort((a, b) => a - b);
  return snap(gaps[gaps.length >> 1] ?? tr, grid, tr);
}

/** Where a card placed by keyboard goes: after the last trial, or at time zero on an empty run. */
export function endOnset(trials: readonly CompiledTrial[], grid: Grid, tr: number): number {
  if (trials.length === 0) return 0;
  const end = Math.max(...trials.map((t) => t.end));
  const wanted = end + usualGap(trials, grid, tr);
  const at = snap(wanted, grid, tr);
  return at >= end ? at : wanted;
}
