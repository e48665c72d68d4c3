import { EngineError, requirePositive, requireWhole } from '../errors';
import { orthonormalBasis, type Basis } from '../linalg/basis';
import { norm } from '../linalg/vector';
import { constant, dctDrift, dctDriftAt } from '../noise/drift';
import type { NoiseModel } from '../noise/model';
import { whitenerOf, type TimeBase, type Whitener } from '../noise/whitener';
import { requireTimes } from '../convolution/times';
import type { Seconds } from '../units';

/** A named column of a design matrix. */
export interface Column {
  name: string;
  values: Float64Array;
}

/** What a run's numbers depend on besides its regressors. */
export interface SettingInput {
  tr: Seconds;
  /** Either the number of volumes … */
  volumes?: number;
  /** … or when each is modelled (clustered acquisition); the drift and the noise follow these times. */
  times?: ArrayLike<Seconds>;
  /** Cutoff of the cosine drift in seconds, or null for the constant alone. */
  highPass: Seconds | null;
  noise: NoiseModel;
  /** Further columns of no interest (motion, breathing), each as long as the run. */
  extra?: readonly Column[];
}

/** A run's nuisance space and whitening, made once and used for every column. */
export interface Setting {
  base: TimeBase;
  whitener: Whitener;
  /** Constant, drift and extra columns, as they are. */
  nuisance: Column[];
  /** Orthonormal basis of the whitened nuisance: projecting it out is P. */
  whitened: Basis;
  /** Orthonormal basis of the nuisance as it is, for variance inflation. */
  plain: Basis;
}

/**
 * Builds W and P of one run.
 * Errors: `EngineError` for no volumes, TR ≤ 0, cutoff ≤ 0, rho out of range, extra columns of another length or
 * with gaps.
 */
export function prepareSetting(input: SettingInput): Setting {
  const base = timeBase(input);
  const nuisance: Column[] = [{ name: 'constant', values: constant(base.volumes) }];
  if (input.highPass !== null) {
    requirePositive('high-pass cutoff', input.highPass, 'Use 128 s, or no high-pass at all.');
    const drift =
      base.times === null
        ? dctDrift(base.volumes, base.tr, input.highPass)
        : dctDriftAt(base.times, input.highPass);
    drift.forEach((values, k) => nuisance.push({ name: `drift ${k + 1}`, values }));
  }
  for (const column of input.extra ?? []) nuisance.push(requireColumn(column, base.volumes));
  const whitener = whitenerOf(input.noise, base);
  const values = nuisance.map((column) => column.values);
  const plain = orthonormalBasis(values);
  const isWhite = input.noise.kind === 'white';
  const whitened = isWhite ? plain : orthonormalBasis(values.map((column) => whiten(whitener, column)));
  return { base, whitener, nuisance, whitened, plain };
}

/**
 * W·column, with exact zeros where the whitening leaves nothing but rounding (a constant under noise whose mean is
 * unknown): no serial correlation in use shrinks a column to a billionth.
 */
export function whiten(whitener: Whitener, column: Float64Array): Float64Array {
  const out = whitener.apply(column);
  return norm(out) <= 1e-9 * norm(column) ? out.fill(0) : out;
}

/** Throws unless the column has one finite number per volume; returns it. */
export function requireColumn(column: Column, volumes: number): Column {
  if (column.values.length !== volumes)
    throw new EngineError(
      `length of column “${column.name}”`,
      column.values.length,
      `${volumes} values, one per volume`,
      'Make the regressor for the same run.'
    );
  for (const value of column.values)
    if (!Number.isFinite(value))
      throw new EngineError(`column “${column.name}”`, value, 'finite numbers', 'Fill or drop the gaps.');
  return column;
}

function timeBase(input: SettingInput): TimeBase {
  const { tr } = input;
  requirePositive('repetition time', tr, 'Give the TR in seconds.');
  if (input.times !== undefined) {
    const times = requireTimes(input.times);
    const volumes = times.length;
    return { tr, volumes, times: isEven(times, tr) ? null : times };
  }
  const volumes = requireWhole(
    'number of volumes',
    input.volumes ?? 0,
    1,
    'Give the run at least one volume.'
  );
  return { tr, volumes, times: null };
}

/** Whether the times follow one TR, to within a microsecond. */
function isEven(times: ArrayLike<Seconds>, tr: Seconds): boolean {
  for (let n = 1; n < times.length; n += 1) if (Math.abs(times[n]! - times[0]! - n * tr) > 1e-6) return false;
  return true;
}

const recent = new Map<string, Setting>();
/** Runs of a long task differ in length; each length is one setting. */
const REMEMBERED = 16;

/** `prepareSetting`, remembering the last evenly sampled settings: during a drag only the regressors change. */
export function settingFor(input: SettingInput): Setting {
  if ((input.extra?.length ?? 0) > 0) return prepareSetting(input);
  // NaN would be written as null below and pass for "no high-pass".
  if (input.highPass !== null && !Number.isFinite(input.highPass)) return prepareSetting(input);
  const base = timeBase(input);
  if (base.times !== null) return prepareSetting(input);
  const key = JSON.stringify([base.tr, base.volumes, input.highPass, input.noise]);
  const known = recent.get(key);
  const setting = known ?? prepareSetting(input);
  recent.delete(key);
  recent.set(key, setting);
  if (recent.size > REMEMBERED) recent.delete(recent.keys().next().value!);
  return setting;
}
