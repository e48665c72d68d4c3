import type { Contrast } from '../design/contrast';
import { prepareSetting, type SettingInput } from '../design/setting';
import { requireWhole } from '../errors';
import { estimateAr1 } from '../estimation/ar1';
import { fitLeastSquares, type Fit } from '../estimation/fit';
import { testContrast } from '../estimation/contrasts';
import { seeded } from '../random';
import { noiseMaker } from './noise';
import { syntheticScan, type ScanTruth } from './scan';

export interface MonteCarloInput extends SettingInput, ScanTruth {
  readonly contrasts: readonly Contrast[];
  /** Number of made-up scans. */
  readonly runs: number;
  readonly seed: string;
  /**
   * What the fit knows of the noise: the model itself ('known'), or only that it is AR(1), with rho from each scan by
   * REML ('reml').
   */
  readonly knowledge?: 'known' | 'reml';
}

export interface MonteCarloResult {
  readonly name: string;
  readonly truth: number;
  /** Mean estimate − truth. */
  readonly bias: number;
  /** Standard error of the bias: about two of them are chance. */
  readonly biasError: number;
  /** Standard deviation of the estimates. */
  readonly spread: number;
  /** Root mean square of the standard errors the fits reported; near `spread` when they are honest. */
  readonly reportedSpread: number;
  /** Share of 95 % intervals that hold the truth. */
  readonly coverage: number;
}

/**
 * Makes a scan `runs` times over with noise of the stated model, fits each by GLS with constant and drift, and tells
 * how far estimates and intervals can be trusted. Seeded: the same input gives the same numbers anywhere.
 *
 * A contrast that cannot be estimated has bias, spread and coverage 0.
 * Errors: `EngineError` for malformed numbers.
 */
export function monteCarlo(input: MonteCarloInput): MonteCarloResult[] {
  const { runs, seed, contrasts, columns, effects, knowledge = 'known' } = input;
  requireWhole('number of made-up scans', runs, 2, 'Use 200 for a look, 2000 for a figure.');
  const setting = prepareSetting(input);
  const noise = noiseMaker(input.noise, setting.base);
  const random = seeded(`synthetic/${seed}`);
  const all = [...columns, ...setting.nuisance].map((column) => column.values);
  const rows = contrasts.map(({ weights }) => [...weights, ...setting.nuisance.map(() => 0)]);
  const truths = rows.map((row) => effects.reduce((sum, effect, j) => sum + effect * row[j]!, 0));
  const tallies = contrasts.map(() => ({ sum: 0, squares: 0, variances: 0, held: 0, told: 0 }));
  for (let run = 0; run < runs; run++) {
    const y = syntheticScan(input, noise, random);
    const fit: Fit =
      knowledge === 'reml' ? estimateAr1(all, y, 'REML').fit : fitLeastSquares(all, y, setting.whitener);
    rows.forEach((row, i) => {
      const test = testContrast(fit, row);
      if (!test.estimable) return;
      const off = test.effect - truths[i]!;
      const tally = tallies[i]!;
      tally.told++;
      tally.sum += off;
      tally.squares += off * off;
      tally.variances += test.standardError ** 2;
      if (Math.abs(off) <= test.margin) tally.held++;
    });
  }
  return contrasts.map(({ name }, i) => {
    const { sum, squares, variances, held, told } = tallies[i]!;
    const truth = truths[i]!;
    if (told < 2) return { name, truth, bias: 0, biasError: 0, spread: 0, reportedSpread: 0, coverage: 0 };
    const bias = sum / told;
    const spread = Math.sqrt(Math.max(0, (squares - told * bias * bias) / (told - 1)));
    return {
      name,
      truth,
      bias,
      biasError: spread / Math.sqrt(told),
      spread,
      reportedSpread: Math.sqrt(variances / told),
      coverage: held / told
    };
  });
}
