import { describe, expect, it, vi } from 'vitest';
import { peakScale } from '$lib/engine/convolution/peak-scale';
import { regressor } from '$lib/engine/convolution/regressor';
import { volumeTimes } from '$lib/engine/convolution/times';
import { estimationColumns } from '$lib/engine/design/columns';
import { covarianceOf, criteriaOf, identityRows, individualAndPairs } from '$lib/engine/design/criteria';
import { designReport } from '$lib/engine/design/report';
import { rowSpaceOf } from '$lib/engine/design/row-space';
import { binaryMSequence, optimalShare, tradeOff } from '$lib/engine/design/theory';
import { certifiedIntegral } from '$lib/engine/response/certified-integral';
import { estimateAr1, fitAr1, fitLeastSquares, testContrast, autocorrelation } from '$lib/engine/estimation';
import { autocorrelationOf } from '$lib/engine/noise/autocorrelation';
import { constant, dctDrift } from '$lib/engine/noise/drift';
import type { NoiseModel } from '$lib/engine/noise/model';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import { gainOf } from '$lib/engine/response/transfer';
import { finiteField, fullPeriodRecursions, mSequence } from '$lib/engine/sequence';
import designReference from '../../fixtures/reference/designs.json';
import drift from '../../fixtures/reference/drift.json';
import glmReference from '../../fixtures/reference/glm.json';
import noiseReference from '../../fixtures/reference/noise.json';
import sequences from '../../fixtures/reference/sequence.json';
import theoryReference from '../../fixtures/reference/theory.json';
import { expectAllNear, expectNear } from './near';

// Reference values that no other test file reads. Room for a loaded machine.
vi.setConfig({ testTimeout: 60_000 });

const theory = theoryReference.efficiency_theory;
const designs = designReference.efficiency_designs;
const f64 = (list: readonly number[]) => Float64Array.from(list);
const white: NoiseModel = { kind: 'white' };
const ar: NoiseModel = { kind: 'ar1', rho: 0.3, rhoTr: 2 };

describe('theory of efficiency', () => {
  it('optimal shares, what they reach, and the loss at 1/(Q + 1)', () => {
    for (const [key, row] of Object.entries(theory.optimal_frequency.table)) {
      const q = Number(key.slice(2));
      const matrix = (p: number) =>
        rowSpaceOf(identityRows(q).map((line, i) => line.map((_, j) => (i === j ? p : 0) - p * p)));
      expectNear(optimalShare(q, 'individual'), row['p_individual_1/(Q+sqrtQ)']);
      expectNear(optimalShare(q, 'both'), row['p_both_1/(Q+1)']);
      expectNear(optimalShare(q, 'pairs'), row['p_pairs_only_1/Q']);
      const alone = criteriaOf(matrix(optimalShare(q, 'individual')), identityRows(q)).a;
      expectNear(alone, row['xi_individual_per_N_at_optimum_1/(1+sqrtQ)^2']);
      const both = matrix(1 / (q + 1));
      expectNear(criteriaOf(both, individualAndPairs(q)).a, row['xi_both_per_N_at_optimum_1/(2(Q+1))']);
      const there = criteriaOf(both, identityRows(q)).a;
      expectNear(there, row['xi_individual_at_1/(Q+1)']);
      expectNear(1 - there / alone, row['relative_loss_individual_at_1/(Q+1)'], 1);
      const pairs = row['xi_pairs_per_N_at_1/Q_1/(2Q)'];
      if (pairs !== null) expectNear(criteriaOf(matrix(1 / q), individualAndPairs(q).slice(q)).a, pairs);
    }
  });

  it('binary m-sequences: closed form for each order and window', () => {
    for (const [key, row] of Object.entries(theory.m_sequence_binary_fir.table)) {
      const [, n, k] = /N=(\d+) k=(\d+)/.exec(key)!.map(Number);
      const order = Math.log2(n! + 1);
      expectNear(binaryMSequence(order, k!), row.one_over_trace_closed_form);
      expectNear(k! * binaryMSequence(order, k!), row.A_eff_k_over_trace);
      expect(binaryMSequence(order, k!)).toBeLessThan(row['bound_N/(4k)_for_one_over_trace']);
    }
  });

  it('trade-off: how much longer a run must be for both aims', () => {
    for (const [key, table] of Object.entries(theory.tradeoff_single_type.table)) {
      const k = Number(key.slice(2));
      const alpha = (k + 1) / (2 * k);
      const { estimation, detection } = tradeOff(k, alpha);
      expectNear(1 / detection, table.length_factor_to_match_both);
      expectNear(1 / (k * k * estimation), table.length_factor_to_match_both);
      for (const row of table.rows)
        expectNear(tradeOff(k, row.alpha).estimation * k * k, row.xi_normalised_k2, 1);
    }
  });

  it('energy of the response and its gain at 0 and at its best frequency', () => {
    const h = doubleGamma({ length: 80 });
    const { E_h_raw: energy, E_h_peak1_s: scaled } = theory.random_slots_known_shape;
    const integral = certifiedIntegral((t) => h.value(t) ** 2, 80)(80);
    expectNear(integral, Number(energy));
    expectNear(integral / h.peak.value ** 2, Number(scaled));
    const { gain_at_0: still, period_s: period, gain_max: most } = theory.canonical_transfer_function;
    const endless = doubleGamma({ length: Infinity });
    expectNear(gainOf(endless, 0), still);
    expectNear(gainOf(endless, 1 / period), most);
  });
});

