/** Planned onsets beside what the witness saw: errors in frames, and what was never seen. */
import { frameInterval, seenChanges, type Testimony } from './witness';

export interface OnsetErrors {
  /** Frame interval, ms. */
  interval: number;
  /** For each planned onset that was seen: seen minus planned, in frames. */
  errors: number[];
  /** Planned onsets without a change of picture near them, ms from zero. */
  unseen: number[];
  /** Mean of the signed errors and largest absolute one, in frames. */
  mean: number;
  largest: number;
}

/**
 * `planned`: ms from `zero`, each at least 2 × `within` from the next change of picture. `zero`: ms of the page's
 * clock. An onset counts as seen where a picture appears within `within` ms of it.
 */
export function onsetErrors(
  testimony: Testimony,
  zero: number,
  planned: number[],
  within = 120
): OnsetErrors {
  const interval = frameInterval(testimony);
  const last = Math.max(...planned);
  const changes = seenChanges(testimony, zero - 1000, zero + last + 1000).filter((change) => !change.blank);
  const errors: number[] = [];
  const unseen: number[] = [];
  for (const onset of planned) {
    const distances = changes.map((change) => change.at - (zero + onset));
    const nearest = distances.reduce((best, one) => (Math.abs(one) < Math.abs(best) ? one : best), Infinity);
    if (Math.abs(nearest) <= within) errors.push(nearest / interval);
    else unseen.push(onset);
  }
  return {
    interval,
    errors,
    unseen,
    mean: errors.reduce((sum, error) => sum + error, 0) / errors.length,
    largest: Math.max(...errors.map(Math.abs))
  };
}
