import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import { peakScale } from '$lib/engine/convolution/peak-scale';
import { regressor } from '$lib/engine/convolution/regressor';
import { EngineError } from '$lib/engine/errors';
import {
  autocorrelation,
  averageTrials,
  durbinWatson,
  estimateAr1,
  fitAr1,
  fitBasis,
  fitImpulseResponse,
  fitLeastSquares,
  removeDrift,
  testContrast,
  testJointly
} from '$lib/engine/estimation';
import { householder } from '$lib/engine/linalg/qr';
import { dot } from '$lib/engine/linalg/vector';
import { constant, dctDrift } from '$lib/engine/noise/drift';
import { threeGammas } from '$lib/engine/response/bases';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import { expectAllNear, expectNear } from './near';
import reference from '../../fixtures/reference/glm.json';
import longley from '../../fixtures/reference/longley.json';

// Seconds of arithmetic, more on a machine that does other things as well.
vi.setConfig({ testTimeout: 60_000 });
// A failure here is one that anyone can see again.
fc.configureGlobal({ seed: 20261201 });

const { glm, ar1_likelihood: ar1 } = reference;
const f64 = (list: readonly number[]) => Float64Array.from(list);
const ones = (n: number) => new Float64Array(n).fill(1);

/** Columns of the fMRI-like sets: A, B, constant, six cosines; impulses at whole volumes, TR 2 s, phi 0. */
function likeFmri(): Float64Array[] {
  const h = doubleGamma();
  const times = Float64Array.from({ length: 200 }, (_, n) => 2 * n);
  const column = (volumes: number[]) =>
    regressor(
      volumes.map((v) => ({ onset: 2 * v, duration: 0 })),
      h,
      times,
      peakScale(h, 0)
    );
  const { A, B } = reference.random2.onset_volumes;
  return [column(A), column(B), constant(200), ...dctDrift(200, 2, 128)];
}
const weights = (a: number, b: number, columns = 9) => [a, b, ...new Array<number>(columns - 2).fill(0)];

describe('QR', () => {
  it('Q·R = A, QᵀQ = 1, also for dependent columns', () => {
    // Squares of numbers near 1e-300 are 0 in a double: nothing smaller than 1e-9 is asked beside 0 itself.
    const number = fc
      .double({ min: -10, max: 10, noNaN: true })
      .map((value) => (Math.abs(value) < 1e-9 ? 0 : value));
    fc.assert(
      fc.property(
        fc.array(fc.array(number, { minLength: 7, maxLength: 7 }), { minLength: 1, maxLength: 5 }),
        (lists) => {
          const columns = [...lists.map(f64), f64(lists[0]!).map((x) => 2 * x)];
          const qr = householder(columns);
          const scale = Math.max(1e-300, ...columns.map((column) => Math.sqrt(dot(column, column))));
          qr.kept.forEach((index, j) => {
            const z = new Float64Array(7);
            z.set(qr.r[j]!);
            qr.forward(z).forEach((value, n) =>
              expect(Math.abs(value - columns[index]![n]!)).toBeLessThan(1e-13 * scale)
            );
          });
          qr.dropped.forEach((index, d) => {
            const back = new Float64Array(7);
            qr.dependence[d]!.forEach((share, k) =>
              columns[qr.kept[k]!]!.forEach((value, n) => (back[n]! += share * value))
            );
            back.forEach((value, n) =>
              expect(Math.abs(value - columns[index]![n]!)).toBeLessThan(1e-6 * scale)
            );
          });
          expect(qr.dropped).toContain(columns.length - 1);
          const y = Float64Array.from({ length: 7 }, (_, n) => Math.cos(n));
          expectNear(dot(qr.transposed(y), qr.transposed(y)), dot(y, y), 0, 1e-13);
          qr.forward(qr.transposed(y)).forEach((value, n) => expect(value).toBeCloseTo(y[n]!, 13));
        }
      )
    );
  });
});