describe('estimation designs: 1/trace of the covariance over all lags', () => {
  it.each([
    ['const | white', null, white],
    ['const | ar1_0.3', null, ar],
    ['const+dct128 | white', 128, white],
    ['const+dct128 | ar1_0.3', 128, ar]
  ] as const)('%s', (setting, highPass, noise) => {
    const modelledAt = volumeTimes({ tr: 2, volumes: 200, sliceReference: 0 });
    for (const name of ['fixed20', 'jitter', 'block16', 'random2'] as const) {
      const expected = designs[name][setting].fir;
      const conditions = Object.entries(designs[name].onset_volumes).map(([condition, at]) => ({
        name: condition,
        events: at.map((volume) => ({ onset: 2 * volume, duration: 0 }))
      }));
      const columns = estimationColumns(conditions, designs.settings.fir_lags, 2, modelledAt);
      const report = designReport({ tr: 2, volumes: 200, columns, contrasts: [], highPass, noise });
      const covariance = covarianceOf(rowSpaceOf(report.information), identityRows(columns.length));
      const trace = covariance.reduce((sum, row, i) => sum + row[i]!, 0);
      expectNear(1 / trace, expected.one_over_trace);
      expectNear(trace, expected.trace_of_covariance);
    }
  });
});

describe('noise and drift', () => {
  it('periods of the cosines, and their number with the constant', () => {
    const { N, TR, cutoff, n_cosines: count, periods_s: periods, counts } = drift.dct_filter;
    const columns = dctDrift(N, TR, cutoff);
    expect(columns).toHaveLength(count);
    // A half cosine of order k changes its sign k times: its period is 2·N·TR/k.
    columns.forEach((column, k) => {
      const changes = column.filter((value, n) => n > 0 && value * column[n - 1]! < 0).length;
      expect(changes).toBe(k + 1);
      expectNear((2 * N * TR) / changes, periods[k]!);
    });
    for (const [key, { with_constant: all }] of Object.entries(counts)) {
      const [, n, tr, at] = /N=(\S+) TR=(\S+) cutoff=(\S+)/.exec(key)!.map(Number);
      expect(dctDrift(n!, tr!, at!).length + 1, key).toBe(all);
    }
  });

  it('autocorrelation of AR(1) plus white; inflation of a mean under AR(1)', () => {
    const { rho, lambda, first_row_N6: row } = noiseReference.noise.ar1_plus_white;
    expectAllNear(autocorrelationOf({ kind: 'ar1-white', rho, rhoTr: 2, share: lambda }, 2, 6), row);
    const mean = noiseReference.noise.variance_inflation_of_mean_under_ar1;
    const inflation = (volumes: number) => {
      const r = autocorrelationOf({ kind: 'ar1', rho: mean.rho, rhoTr: 2 }, 2, volumes);
      return r.reduce((sum, value, k) => sum + (k === 0 ? 1 : 2 * (1 - k / volumes) * value), 0);
    };
    expectNear(inflation(mean.N), mean.value);
    // The rest falls as 1/N: 1.2/N of the limit.
    expectNear(inflation(100_000), mean['limit_(1+rho)/(1-rho)'], 0, 2e-5);
  });
});

