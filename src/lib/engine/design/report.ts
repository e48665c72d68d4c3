import { EngineError } from '../errors';
import { coefficientsOn } from '../linalg/basis';
import { addScaled, centred, dot, norm } from '../linalg/vector';
import { aliasesOf, type Alias } from './aliases';
import { correlationsFrom, inflationFrom } from './collinearity';
import { reportContrast, type Contrast, type ContrastReport } from './contrast';
import {
  addInformation,
  INSIDE_NUISANCE,
  residualOf,
  runInformation,
  type RunInformation
} from './information';
import { rowSpaceOf } from './row-space';
import { settingFor, type Column, type Setting, type SettingInput } from './setting';

/** One run's part of a design. */
export interface RunDesign extends SettingInput {
  columns: readonly Column[];
}

export interface DesignInput extends RunDesign {
  contrasts: readonly Contrast[];
}

export interface NamedValue {
  name: string;
  value: number;
}

export interface DesignReport {
  /** M = XᵀWᵀPWX, summed over runs; p × p. */
  information: number[][];
  contrasts: ContrastReport[];
  /** Number of columns the design can tell apart. */
  rank: number;
  /** The columns it cannot: one short list per missing rank, with the weights of their invisible combination. */
  aliases: Alias[];
  /** 1/(1 − R²) of each column on all others and the nuisance; Infinity where it is their sum. Warning above 5. */
  vif: NamedValue[];
  /** The same on the other conditions and the constant only. */
  vifConditions: NamedValue[];
  /** Pearson correlation of every pair of columns (run means taken off), p × p. */
  correlations: number[][];
  /** Condition number of the whitened, projected, scaled columns; Infinity when the rank is short. */
  condition: number;
}

/**
 * The numbers of a one-run design: information, efficiency of each contrast, variance inflation, correlations.
 *
 * Efficiency is 1/(c M⁺ cᵀ) for noise of variance 1; hand over columns scaled to a single-trial peak of 1
 * (`peakScale`) and noise SD / √efficiency is the standard error in percent signal change. A degenerate design gives
 * 0 with a reason, never NaN and never an exception.
 *
 * @param input columns of one length (one value per volume), the run's TR and volumes or volume times, contrasts with
 * one weight per column, high-pass cutoff in seconds or null, noise model
 * Errors: `EngineError` for malformed numbers (NaN, TR ≤ 0, |rho| ≥ 1, wrong lengths).
 * Source: generalised least squares, textbook; Dale AM (1999) Hum Brain Mapp 8:109–114; Friston KJ et al. (1999)
 * NeuroImage 10:607–619.
 */
export function designReport(input: DesignInput): DesignReport {
  return designReportOf([input], input.contrasts);
}

/**
 * The same over several runs, each with its own nuisance and noise: M is the sum. All runs name the same columns in
 * the same order (a condition that is absent from a run has a column of zeros there).
 */
export function designReportOf(runs: readonly RunDesign[], contrasts: readonly Contrast[]): DesignReport {
  const names = requireSameColumns(runs);
  const settings = runs.map((run) => settingFor(run));
  const parts = runs.map((run, r) => runInformation(run.columns, settings[r]!));
  const information = addInformation(parts.map((part) => part.matrix));
  const space = rowSpaceOf(information);
  const isEmpty = names.map((_, j) =>
    runs.every((run) => run.columns[j]!.values.every((value) => value === 0))
  );
  const nuisanceOf = (direction: readonly number[]) => nuisanceIn(direction, parts, settings);

  const middle = cross(runs.map((run) => run.columns.map((column) => centred(column.values))));
  const totals = names.map((_, j) => middle[j]![j]!);
  const squares = names.map((_, j) => sumOver(runs, (run) => squareSum(run.columns[j]!.values)));
  const named = (values: number[]) => values.map((value, j) => ({ name: names[j]!, value }));
  return {
    information,
    contrasts: contrasts.map((contrast) => reportContrast(contrast, space, names, isEmpty, nuisanceOf)),
    rank: space.rank,
    aliases: aliasesOf(space, names),
    vif: named(inflationFrom(plainCross(runs, settings), totals, squares)),
    vifConditions: named(inflationFrom(middle, totals, squares)),
    correlations: correlationsFrom(middle, squares),
    condition: space.condition
  };
}

function requireSameColumns(runs: readonly RunDesign[]): string[] {
  const first = runs[0];
  if (!first) throw new EngineError('list of runs', runs, 'at least one run', 'Add a run.');
  const names = first.columns.map((column) => column.name);
  for (const run of runs) {
    const here = run.columns.map((column) => column.name);
    if (here.length !== names.length || here.some((name, j) => name !== names[j]))
      throw new EngineError(
        'columns of a run',
        here.join(', '),
        `the columns ${names.join(', ')} in this order`,
        'Give a condition that is absent from a run a column of zeros.'
      );
  }
  return names;
}

/** Names of the nuisance columns that X·direction is made of, over all runs, each once. */
function nuisanceIn(
  direction: readonly number[],
  parts: readonly RunInformation[],
  settings: readonly Setting[]
): string[] {
  const names = new Set<string>();
  parts.forEach((part, r) => {
    const { nuisance, whitened, whitener } = settings[r]!;
    const sum = new Float64Array(settings[r]!.base.volumes);
    let size = 0;
    direction.forEach((weight, j) => {
      addScaled(sum, part.whitened[j]!, weight);
      size = Math.max(size, Math.abs(weight) * part.lengths[j]!);
    });
    if (norm(sum) <= INSIDE_NUISANCE * 10 * size) return;
    coefficientsOn(whitened, sum).forEach((weight, k) => {
      const column = nuisance[whitened.kept[k]!]!;
      if (Math.abs(weight) * norm(whitener.apply(column.values)) > 1e-6 * size) names.add(column.name);
    });
  });
  return [...names];
}

function squareSum(column: Float64Array): number {
  return dot(column, column);
}

function sumOver<T>(list: readonly T[], what: (item: T) => number): number {
  return list.reduce((sum, item) => sum + what(item), 0);
}

/** Cross products summed over runs. */
function cross(runs: readonly (readonly Float64Array[])[]): number[][] {
  const columns = runs[0]!;
  return columns.map((_, i) => columns.map((_value, j) => sumOver(runs, (run) => dot(run[i]!, run[j]!))));
}

/** Cross products of the unwhitened columns with the nuisance taken out, summed over runs. */
function plainCross(runs: readonly RunDesign[], settings: readonly Setting[]): number[][] {
  return cross(
    runs.map((run, r) => run.columns.map((column) => residualOf(column.values, settings[r]!.plain.q)))
  );
}
