import { cos } from '../elementary';
import { requireBetween, requireWhole } from '../errors';
import { wholePower } from '../response/gamma';

/**
 * Closed forms of design theory: what a large design of a kind reaches, for the help texts and as yardsticks of the
 * search. White noise, the constant removed, FIR of `lags` lags. Efficiencies are 1/trace(M⁻¹).
 */

/**
 * Trade-off of estimation and detection for one trial type, per unit of trace M: eigenvalues α once and
 * (1−α)/(k−1) otherwise; θ is the angle between the response and the leading eigenvector.
 * Source: Liu TT, Frank LR, Wong EC, Buxton RB (2001) NeuroImage 13:759–773 (formulas re-derived).
 * @param lags k ≥ 2
 * @param alpha share of the trace in one direction: 1/k (random) … 1 (blocks); below 1/k that direction is the weakest
 * @param theta radians
 * @example tradeOff(10, 0.5).estimation * 100 // 0.6097560975609756
 */
export function tradeOff(lags: number, alpha: number, theta = 0): { estimation: number; detection: number } {
  requireWhole('number of lags', lags, 2, 'Use the window length over the lag.');
  requireBetween('alpha', alpha, 0, 1, 'Use 1/k for random, 1 for blocks.');
  const estimation = (alpha * (1 - alpha)) / (1 + alpha * (lags * lags - 2 * lags));
  const along = cos(theta) * cos(theta);
  return { estimation, detection: alpha * along + ((1 - alpha) / (lags - 1)) * (1 - along) };
}

/**
 * The share of slots each of Q trial types should have, the rest staying empty, for estimating individual responses,
 * pairwise differences, or both alike: 1/(Q+√Q), 1/Q, 1/(Q+1).
 * Source: Liu TT, Frank LR (2004) NeuroImage 21:387–400 (re-derived by minimisation).
 * @example optimalShare(4, 'both') // 0.2
 */
export function optimalShare(types: number, aim: 'individual' | 'pairs' | 'both'): number {
  requireWhole('number of trial types', types, 1, 'Use the number of conditions.');
  if (aim === 'pairs') return 1 / types;
  return aim === 'both' ? 1 / (types + 1) : 1 / (types + Math.sqrt(types));
}

/**
 * One event every `period` bins (period > lags), per bin of the run: 1/(P(k − 1 + 1/(1 − k/P))); 0 where the lags
 * overlap the next event, because the columns then add up to the constant.
 * Source: eigenvalues of (N/P)(I − J/P), derived here; compare Dale AM 1999, Hum Brain Mapp 8:109–114.
 * @example fixedSpacing(11, 8) // 0.008522727272727272
 */
export function fixedSpacing(period: number, lags: number): number {
  requireWhole('period in bins', period, 1, 'Use whole bins.');
  requireWhole('number of lags', lags, 1, 'Use the window length over the lag.');
  if (period <= lags) return 0;
  return 1 / (period * (lags - 1 + 1 / (1 - lags / period)));
}

/**
 * An event in each bin with probability p, per bin of the run: p(1−p)/k.
 * @example randomSpacing(0.5, 8) // 0.03125
 */
export function randomSpacing(probability: number, lags: number): number {
  requireBetween('probability of an event', probability, 0, 1, 'Use 0.5 for the best estimate.');
  requireWhole('number of lags', lags, 1, 'Use the window length over the lag.');
  return (probability * (1 - probability)) / lags;
}

/**
 * A binary m-sequence of length N = 2ⁿ − 1, circular: 2^(n−2)/(k − 1 + 1/(1 − k/N)).
 * Source: M = 2^(n−2)(I − J/N), derived here; compare Buracas GT, Boynton GM 2002, NeuroImage 16:801–813.
 * @example binaryMSequence(6, 8) // 55 / 28
 */
export function binaryMSequence(order: number, lags: number): number {
  requireWhole('order of the m-sequence', order, 2, 'Length is 2ⁿ − 1.');
  const length = wholePower(2, order) - 1;
  requireBetween('number of lags', lags, 1, length - 1, 'Use fewer lags than the sequence is long.');
  return wholePower(2, order - 2) / (lags - 1 + 1 / (1 - lags / length));
}