describe('estimation on data', () => {
  const { values } = glmReference.ar1_likelihood;
  const h = doubleGamma();
  const at = volumeTimes({ tr: 2, volumes: 200, sliceReference: 0 });
  const columns = [
    ...Object.values(glmReference.random2.onset_volumes).map((onsets) =>
      regressor(
        onsets.map((volume) => ({ onset: 2 * volume, duration: 0 })),
        h,
        at,
        peakScale(h, 0)
      )
    ),
    constant(200),
    ...dctDrift(200, 2, 128)
  ];
  const weights = (a: number, b: number, c = 0) => [a, b, c, 0, 0, 0, 0, 0, 0];

  it('likelihoods at given rho', () => {
    for (const [run, y] of [
      [values.fmri_like, glmReference.glm.fmri_like.y],
      [values.fmri_like_ar, values.fmri_like_ar.y]
    ] as const) {
      expectNear(fitAr1(columns, f64(y), 0).fit.logLikelihood, run.loglik_at_rho_0);
      expectNear(fitAr1(columns, f64(y), 0.3).fit.logLikelihood, run['loglik_at_rho_0.3']);
      expectNear(estimateAr1(columns, f64(y), 'ML').fit.logLikelihood, run.loglik_ml);
    }
    const { rho_ml: rho, b_at_rho_ml: b } = values.fmri_like;
    expectAllNear(fitAr1(columns, f64(glmReference.glm.fmri_like.y), rho).fit.coefficients.slice(0, 3), b, 0);
  });

  it('the run with autocorrelated noise: ordinary and with given rho, errors, t and p', () => {
    const run = values.fmri_like_ar;
    const y = f64(run.y);
    const fits = [
      [fitLeastSquares(columns, y), run.ols, run.ols.s2],
      [fitAr1(columns, y, 0.3).fit, run['gls_rho_0.3'], run['gls_rho_0.3'].s2_marginal],
      [fitAr1(columns, y, run.rho_ml).fit, run.gls_rho_ml, run.gls_rho_ml.s2_marginal]
    ] as const;
    for (const [fit, expected, variance] of fits) {
      expectAllNear(fit.coefficients.slice(0, 3), expected.b_A_B_const, 0);
      expectNear(fit.variance, variance);
      [weights(1, 0), weights(0, 1), weights(0, 0, 1)].forEach((row, i) =>
        expectNear(testContrast(fit, row).standardError, expected.se[i]!)
      );
      for (const [name, row] of [
        ['A', weights(1, 0)],
        ['B', weights(0, 1)],
        ['A-B', weights(1, -1)]
      ] as const) {
        const test = testContrast(fit, row);
        expectNear(test.effect, expected[name].effect);
        expectNear(test.standardError, expected[name].se);
        expectNear(test.t, expected[name].t);
        // Far out, p moves by t times the relative change of t: 1e-9 of t is some 1e-8 of p.
        expectNear(test.pTwoSided, expected[name].p_two_sided, 0, 1e-8);
      }
    }
    expectNear(autocorrelation(fits[0][0].residuals, 1)[1]!, run.ols.residual_lag1_autocorr);
  });

  it('unbiased errors of the boxcar under given rho', () => {
    const { x, y } = glmReference.glm.hand_boxcar;
    for (const rho of [0, 0.3, 0.6]) {
      const row = values[`hand_boxcar rho=${rho === 0 ? '0.0' : rho}` as 'hand_boxcar rho=0.3'];
      const { fit } = fitAr1([constant(10), f64(x)], f64(y), rho);
      expectAllNear(
        [testContrast(fit, [1, 0]).standardError, testContrast(fit, [0, 1]).standardError],
        row.se_unbiased,
        0
      );
    }
    const wanted = values['hand_boxcar ML'];
    const ml = fitAr1([constant(10), f64(x)], f64(y), wanted.rho).fit;
    expectAllNear(ml.coefficients, wanted.b, 0);
    expectNear(ml.squares / 10, wanted.s2_marginal);
  });

  it('the series lh as R prints it', () => {
    const { data, printed_by_R_arima_4_2_2: printed, aic_3_parameters: aic } = values.lh;
    const { rho, fit } = estimateAr1([constant(48)], f64(data), 'ML');
    // Printed to as many digits.
    expect(rho).toBeCloseTo(printed.ar1, 4);
    expect(fit.coefficients[0]).toBeCloseTo(printed.intercept, 4);
    expect((fit.squares / 48) * (1 - rho * rho)).toBeCloseTo(printed.sigma2, 4);
    expect(fit.logLikelihood).toBeCloseTo(printed.loglik, 2);
    expectNear(6 - 2 * fit.logLikelihood, aic);
    expect(6 - 2 * fit.logLikelihood).toBeCloseTo(printed.aic, 2);
  });

  it('uncentred r² of a fit without constant (NIST NoInt1)', () => {
    const { x, y, certified } = glmReference.glm.nist_NoInt1;
    const fit = fitLeastSquares([f64(x)], f64(y));
    expectNear(1 - fit.squares / y.reduce((sum, value) => sum + value * value, 0), certified.r2_uncentred);
  });
});

describe('m-sequences: polynomials', () => {
  it.each(Object.entries(sequences.m_sequences.table))('%s', (name, row) => {
    const [, q, n] = /GF\((\d)\) n=(\d)/.exec(name)!.map(Number) as [number, number, number];
    const field = finiteField(q);
    const minus = (a: number) => Array.from({ length: q }, (_, b) => b).find((b) => field.add(a, b) === 0)!;
    // s_t = Σ cᵢ s_(t−i) has xⁿ − Σ cᵢ xⁿ⁻ⁱ.
    expect([1, ...mSequence(q, n).coefficients.map(minus)]).toEqual(row.polynomial_high_to_low);
    expect([...fullPeriodRecursions(field, n)]).toHaveLength(
      row['number_of_primitive_polynomials_phi(q^n-1)/n']
    );
  });
});
