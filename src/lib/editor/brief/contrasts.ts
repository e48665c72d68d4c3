import type { Condition, Contrast } from '$lib/task/schema';
import { cut } from '$lib/task/text';

export const weightOf = (contrast: Contrast, condition: string): number => contrast.weights[condition] ?? 0;

export interface ContrastCheck {
  level: 'good' | 'amber' | 'red';
  words: string;
}

/** Weights are typed with a few decimals (1/3 as 0.333333), so a sum this small counts as zero. */
const CLOSE = 1e-4;

/**
 * What a row of weights says. A contrast with weights of both signs claims a difference, and a difference that does
 * not sum to zero also measures the mean of its conditions against rest.
 */
export function checkContrast(contrast: Contrast, conditions: readonly Condition[]): ContrastCheck {
  const weights = conditions.map((c) => weightOf(contrast, c.id));
  if (weights.every((w) => w === 0)) {
    return {
      level: 'red',
      words: 'All weights are 0, so it compares nothing; give at least one condition a weight.'
    };
  }
  const sum = weights.reduce((a, b) => a + b, 0);
  const claims = weights.some((w) => w > 0) && weights.some((w) => w < 0);
  if (!claims) return { level: 'good', words: 'Against rest.' };
  if (Math.abs(sum) <= CLOSE) return { level: 'good', words: 'A difference; sums to zero.' };
  const shown = Number(sum.toFixed(4));
  return {
    level: 'amber',
    words: `Weights of both signs claim a difference, but they sum to ${shown}, not 0: it also measures the mean against rest.`
  };
}

/** A sentence where a new weight would leave the contrast empty, else null. */
export function refuseWeight(
  contrast: Contrast,
  conditions: readonly Condition[],
  condition: string,
  weight: number
): string | null {
  const rest = conditions.some((c) => c.id !== condition && weightOf(contrast, c.id) !== 0);
  if (weight !== 0 || rest) return null;
  return `With 0 here all weights of ‘${contrast.name}’ would be 0, and it would compare nothing. Give another condition a weight first, or remove the contrast.`;
}

/** 'A − B' from the weights, for a contrast that nobody has named yet. */
export function contrastName(
  weights: Readonly<Record<string, number>>,
  conditions: readonly Condition[]
): string {
  const side = (sign: 1 | -1) =>
    conditions
      .filter((c) => Math.sign(weights[c.id] ?? 0) === sign)
      .map((c) => c.name)
      .join(' + ');
  const [plus, minus] = [side(1), side(-1)];
  const name = plus && minus ? `${plus} − ${minus}` : plus ? `${plus} − rest` : `rest − ${minus}`;
  return cut(name, 120);
}