describe('ordinary least squares against certified and reference values', () => {
  it('a boxcar worked by hand: b = (10, 5), SSE 6, t = 4√5', () => {
    const { x, y, se, t, p_two_sided: p } = glm.hand_boxcar;
    const fit = fitLeastSquares([ones(10), f64(x)], f64(y));
    expectAllNear(fit.coefficients, [10, 5], 0, 1e-14);
    expectNear(fit.squares, 6, 0, 1e-13);
    expectNear(fit.variance, 0.75, 0, 1e-13);
    expectNear(fit.r2, glm.hand_boxcar.r2, 0, 1e-13);
    const tests = [testContrast(fit, [1, 0]), testContrast(fit, [0, 1])];
    expectAllNear(
      tests.map((test) => test.standardError),
      se,
      0,
      1e-13
    );
    expectAllNear(
      tests.map((test) => test.t),
      t,
      0,
      1e-13
    );
    tests.forEach((test, i) => expectNear(test.pTwoSided, p[i]!, 0, 1e-10));
    expect(tests[1]!.t).toBeCloseTo(4 * Math.sqrt(5), 12);
  });

  it('NIST NoInt1 and Norris (certified to 15 digits)', () => {
    const noInt = glm.nist_NoInt1;
    const one = fitLeastSquares([f64(noInt.x)], f64(noInt.y));
    expectNear(one.coefficients[0]!, noInt.certified.b, 0, 1e-13);
    expectNear(testContrast(one, [1]).standardError, noInt.certified.se, 0, 1e-13);
    expectNear(Math.sqrt(one.variance), noInt.certified.residual_sd, 0, 1e-13);
    const { x, y, certified } = glm.nist_Norris;
    const fit = fitLeastSquares([ones(x.length), f64(x)], f64(y));
    expectNear(fit.coefficients[0]!, certified.b0, 0, 1e-11);
    expectNear(fit.coefficients[1]!, certified.b1, 0, 1e-13);
    expectNear(testContrast(fit, [1, 0]).standardError, certified.se_b0, 0, 1e-12);
    expectNear(testContrast(fit, [0, 1]).standardError, certified.se_b1, 0, 1e-12);
    expectNear(Math.sqrt(fit.variance), certified.residual_sd, 0, 1e-12);
    expectNear(fit.squares, certified.ssr, 0, 1e-12);
    expectNear(fit.r2, certified.r2, 0, 1e-14);
  });

  it('NIST Longley: seven nearly dependent columns', () => {
    const { x, y, certified } = longley;
    const fit = fitLeastSquares([ones(16), ...x.map(f64)], f64(y));
    expect(fit.dropped).toEqual([]);
    // The condition number, near 5e9, leaves nine or more of the certified fifteen digits.
    expectAllNear(fit.coefficients, certified.b, 0, 1e-9);
    certified.se.forEach((se, j) => {
      const row = certified.se.map((_, k) => (k === j ? 1 : 0));
      expectNear(testContrast(fit, row).standardError, se, 0, 1e-9);
    });
    expectNear(Math.sqrt(fit.variance), certified.residual_sd, 0, 1e-10);
    expectNear(fit.r2, certified.r2, 0, 1e-12);
  });

  it('an fMRI-like run: effects, t, F, likelihood, residual autocorrelation', () => {
    const { ols, y, df } = glm.fmri_like;
    const fit = fitLeastSquares(likeFmri(), f64(y));
    expect(fit.df).toBe(df);
    expectAllNear(fit.coefficients.slice(0, 3), ols.b_A_B_const, 0);
    expectNear(fit.variance, ols.s2);
    expectNear(fit.squares, ols.ssr);
    expectNear(fit.logLikelihood, ols.loglik);
    for (const [name, row] of [
      ['A', weights(1, 0)],
      ['B', weights(0, 1)],
      ['A-B', weights(1, -1)]
    ] as const) {
      const test = testContrast(fit, row);
      expectNear(test.effect, ols[name].effect);
      expectNear(test.standardError, ols[name].se);
      expectNear(test.t, ols[name].t);
      expectNear(test.pTwoSided, ols[name].p_two_sided, 0, 1e-8);
      expectNear(test.pTwoSided, 2 * test.pOneSided, 0, 1e-14);
    }
    const joint = testJointly(fit, [weights(1, 0), weights(0, 1), weights(1, 1)]);
    expectNear(joint.f, ols.F_A_B_jointly);
    expect([joint.df1, joint.df2]).toEqual([2, df]);
    expectNear(joint.p, ols.F_p, 0, 1e-8);
    expectNear(testJointly(fit, [weights(3, 0)]).f, ols.A.t ** 2);
    expectNear(autocorrelation(fit.residuals, 1)[1]!, ols.residual_lag1_autocorr);
    expectNear(durbinWatson(fit.residuals), ols.durbin_watson);
  });
});

