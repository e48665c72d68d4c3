/** Keys that move the focus among the trials of the Page. What they do to trials is in `actions`. */
import type { CompiledTrial } from '$lib/task/compile';
import { neighbourOnLine } from './line-model';
import type { PageGeometry } from './page-geometry';

/** The trial that a key leads to from `here`; undefined where the key is none of these or there is no such trial. */
export function trialByKey(
  e: Pick<KeyboardEvent, 'key' | 'altKey' | 'ctrlKey' | 'metaKey'>,
  g: PageGeometry,
  trials: readonly CompiledTrial[],
  here: CompiledTrial
): CompiledTrial | undefined {
  if (e.altKey || e.ctrlKey || e.metaKey) return undefined;
  const at = trials.findIndex((t) => t.trial.id === here.trial.id);
  switch (e.key) {
    case 'ArrowRight':
      return trials[at + 1];
    case 'ArrowLeft':
      return trials[at - 1];
    case 'ArrowDown':
      return neighbourOnLine(g, trials, here, 1);
    case 'ArrowUp':
      return neighbourOnLine(g, trials, here, -1);
    case 'Home':
      return trials[0];
    case 'End':
      return trials.at(-1);
    default:
      return undefined;
  }
}

export const isFocusKey = (key: string): boolean =>
  ['ArrowRight', 'ArrowLeft', 'ArrowDown', 'ArrowUp', 'Home', 'End'].includes(key);

/** Ids from one trial to another in the order of onsets, both included. */
export function rangeOf(trials: readonly CompiledTrial[], from: string, to: string): string[] {
  const a = trials.findIndex((t) => t.trial.id === from);
  const b = trials.findIndex((t) => t.trial.id === to);
  if (a < 0 || b < 0) return [to];
  return trials.slice(Math.min(a, b), Math.max(a, b) + 1).map((t) => t.trial.id);
}
