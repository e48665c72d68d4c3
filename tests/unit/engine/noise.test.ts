import { describe, expect, it } from 'vitest';
import { EngineError } from '$lib/engine/errors';
import { constant, dctDrift, dctDriftAt, driftCount, polynomialDrift } from '$lib/engine/noise/drift';
import { rhoAt, type NoiseModel } from '$lib/engine/noise/model';
import { oneOverFSpectrum } from '$lib/engine/noise/one-over-f';
import { ar1Density } from '$lib/engine/noise/spectrum';
import { whitenerOf } from '$lib/engine/noise/whitener';
import { prepareSetting } from '$lib/engine/design/setting';
import { runInformation } from '$lib/engine/design/information';
import drift from '../../fixtures/reference/drift.json';
import reference from '../../fixtures/reference/noise.json';
import { denseInformation, inverse, times, toeplitz } from './dense';
import { expectAllNear, expectNear } from './near';

const noises = reference.noise;
const unit = (volumes: number, at: number) => new Float64Array(volumes).map((_, i) => (i === at ? 1 : 0));
/** Wᵀ W, column by column. */
function precision(noise: NoiseModel, volumes: number, tr = 2): number[][] {
  const whitener = whitenerOf(noise, { tr, volumes, times: null });
  const w = Array.from({ length: volumes }, (_, i) => whitener.apply(unit(volumes, i)));
  return w.map((a) => w.map((b) => a.reduce((sum, value, i) => sum + value * b[i]!, 0)));
}

describe('drift (SciPy’s DCT, NiPy, printed output of the original implementation)', () => {
  const all = drift.dct_filter;

  it('has floor(2·N·TR/cutoff) cosines beside the constant', () => {
    for (const [key, expected] of Object.entries(all.counts)) {
      const [, n, tr, cutoff] = /N=(\S+) TR=(\S+) cutoff=(\S+)/.exec(key)!.map(Number);
      expect(driftCount(n!, tr!, cutoff!), key).toBe(expected.cosines);
      expect(dctDrift(n!, tr!, cutoff!)).toHaveLength(expected.cosines);
    }
    // 2·160·0.8/128 is exactly 2, also in binary fractions.
    expect(driftCount(160, 0.8, 128)).toBe(2);
  });

  it('has the tabulated rows', () => {
    const columns = dctDrift(all.N, all.TR, all.cutoff);
    const row = (n: number) => columns.map((column) => column[n]!);
    all.first_rows.forEach((expected, n) => expectAllNear(row(n), expected));
    expectAllNear(row(99), all.middle_row_99);
    expectAllNear(row(199), all.last_row);
  });

  it('takes the tabulated variance out', () => {
    const y = Float64Array.from({ length: 200 }, (_, i) => {
      const t = 2 * Math.PI * i * all.TR;
      return Math.sin(t / 200) + 0.5 * Math.sin(t / 40);
    });
    const columns = [constant(200).map((value) => value / Math.sqrt(200)), ...dctDrift(200, 2, 128)];
    for (const column of columns) {
      const share = column.reduce((sum, value, i) => sum + value * y[i]!, 0);
      column.forEach((value, i) => (y[i]! -= share * value));
    }
    const variance = y.reduce((sum, value) => sum + value * value, 0) / 200;
    expectNear(variance, all.residual_forming_example.variance_after_population);
  });

  it('at uneven times agrees with the even formula where the times are even', () => {
    const even = Float64Array.from({ length: 120 }, (_, n) => 0.5 + 1.5 * n);
    dctDriftAt(even, 60).forEach((column, k) => expectAllNear(column, dctDrift(120, 1.5, 60)[k]!, 1, 1e-13));
  });

  it('polynomial: Legendre, scaled to length 1, each of its own order', () => {
    const columns = polynomialDrift(50, 4);
    expect(columns).toHaveLength(4);
    for (const column of columns) {
      expectNear(
        column.reduce((sum, value) => sum + value * value, 0),
        1
      );
    }
    // Third differences of a quadratic are 0, of a cubic are not.
    const difference = (y: number[]): number[] => y.slice(1).map((value, i) => value - y[i]!);
    const third = (k: number) => difference(difference(difference([...columns[k]!])));
    expect(Math.max(...third(1).map(Math.abs))).toBeLessThan(1e-15);
    expect(Math.abs(third(2)[0]!)).toBeGreaterThan(1e-6);
    expect(polynomialDrift(3, 9)).toHaveLength(2);
  });
});

