import { EngineError } from '../errors';
import { groupPower, participantsFor, type Group } from './group';
import { runPower, withinVariance, type RunSet, type TestRule } from './power';

export interface CurvePoint {
  readonly x: number;
  readonly power: number;
}

function requireList(subject: string, list: readonly number[]): void {
  for (const x of list)
    if (!(x > 0 && Number.isFinite(x)))
      throw new EngineError(subject, x, 'numbers above 0', 'Drop the others from the list.');
}

/**
 * Power by number of like runs: efficiency and degrees of freedom add up over runs.
 * @param one numbers of a single run
 */
export function powerByRuns(one: RunSet, runs: readonly number[], rule: TestRule): CurvePoint[] {
  requireList('number of runs', runs);
  return runs.map((x) => ({
    x,
    power: runPower({ ...one, efficiency: one.efficiency * x, df: one.df * x }, rule).power
  }));
}

/**
 * Power by number of trials in a run whose length grows with them: efficiency and volumes in proportion, the columns
 * of nuisance and conditions as they are. (More trials packed into the same time is a matter for the search.)
 * @param one numbers of the run with `trials` trials; @param columns rank of all its columns
 */
export function powerByTrials(
  one: RunSet,
  trials: number,
  columns: number,
  list: readonly number[],
  rule: TestRule
): CurvePoint[] {
  requireList('number of trials', [trials, ...list]);
  const volumes = one.df + columns;
  return list.map((x) => {
    const share = x / trials;
    const df = share * volumes - columns;
    // Fewer volumes than columns: nothing can be tested.
    if (df <= 0) return { x, power: 0 };
    return { x, power: runPower({ ...one, efficiency: one.efficiency * share, df }, rule).power };
  });
}

/** Power by number of participants; fewer than two have none. */
export function powerByParticipants(
  group: Omit<Group, 'participants'>,
  list: readonly number[],
  rule: TestRule
): CurvePoint[] {
  requireList('number of participants', list);
  return list.map((x) => ({ x, power: x > 1 ? groupPower({ ...group, participants: x }, rule).power : 0 }));
}

/**
 * What an efficiency is worth in participants: how many are needed for the wanted power with each of two efficiencies,
 * everything else alike. Null where no number up to 10,000 is enough.
 */
export function worthInParticipants(
  group: Omit<Group, 'participants' | 'withinVariance'>,
  noiseSd: number,
  efficiencies: readonly number[],
  wanted: number,
  rule: TestRule
): (number | null)[] {
  return efficiencies.map((efficiency) => {
    const variance = withinVariance(noiseSd, efficiency);
    if (variance === Infinity) return null;
    return participantsFor(
      wanted,
      (participants) => groupPower({ ...group, withinVariance: variance, participants }, rule).power
    );
  });
}
