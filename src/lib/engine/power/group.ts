import { EngineError, requireFinite, requireNotNegative, requirePositive } from '../errors';
import { powerOfT, type Power, type TestRule } from './power';

/** A group of participants with the same design. */
export interface Group {
  /** Mean effect in the population, percent signal change. */
  readonly meanEffect: number;
  /** Standard deviation of the true effect between people, percent. */
  readonly betweenSd: number;
  /** Variance of one participant's estimate (`withinVariance`), percent². */
  readonly withinVariance: number;
  readonly participants: number;
}

export interface GroupPower extends Power {
  /** Standard error of the group mean (or difference), percent. */
  readonly standardError: number;
}

function requireGroup(group: Omit<Group, 'participants'>): number {
  requireFinite('mean effect', group.meanEffect, 'Give it in percent signal change.');
  requireNotNegative('spread between people', group.betweenSd, 'Give a standard deviation in percent.');
  if (group.withinVariance !== Infinity)
    requireNotNegative(
      'variance within a participant',
      group.withinVariance,
      'Use noise variance / efficiency.'
    );
  const variance = group.betweenSd ** 2 + group.withinVariance;
  if (variance === 0)
    throw new EngineError(
      'variance between and within participants',
      0,
      'a sum above 0',
      'Give one of them.'
    );
  return variance;
}

/**
 * Power of a one-sample test over participants: Var(mean) = (σ_B² + σ_W²)/n, δ = μ/√Var, df = n − 1.
 *
 * `participants` may be a fraction (as a root of the curve), above 1.
 * Source: Mumford JA, Nichols TE (2008) NeuroImage 39:261–268 for a one-group model.
 * @example groupPower({ meanEffect: 0.3, betweenSd: 0.4, withinVariance: 0.05, participants: 20 }, { alpha: 0.05, sides: 1 }).power // 0.880232751662
 */
export function groupPower(group: Group, rule: TestRule): GroupPower {
  const variance = requireGroup(group);
  requireMore('number of participants', group.participants, 1);
  const standardError = Math.sqrt(variance / group.participants);
  return { standardError, ...powerOfT(group.meanEffect / standardError, group.participants - 1, rule) };
}

/**
 * Power of the comparison of two groups of `participants` each: Var = 2 (σ_B² + σ_W²)/n, df = 2n − 2; `meanEffect` is
 * the difference of the groups' means.
 * @example comparisonPower({ meanEffect: 1, betweenSd: 1, withinVariance: 0, participants: 20 }, { alpha: 0.05, sides: 2 }).power // 0.8689530
 */
export function comparisonPower(group: Group, rule: TestRule): GroupPower {
  const variance = requireGroup(group);
  requireMore('number of participants in a group', group.participants, 1);
  const standardError = Math.sqrt((2 * variance) / group.participants);
  return { standardError, ...powerOfT(group.meanEffect / standardError, 2 * group.participants - 2, rule) };
}

/**
 * Participants whose own precision differs (other numbers of runs, other noise): weighted mean with weights
 * 1/(σ_B² + σ_Wk²), variances taken as known, df = n − 1.
 * @param withinVariances one per participant
 */
export function unequalGroupPower(
  group: Omit<Group, 'participants' | 'withinVariance'>,
  withinVariances: readonly number[],
  rule: TestRule
): GroupPower {
  requireMore('number of participants', withinVariances.length, 1);
  let weight = 0;
  for (const variance of withinVariances) weight += 1 / requireGroup({ ...group, withinVariance: variance });
  requirePositive('sum of the weights', weight, 'At least one participant must be able to show the effect.');
  const standardError = 1 / Math.sqrt(weight);
  return { standardError, ...powerOfT(group.meanEffect / standardError, withinVariances.length - 1, rule) };
}

function requireMore(subject: string, value: number, than: number): void {
  if (!(value > than && Number.isFinite(value)))
    throw new EngineError(
      subject,
      value,
      `a number above ${than}`,
      'A test needs at least two participants.'
    );
}

/**
 * The number of participants at which a rising power curve reaches `wanted`, as a fraction (round it up).
 * Null where even `most` are too few.
 * @param powerAt power with n participants, n > 1, rising with n
 * @example participantsFor(0.9, (n) => comparisonPower({ meanEffect: 1, betweenSd: 1, withinVariance: 0, participants: n }, { alpha: 0.05, sides: 1 }).power) // 17.84712
 */
export function participantsFor(
  wanted: number,
  powerAt: (participants: number) => number,
  most = 10_000
): number | null {
  if (!(wanted > 0 && wanted < 1))
    throw new EngineError(
      'wanted power',
      wanted,
      'a number between 0 and 1, both excluded',
      'Use 0.8 or 0.9.'
    );
  let low = 1.0001;
  let high = 4;
  while (powerAt(high) < wanted) {
    low = high;
    high *= 2;
    if (high > most) return powerAt(most) < wanted ? null : bisect(wanted, powerAt, low, most);
  }
  return powerAt(low) >= wanted ? low : bisect(wanted, powerAt, low, high);
}

function bisect(wanted: number, powerAt: (n: number) => number, low: number, high: number): number {
  while (high - low > 1e-11 * high) {
    const middle = (low + high) / 2;
    if (middle <= low || middle >= high) break;
    if (powerAt(middle) < wanted) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