describe('generalised least squares with AR(1)', () => {
  it('given rho: the boxcar and the fMRI-like runs', () => {
    const { x, y } = glm.hand_boxcar;
    for (const rho of [0, 0.3, 0.6]) {
      const row = ar1.values[`hand_boxcar rho=${rho === 0 ? '0.0' : rho}` as 'hand_boxcar rho=0.3'];
      const { fit, restrictedLogLikelihood } = fitAr1([ones(10), f64(x)], f64(y), rho);
      expectAllNear(fit.coefficients, row.b, 0, 1e-12);
      expectNear(fit.variance, row.s2_unbiased_marginal, 0, 1e-12);
      expectNear(fit.squares / 10, row.s2_ml_marginal, 0, 1e-12);
      expectNear(fit.logLikelihood, row.loglik_ml_profile, 0, 1e-12);
      expectNear(restrictedLogLikelihood, row["loglik_reml_profile_(no X'X term)"], 0, 1e-12);
      expectAllNear([testContrast(fit, [1, 0]).t, testContrast(fit, [0, 1]).t], row.t, 0, 1e-12);
    }
    const gls = glm.fmri_like['gls_ar1_0.3'];
    const { fit } = fitAr1(likeFmri(), f64(glm.fmri_like.y), 0.3);
    expectAllNear(fit.coefficients.slice(0, 3), gls.b_A_B_const, 0);
    expectNear(fit.variance, gls['s2_(marginal)']);
    expectNear(fit.logLikelihood, gls.loglik_statsmodels);
    expectNear(testContrast(fit, weights(1, -1)).t, gls['A-B'].t);
    expectNear(testContrast(fit, weights(1, -1)).pTwoSided, gls['A-B'].p_two_sided, 0, 1e-8);
  });

  it('rho by maximum likelihood: lh to 20 digits, the boxcar, the fMRI-like runs', () => {
    const exact = ar1.values.lh.ml_20_digits;
    const lh = estimateAr1([ones(48)], f64(ar1.values.lh.data), 'ML');
    expectNear(lh.rho, Number(exact.rho), 0, 1e-12);
    expectNear(lh.fit.coefficients[0]!, Number(exact.mean), 0, 1e-12);
    expectNear(lh.fit.logLikelihood, Number(exact.loglik), 0, 1e-13);
    expectNear(lh.fit.squares / 48, Number(exact.marginal_variance), 0, 1e-12);
    expect((lh.fit.squares / 48) * (1 - lh.rho ** 2)).toBeCloseTo(Number(exact.innovation_variance), 12);
    const { x, y } = glm.hand_boxcar;
    const box = estimateAr1([ones(10), f64(x)], f64(y), 'ML');
    const wanted = ar1.values['hand_boxcar ML'];
    // The reference's optimiser stops near 1e-8 in rho.
    expectNear(box.rho, wanted.rho, 1, 1e-7);
    expectNear(box.fit.logLikelihood, wanted.loglik, 0, 1e-12);
    const run = ar1.values.fmri_like_ar;
    const ml = estimateAr1(likeFmri(), f64(run.y), 'ML');
    expectNear(ml.rho, run.rho_ml, 1, 1e-7);
    expectNear(ml.fit.logLikelihood, run.loglik_ml, 0, 1e-12);
    // Its coefficients are those at its rho, itself good to 1e-8.
    expectAllNear(ml.fit.coefficients.slice(0, 3), run.gls_rho_ml.b_A_B_const, 1, 1e-7);
    expectNear(testContrast(ml.fit, weights(1, 0)).t, run.gls_rho_ml.A.t, 1, 1e-7);
    expectNear(estimateAr1(likeFmri(), f64(glm.fmri_like.y), 'ML').rho, ar1.values.fmri_like.rho_ml, 1, 1e-7);
  });

  it('rho by REML', () => {
    const { x, y } = glm.hand_boxcar;
    const box = estimateAr1([ones(10), f64(x)], f64(y), 'REML');
    expectNear(box.rho, ar1.values['hand_boxcar REML rho'], 1, 1e-7);
    const run = estimateAr1(likeFmri(), f64(ar1.values.fmri_like_ar.y), 'REML');
    expectNear(run.rho, ar1.values.fmri_like_ar.rho_reml, 1, 1e-7);
    expectNear(
      estimateAr1(likeFmri(), f64(glm.fmri_like.y), 'REML').rho,
      ar1.values.fmri_like.rho_reml,
      1,
      1e-7
    );
    for (const step of [-1e-4, 1e-4])
      expect(
        fitAr1(likeFmri(), f64(ar1.values.fmri_like_ar.y), run.rho + step).restrictedLogLikelihood
      ).toBeLessThan(run.restrictedLogLikelihood);
  });
});