describe('AR(1) (statsmodels, R, closed form)', () => {
  const {
    ar1,
    ar1_whitening_matrix_N6_rho0: six,
    ar1_to_other_TR: other
  } = {
    ...noises,
    ar1_whitening_matrix_N6_rho0: noises['ar1_whitening_matrix_N6_rho0.3']
  };
  const noise: NoiseModel = { kind: 'ar1', rho: 0.3, rhoTr: 2 };

  it('whitens with the tabulated matrix', () => {
    const whitener = whitenerOf(noise, { tr: 2, volumes: 6, times: null });
    six.W[0]!.forEach((_, j) =>
      expectAllNear(
        whitener.apply(unit(6, j)),
        six.W.map((row) => row[j]!),
        1,
        1e-15
      )
    );
  });

  it('has the tabulated precision and determinant', () => {
    const p = precision(noise, ar1.N);
    expectAllNear(p[0]!.slice(0, 3), ar1.prec_first_row);
    expectAllNear(p[1]!.slice(0, 4), ar1.prec_second_row);
    expectNear(whitenerOf(noise, { tr: 2, volumes: ar1.N, times: null }).logDeterminant, ar1.logdet);
  });

  it('carries rho to another TR', () => {
    expectNear(rhoAt(0.3, 2, 1), other.rho_at_TR1, 0, 1e-15);
    expectNear(rhoAt(0.3, 2, 0.72), other['rho_at_TR0.72'], 0, 1e-15);
    expect(rhoAt(-0.4, 2, 2)).toBe(-0.4);
    expect(() => rhoAt(-0.4, 2, 1)).toThrow(/rho is -0.4; expected a number not below 0 at a TR other/);
    expect(() => rhoAt(1, 2, 1)).toThrow(EngineError);
  });

  it('has the tabulated spectrum', () => {
    const { rho, f_TR: frequencies, S } = noises.ar1_spectrum;
    frequencies.forEach((f, i) => expectNear(ar1Density(rho, f), S[i]!));
  });

  it('at uneven times whitens V with ρ to the power of the distance', () => {
    const uneven = [0, 0.5, 1, 6, 6.5, 7, 12];
    const whitener = whitenerOf(noise, { tr: 2, volumes: 7, times: uneven });
    const w = uneven.map((_, i) => whitener.apply(unit(7, i)));
    const v = uneven.map((a) => uneven.map((b) => 0.3 ** (Math.abs(a - b) / 2)));
    const identity = inverse(v);
    w.forEach((a, i) =>
      w.forEach((b, j) =>
        expectNear(
          a.reduce((sum, value, k) => sum + value * b[k]!, 0),
          identity[i]![j]!,
          1,
          1e-13
        )
      )
    );
  });
});

describe('AR(1) plus white (SciPy)', () => {
  const all = noises.ar1_plus_white;
  const noise: NoiseModel = { kind: 'ar1-white', rho: all.rho, rhoTr: 2, share: all.lambda };

  it('has the tabulated inverse and determinant', () => {
    expectAllNear(precision(noise, 6)[0]!, all.inverse_first_row_N6);
    expectNear(whitenerOf(noise, { tr: 2, volumes: 6, times: null }).logDeterminant, all.logdet_N6);
  });

  it('is AR(1) at share 1 and white at share 0', () => {
    const ar = precision({ kind: 'ar1', rho: 0.5, rhoTr: 2 }, 20);
    precision({ ...noise, share: 1 }, 20).forEach((row, i) => expectAllNear(row, ar[i]!, 1, 1e-14));
    precision({ ...noise, share: 0 }, 5).forEach((row, i) => expectAllNear(row, unit(5, i), 1, 1e-15));
  });

  it('equals its autocorrelation handed over as a list', () => {
    const volumes = 40;
    const correlations = Array.from({ length: volumes }, (_, k) => 0.6 * 0.5 ** (k + 1));
    const given = precision({ kind: 'given', correlations }, volumes);
    precision(noise, volumes).forEach((row, i) => expectAllNear(row, given[i]!, 1, 1e-12));
  });
});

