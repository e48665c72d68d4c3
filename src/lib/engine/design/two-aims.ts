import { requirePositive } from '../errors';
import type { Response } from '../response/response';
import type { Seconds } from '../units';
import { detectionColumns, estimationColumns, type ConditionEvents } from './columns';
import { criteriaOf, individualAndPairs, overMembers, type Criteria } from './criteria';
import { addInformation, runInformation } from './information';
import { rowSpaceOf } from './row-space';
import { settingFor, type Column, type SettingInput } from './setting';

/** One run by its events. */
export interface RunEvents extends SettingInput {
  /** When each volume is modelled, s. */
  modelledAt: ArrayLike<Seconds>;
  /** The same conditions in the same order in every run; a list may be empty. */
  conditions: readonly ConditionEvents[];
}

export interface TwoAims {
  /** How well the size of a response of known shape is measured. */
  detection: Criteria;
  /** How well its shape is measured: FIR columns. */
  estimation: Criteria;
}

/**
 * A and D criteria for detection (columns of the chosen response) and for estimation (FIR columns over `window`
 * seconds, 24 by default, at lags of `width`, the TR by default), over all runs.
 *
 * The set of contrasts is each condition against baseline and every pair of conditions (for estimation at every lag);
 * as those depend on each other, D is taken over the conditions alone.
 * Source: Kao MH et al. (2009) NeuroImage 44:849–856; Liu TT, Frank LR (2004) NeuroImage 21:387–400.
 */
export function twoAims(
  runs: readonly RunEvents[],
  response: Response,
  window: Seconds = 24,
  width: Seconds = runs[0]?.tr ?? 2
): TwoAims {
  requirePositive('window of the estimated response', window, 'Use 24 s.');
  requirePositive('width of a lag', width, 'Use the TR, or a finer grid.');
  const lags = Math.max(1, Math.round(window / width));
  const q = runs[0]?.conditions.length ?? 0;
  return {
    detection: criteria(runs, (run) => detectionColumns(run.conditions, response, run.modelledAt), q, 1),
    estimation: criteria(
      runs,
      (run) => estimationColumns(run.conditions, lags, width, run.modelledAt),
      q,
      lags
    )
  };
}

function criteria(
  runs: readonly RunEvents[],
  columnsOf: (run: RunEvents) => Column[],
  conditions: number,
  members: number
): Criteria {
  const space = rowSpaceOf(
    addInformation(runs.map((run) => runInformation(columnsOf(run), settingFor(run)).matrix))
  );
  const rows = individualAndPairs(conditions).flatMap((weights) => overMembers(weights, members));
  const each = criteriaOf(space, rows.slice(0, conditions * members));
  const all = criteriaOf(space, rows);
  return { a: all.a, d: each.d, reason: each.reason };
}
