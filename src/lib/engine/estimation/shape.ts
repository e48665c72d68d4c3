import { basisColumns, estimationColumns, type ConditionEvents } from '../design/columns';
import { requirePositive } from '../errors';
import { forwardSubstitute } from '../linalg/qr';
import type { Whitener } from '../noise/whitener';
import { sampledResponse } from '../response/sampled';
import { sinesAndCosines, type ResponseBasis } from '../response/bases';
import type { Response } from '../response/response';
import type { Seconds } from '../units';
import { unestimable } from './contrasts';
import { fitLeastSquares, type Fit } from './fit';

/** The response of one condition as the data show it. */
export interface FittedShape {
  readonly condition: string;
  /** Seconds after the event. */
  readonly times: Float64Array;
  readonly values: Float64Array;
  /** Standard error of each value; Infinity where the columns cannot tell. */
  readonly standardErrors: Float64Array;
}

export interface ShapeFit {
  readonly fit: Fit;
  readonly shapes: FittedShape[];
}

/** What a shape is fitted to. */
export interface ShapeData {
  readonly y: Float64Array;
  /** When each volume is modelled, s. */
  readonly times: ArrayLike<Seconds>;
  readonly conditions: readonly ConditionEvents[];
  /** Columns of no interest: constant, drift, movement. */
  readonly nuisance: readonly Float64Array[];
  readonly whitener?: Whitener;
}

/**
 * Finite impulse response fit: `lags` values `width` seconds apart for each condition, with no assumption about shape;
 * overlapping responses are told apart. Values stand at the start of each lag.
 * Source: Dale AM (1999) Hum Brain Mapp 8:109–114. Errors: `EngineError` for malformed data.
 */
export function fitImpulseResponse(data: ShapeData, lags: number, width: Seconds): ShapeFit {
  const columns = estimationColumns(data.conditions, lags, width, data.times).map((column) => column.values);
  const fit = fitLeastSquares([...columns, ...data.nuisance], data.y, data.whitener);
  const times = Float64Array.from({ length: lags }, (_, j) => j * width);
  const shapes = data.conditions.map(({ name }, i) => {
    const rows = Array.from({ length: lags }, (_, j) => {
      const row = new Array<number>(fit.coefficients.length).fill(0);
      row[i * lags + j] = 1;
      return row;
    });
    return shapeFrom(fit, name, times, rows);
  });
  return { fit, shapes };
}

/**
 * Fit of a basis (sines and cosines, gamma densities, …) to each condition's events; the shape is read every `step`
 * seconds over the basis's support.
 */
export function fitBasis(data: ShapeData, basis: ResponseBasis, step: Seconds): ShapeFit {
  requirePositive('distance of the points read', step, 'Use 0.5 s.');
  const columns = basisColumns(data.conditions, basis, data.times).map((column) => column.values);
  const fit = fitLeastSquares([...columns, ...data.nuisance], data.y, data.whitener);
  const length = Math.max(...basis.map((response) => response.length));
  const count = Math.floor(length / step + 1e-9) + 1;
  const times = Float64Array.from({ length: count }, (_, k) => k * step);
  const shapes = data.conditions.map(({ name }, i) => {
    const rows = Array.from(times, (t) => {
      const row = new Array<number>(fit.coefficients.length).fill(0);
      basis.forEach((response, j) => (row[i * basis.length + j] = response.value(t)));
      return row;
    });
    return shapeFrom(fit, name, times, rows);
  });
  return { fit, shapes };
}

/** Sines and cosines of order K on a window (without or with the Hanning window), see `sinesAndCosines`. */
export function fitSines(
  data: ShapeData,
  window: Seconds,
  order: number,
  step: Seconds,
  { isWindowed = true }: { isWindowed?: boolean } = {}
): ShapeFit {
  return fitBasis(data, sinesAndCosines({ window, order, isWindowed }), step);
}

/** A fitted shape as a response of its own, joined by cubic pieces through its points, for plots and for searches. */
export function interpolateShape(shape: FittedShape): Response {
  const step = shape.times.length > 1 ? shape.times[1]! - shape.times[0]! : 1;
  return sampledResponse(`Fitted response to ${shape.condition}`, shape.values, step);
}

function shapeFrom(fit: Fit, condition: string, times: Float64Array, rows: readonly number[][]): FittedShape {
  const values = new Float64Array(rows.length);
  const standardErrors = new Float64Array(rows.length);
  rows.forEach((row, k) => {
    const isLost = unestimable(fit, row) !== null;
    row.forEach((weight, j) => (values[k]! += weight * fit.coefficients[j]!));
    const spread = forwardSubstitute(
      fit.qr.r,
      fit.qr.kept.map((j) => row[j]!)
    );
    const variance = fit.variance * spread.reduce((sum, value) => sum + value * value, 0);
    standardErrors[k] = isLost || fit.df <= 0 ? Infinity : Math.sqrt(variance);
  });
  return { condition, times, values, standardErrors };
}