describe('given autocorrelation', () => {
  it('inverts V (dense elimination)', () => {
    const correlations = [0.4, 0.25, -0.1, 0.05];
    const expected = inverse(toeplitz(30, (lag) => (lag === 0 ? 1 : (correlations[lag - 1] ?? 0))));
    precision({ kind: 'given', correlations }, 30).forEach((row, i) =>
      expectAllNear(row, expected[i]!, 1, 1e-12)
    );
  });

  it('stops growing its predictor where nothing changes any more, and still inverts V', () => {
    const volumes = 260;
    const whitener = whitenerOf({ kind: 'given', correlations: [0.3, 0.1] }, { tr: 2, volumes, times: null });
    const v = toeplitz(volumes, (lag) => [1, 0.3, 0.1][lag] ?? 0);
    const wave = Float64Array.from({ length: volumes }, (_, n) => Math.sin(n * n));
    // (Wy)ᵀ(Wy) = yᵀV⁻¹y, so for y = Vx it is xᵀVx.
    const y = Float64Array.from(times(v, wave));
    const whitened = whitener.apply(y);
    const form = wave.reduce((sum, value, i) => sum + value * y[i]!, 0);
    expectNear(
      whitened.reduce((sum, value) => sum + value * value, 0),
      form
    );
  });

  it('refuses a list that no noise can have', () => {
    expect(() => precision({ kind: 'given', correlations: [0.9, 0] }, 10)).toThrow(
      /given autocorrelation up to lag/
    );
    expect(() => precision({ kind: 'given', correlations: [1.2] }, 10)).toThrow(EngineError);
  });
});

describe('1/f noise', () => {
  it('is white at exponent 0 but for the mean', () => {
    const centring = precision({ kind: 'one-over-f', exponent: 0 }, 12);
    centring.forEach((row, i) =>
      expectAllNear(
        row,
        row.map((_, j) => (i === j ? 1 : 0) - 1 / 12),
        1,
        1e-14
      )
    );
  });

  it('weighs each frequency by 1/S: a sinusoid of k cycles has information N/(2 S_k)', () => {
    const volumes = 60;
    const setting = prepareSetting({
      tr: 2,
      volumes,
      highPass: null,
      noise: { kind: 'one-over-f', exponent: 0.8 }
    });
    const spectrum = oneOverFSpectrum(0.8, volumes);
    for (const k of [1, 4, 17]) {
      const values = Float64Array.from({ length: volumes }, (_, n) =>
        Math.cos((2 * Math.PI * k * n) / volumes)
      );
      const { matrix } = runInformation([{ name: 'wave', values }], setting);
      expectNear(matrix[0]![0]!, volumes / (2 * spectrum[k]!));
    }
  });
});

describe('information by structure equals the dense definition', () => {
  const volumes = 80;
  const waves = [3, 7.3].map((period) =>
    Float64Array.from({ length: volumes }, (_, n) => Math.sin(n / period) + Math.cos(n * n * 0.01))
  );
  const models: [string, NoiseModel, (lag: number) => number][] = [
    ['white', { kind: 'white' }, (lag) => (lag === 0 ? 1 : 0)],
    ['AR(1)', { kind: 'ar1', rho: 0.5, rhoTr: 1 }, (lag) => 0.5 ** (lag * 2)],
    [
      'AR(1) + white',
      { kind: 'ar1-white', rho: 0.7, rhoTr: 2, share: 0.7 },
      (l) => (l === 0 ? 1 : 0.7 * 0.7 ** l)
    ],
    ['given', { kind: 'given', correlations: [0.3, 0.2, 0.1] }, (lag) => [1, 0.3, 0.2, 0.1][lag] ?? 0]
  ];
  it.each(models)('%s', (_name, noise, r) => {
    const setting = prepareSetting({ tr: 2, volumes, highPass: 60, noise });
    const { matrix } = runInformation(
      waves.map((values, j) => ({ name: `w${j}`, values })),
      setting
    );
    const nuisance = [constant(volumes), ...dctDrift(volumes, 2, 60)];
    const expected = denseInformation(waves, nuisance, toeplitz(volumes, r));
    expected.forEach((row, i) => expectAllNear(matrix[i]!, row, 1));
  });

  it('the variance of a mean under AR(1) (closed form)', () => {
    const all = noises.variance_inflation_of_mean_under_ar1;
    const v = toeplitz(all.N, (lag) => all.rho ** lag);
    const mean = times(v, constant(all.N)).reduce((sum, value) => sum + value, 0) / all.N;
    expectNear(mean, all.value);
  });
});