describe('poor designs and bad data', () => {
  const x = f64([0, 1, 0, 1, 1]);
  const y = f64([1, 3, 1, 4, 3]);

  it('A − B can be told where A and B cannot', () => {
    const b = x.map((value) => 1 - value);
    const fit = fitLeastSquares([x, b, ones(5)], y);
    expect(fit.dropped).toEqual([2]);
    expect(testContrast(fit, [1, 0, 0])).toMatchObject({ estimable: false, effect: 0, t: 0, pTwoSided: 1 });
    expect(testContrast(fit, [1, 0, 0]).reason).toMatch(/Column 3 depends.*Leave that column out/);
    const difference = testContrast(fit, [1, -1, 0]);
    expectNear(difference.effect, 10 / 3 - 1, 0, 1e-13);
    expect(testJointly(fit, [[0, 1, 0]])).toMatchObject({ f: 0, p: 1 });
    expectNear(
      testJointly(fit, [
        [1, -1, 0],
        [2, -2, 0]
      ]).f,
      difference.t ** 2,
      0,
      1e-12
    );
  });

  it('never gives NaN: empty columns, more columns than volumes, perfect fits, constant data', () => {
    const fits = [
      fitLeastSquares([], y),
      fitLeastSquares([new Float64Array(5)], y),
      fitLeastSquares(
        [
          x,
          x,
          x,
          x.map((v) => v * v),
          ones(5),
          f64([1, 2, 3, 4, 5]),
          f64([1, 4, 9, 16, 25]),
          f64([0, 0, 1, 0, 0])
        ],
        y
      ),
      fitLeastSquares([ones(5)], ones(5)),
      fitLeastSquares([ones(1)], ones(1)),
      fitLeastSquares([x, ones(5)], new Float64Array(5))
    ];
    for (const fit of fits) {
      for (const value of [
        ...fit.coefficients,
        ...fit.residuals,
        fit.variance,
        fit.squares,
        fit.r2,
        fit.logLikelihood
      ])
        expect(Number.isNaN(value)).toBe(false);
      fit.coefficients.forEach((_, j) => {
        const row = fit.coefficients.map((_value, k) => (k === j ? 1 : 0));
        const test = testContrast(fit, row);
        expect(
          [test.effect, test.standardError, test.t, test.pTwoSided, test.margin].some(Number.isNaN)
        ).toBe(false);
        expect([testJointly(fit, [row]).f, testJointly(fit, [row]).p].some(Number.isNaN)).toBe(false);
      });
    }
    expect(fits[2]!.df).toBe(0);
    expect(testContrast(fits[2]!, [0, 0, 0, 0, 1, 0, 0, 0]).reason).toMatch(
      /nothing is left.*Use fewer columns/
    );
    const flat = estimateAr1([ones(9)], ones(9), 'REML');
    expect(flat.rho).toBe(0);
    expect(autocorrelation(new Float64Array(4), 2)).toEqual(new Float64Array(3));
    expect(durbinWatson(new Float64Array(4))).toBe(2);
    const lost = fitImpulseResponse(
      { y, times: [0, 1, 2, 3, 4], conditions: [{ name: 'none', events: [] }], nuisance: [ones(5)] },
      2,
      1
    );
    expect(Array.from(lost.shapes[0]!.standardErrors)).toEqual([Infinity, Infinity]);
  });

  it('refuses malformed data with value, expectation and way out', () => {
    for (const call of [
      () => fitLeastSquares([], new Float64Array(0)),
      () => fitLeastSquares([x], f64([1, NaN, 1, 1, 1])),
      () => fitLeastSquares([f64([1, 2])], y),
      () => fitLeastSquares([f64([1, 2, 3, Infinity, 5])], y),
      () => fitAr1([x], y, 1),
      () => fitAr1([x], y, NaN),
      () => estimateAr1([x, ones(5), f64([1, 2, 3, 4, 5]), f64([1, 0, 0, 0, 0])], y, 'ML'),
      () => testContrast(fitLeastSquares([x], y), [1, 2]),
      () => testContrast(fitLeastSquares([x], y), [NaN]),
      () => averageTrials(y, [0.5], 2),
      () => averageTrials(y, [4], 2),
      () => averageTrials(y, [0], 0),
      () => autocorrelation(y, 5),
      () => removeDrift(y, 0, 128),
      () => removeDrift(y, 2, -1),
      () => fitBasis({ y, times: [0, 1, 2, 3, 4], conditions: [], nuisance: [] }, threeGammas(), 0)
    ]) {
      expect(call).toThrow(EngineError);
      expect(call).toThrow(/ is .*; expected .*\. .*\./);
    }
  });
});
