import { orthonormalBasis } from '../linalg/basis';
import { dot, gram } from '../linalg/vector';
import { autocorrelationOf, correlate } from '../noise/autocorrelation';
import { requireContrast } from './contrast';
import { residualOf } from './information';
import { readContrast, rowSpaceOf } from './row-space';
import { prepareSetting, requireColumn, type Column, type SettingInput } from './setting';

/** What plain least squares (no whitening) makes of a design under correlated noise. */
export interface OrdinaryReport {
  /** 1/(c (RᵀR)⁻¹ RᵀVR (RᵀR)⁻¹ cᵀ) with R the projected columns; 0 where not estimable. Never above the GLS one. */
  efficiency: number;
  /** tr(RV), what the residual sum of squares expects. */
  traceRV: number;
  /** tr(RV)²/tr(RVRV): degrees of freedom a t statistic should be given. */
  effectiveDf: number;
  /** N − rank of the whole model. */
  nominalDf: number;
}

/**
 * Efficiency and effective degrees of freedom of ordinary least squares under the noise model ("sandwich" variance,
 * Satterthwaite's approximation). Even volume times.
 *
 * Source: Worsley KJ, Friston KJ (1995) Analysis of fMRI time-series revisited – again. NeuroImage 2:173–181.
 * @param weights one weight per column
 */
export function ordinaryReport(
  input: SettingInput & { columns: readonly Column[] },
  weights: readonly number[]
): OrdinaryReport {
  const { base, plain, nuisance } = prepareSetting({ ...input, noise: { kind: 'white' } });
  requireContrast({ name: 'contrast', weights: [...weights] }, input.columns.length);
  const r = autocorrelationOf(input.noise, base.tr, base.volumes);
  const columns = input.columns.map((column) => requireColumn(column, base.volumes).values);
  const rest = columns.map((column) => residualOf(column, plain.q));
  const matrix = gram(rest);
  const space = rowSpaceOf(matrix);
  const reading = readContrast(space, weights);

  const { q } = orthonormalBasis([...nuisance.map((column) => column.values), ...columns]);
  const vq = q.map((column) => correlate(r, column));
  const inner = q.map((a) => vq.map((b) => dot(a, b)));
  const traceRV = base.volumes * r[0]! - inner.reduce((sum, row, i) => sum + row[i]!, 0);
  let squareV = base.volumes * r[0]! * r[0]!;
  for (let k = 1; k < base.volumes; k += 1) squareV += 2 * (base.volumes - k) * r[k]! * r[k]!;
  const squareQ = vq.reduce((sum, column) => sum + dot(column, column), 0);
  const squareInner = inner.reduce(
    (sum, row) => sum + row.reduce((total, value) => total + value * value, 0),
    0
  );
  const traceRVRV = squareV - 2 * squareQ + squareInner;
  const effectiveDf = traceRVRV > 0 ? (traceRV * traceRV) / traceRVRV : 0;

  let efficiency = 0;
  if (reading.estimable) {
    // The estimate is a sum over volumes: its weights are the projected columns times M⁺c.
    const estimator = new Float64Array(base.volumes);
    space.vectors.slice(0, space.rank).forEach((vector, k) => {
      const share = weights.reduce(
        (sum, weight, j) => sum + weight * space.inverseLengths[j]! * vector[j]!,
        0
      );
      rest.forEach((column, j) => {
        const factor = (share / space.values[k]!) * vector[j]! * space.inverseLengths[j]!;
        column.forEach((value, n) => (estimator[n]! += factor * value));
      });
    });
    efficiency = 1 / dot(estimator, correlate(r, estimator));
  }
  return { efficiency, traceRV, effectiveDf, nominalDf: base.volumes - q.length };
}
