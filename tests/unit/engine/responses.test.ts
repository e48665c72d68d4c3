import { describe, expect, it } from 'vitest';
import { EngineError } from '$lib/engine/errors';
import {
  doubleGammaWithDerivatives,
  finiteImpulseResponse,
  sinesAndCosines,
  threeGammas
} from '$lib/engine/response/bases';
import { RESPONSES } from '$lib/engine/response/catalogue';
import { certifiedIntegral } from '$lib/engine/response/certified-integral';
import {
  dispersionDerivative,
  dispersionDifference,
  timeDerivative,
  timeDifference
} from '$lib/engine/response/derivatives';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import { plotOf } from '$lib/engine/response/plot';
import { boynton, glover, GLOVER_AUDITORY, GLOVER_MOTOR, gammaVariate } from '$lib/engine/response/published';
import type { Response } from '$lib/engine/response/response';
import { sampledResponse } from '$lib/engine/response/sampled';
import reference from '../../fixtures/reference/response.json';
import { expectAllNear, expectNear } from './near';

const valuesAt = (response: Response, times: readonly number[]) => times.map((t) => response.value(t));

describe('derivatives of the double gamma (reference values: SciPy, mpmath, NiPy)', () => {
  const { t, temporal_derivative: temporal, dispersion_derivative: dispersion } = reference.canonical_hrf;

  it('in time: analytic and as a 1 s difference', () => {
    expectAllNear(valuesAt(timeDerivative(doubleGamma()), t), temporal.analytic_raw);
    expectAllNear(valuesAt(timeDifference(), t), temporal.finite_difference_raw);
  });

  it('in dispersion: analytic and as a 1 % difference', () => {
    expectAllNear(valuesAt(dispersionDerivative(), t), dispersion.analytic_raw);
    // The difference of two nearly equal numbers over 0.01 costs two digits: 1e-9 of the largest still holds.
    expectAllNear(valuesAt(dispersionDifference(), t), dispersion.finite_difference_raw);
  });
});

describe('published shapes (reference values: SciPy, NiPy, nitime parameters)', () => {
  it('Glover 1999, auditory and motor', () => {
    const all = reference.glover_1999;
    for (const [name, parameters, values] of [
      ['auditory', GLOVER_AUDITORY, all.auditory_unscaled],
      ['motor', GLOVER_MOTOR, all.motor_unscaled]
    ] as const) {
      const h = glover(parameters);
      expectAllNear(valuesAt(h, all.t), values);
      expectNear(h.peak.time, Number(all[name].peak_time_s));
      expectNear(h.peak.value, Number(all[name].peak_value));
      expectNear(h.value(Number(all[name].undershoot_time_s)), Number(all[name].undershoot_value));
      expectNear(glover(parameters, Infinity).integral(1e3), Number(all[name].integral_0_inf));
    }
    const auditory = glover();
    expectAllNear(
      all.t.map((t) => auditory.value(t) / auditory.peak.value),
      all.auditory_peak1
    );
  });

  it('Boynton et al. 1996, both parameter sets', () => {
    const all = reference.boynton_1996;
    for (const [h, expected] of [
      [boynton(), all['n3_tau1.08_delta2.05']],
      [boynton(1.25, 2.5), all['n3_tau1.25_delta2.5']]
    ] as const) {
      expectAllNear(valuesAt(h, all.t), expected.values);
      expectNear(h.peak.time, expected.peak_time_s);
      expectNear(h.peak.value, expected.peak_value);
    }
    expectNear(boynton(1.08, 2.05, 3, Infinity).integral(500), 1, 0, 1e-14);
  });

  it('Cohen 1997: peak at 8.6 × 0.547 s (published), value of the formula', () => {
    const h = gammaVariate();
    expectNear(h.peak.time, 8.6 * 0.547);
    for (const t of [0.5, 2, 4.7, 9, 20]) expectNear(h.value(t), t ** 8.6 * Math.exp(-t / 0.547));
  });
});

describe('bases', () => {
  it('three gamma densities (source text of the basis)', () => {
    const { t, columns_by_row: rows } = reference.gamma_basis_3;
    const basis = threeGammas();
    basis.forEach((h, j) =>
      expectAllNear(
        valuesAt(h, t),
        rows.map((row) => row[j]!)
      )
    );
    basis.forEach((h, j) => expectNear(h.peak.time, [3, 7, 15][j]!));
  });

  it('windowed sines and cosines (source text of the set)', () => {
    const { t, T, K, columns_by_row: rows } = reference.fourier_set;
    const basis = sinesAndCosines({ window: T, order: K, isWindowed: true });
    expect(basis).toHaveLength(reference.fourier_set.n_columns);
    basis.forEach((h, j) =>
      expectAllNear(
        valuesAt(h, t),
        rows.map((row) => row[j]!),
        1,
        1e-14
      )
    );
    const sum = t.reduce((total, time) => total + basis[0]!.value(time), 0);
    expectNear(sum, reference.fourier_set.hanning_sum_over_t_0_32, 0, 1e-14);
  });

  it('flat sines and cosines, with and without the constant', () => {
    const { t_unwindowed: t, unwindowed_K3_at_t_0_2_32: rows, T, K } = reference.fourier_set;
    const basis = sinesAndCosines({ window: T, order: K, isWindowed: false });
    basis.forEach((h, j) =>
      expectAllNear(
        valuesAt(h, t),
        rows.map((row) => row[j]!),
        1,
        1e-14
      )
    );
    expect(sinesAndCosines({ window: T, order: K, isWindowed: false, hasConstant: false })).toHaveLength(6);
  });

  it('finite impulse response: one lag at a time, edges to half a microsecond', () => {
    const basis = finiteImpulseResponse(8, 0.735);
    for (let lag = 0; lag < 8; lag += 1) {
      // 3 · 0.735 is not exact in binary; the bin it opens must be its own all the same.
      const hits = basis.map((h) => h.value(0.1 + lag * 0.735 - 0.1));
      expect(hits).toEqual(Array.from({ length: 8 }, (_, j) => (j === lag ? 1 : 0)));
    }
    expect(basis.reduce((sum, h) => sum + h.integral(100), 0)).toBeCloseTo(8 * 0.735, 14);
  });
});

describe('every shape', () => {
  const shapes: Response[] = [
    doubleGamma(),
    ...doubleGammaWithDerivatives(),
    timeDifference(),
    dispersionDifference(),
    glover(),
    boynton(),
    gammaVariate(),
    ...threeGammas(),
    ...sinesAndCosines({ window: 24, order: 2, isWindowed: true }),
    ...sinesAndCosines({ window: 24, order: 2, isWindowed: false }),
    sampledResponse('own', [0, 0.1, 0.8, 1, 0.4, 0.4, -0.2, 0], 2)
  ];

  it.each(shapes.map((h) => [h.name, h] as const))(
    '%s: integral is the area, peak the maximum',
    (_name, h) => {
      const points = 400;
      const step = h.length / points;
      const scale = Math.max(...Array.from({ length: points + 1 }, (_, i) => Math.abs(h.value(i * step))));
      for (let i = 0; i < points; i += 7) {
        const [a, b] = [i * step, (i + 1) * step];
        // Gauss–Legendre with three points on 1/400 of the support: good to 1e-6 of the peak for these shapes.
        const r = Math.sqrt(0.6);
        const [m, half] = [(a + b) / 2, (b - a) / 2];
        const area = (half * (5 * h.value(m - r * half) + 8 * h.value(m) + 5 * h.value(m + r * half))) / 9;
        expectNear(h.integral(b) - h.integral(a), area, scale * h.length, 1e-6);
      }
      for (let i = 0; i <= points; i += 1)
        expect(h.value(i * step)).toBeLessThanOrEqual(h.peak.value + 1e-12 * scale);
      expectNear(h.value(h.peak.time), h.peak.value, scale, 1e-12);
      expect(h.value(-0.001)).toBe(0);
      expect(h.value(h.length + 0.001)).toBe(0);
      expect(h.integral(-5)).toBeCloseTo(0, 12);
      expect(h.integral(h.length + 50)).toBe(h.integral(h.length));
    }
  );

  it('is drawn with both ends of its support', () => {
    const plot = plotOf(doubleGamma(), 0.1, true);
    expect(plot.times).toHaveLength(321);
    expectNear(Math.max(...plot.values), 1, 0, 1e-4);
  });
});

describe('a response of one’s own', () => {
  it('passes through its samples, never overshoots and integrates exactly', () => {
    const samples = [0, 1, 3, 3, 0.5, -1, 0];
    const h = sampledResponse('own', samples, 1.5);
    samples.forEach((value, i) => expect(h.value(i * 1.5)).toBeCloseTo(value, 14));
    for (let t = 0; t <= 9; t += 0.01) {
      const i = Math.min(5, Math.floor(t / 1.5));
      expect(h.value(t)).toBeLessThanOrEqual(Math.max(samples[i]!, samples[i + 1]!) + 1e-12);
      expect(h.value(t)).toBeGreaterThanOrEqual(Math.min(samples[i]!, samples[i + 1]!) - 1e-12);
    }
    // A straight line is reproduced: ∫ 2t over 0…6.
    expectNear(sampledResponse('line', [0, 4, 8, 12], 2).integral(6), 36, 0, 1e-14);
  });

  it('samples of the double gamma every 0.5 s come within 1 % of its peak', () => {
    const h = doubleGamma();
    const own = sampledResponse(
      'own',
      Array.from({ length: 65 }, (_, i) => h.value(i / 2)),
      0.5
    );
    for (let t = 0; t < 32; t += 0.03) expectNear(own.value(t), h.value(t), h.peak.value, 0.01);
  });

  it('refuses too few samples and gaps', () => {
    expect(() => sampledResponse('own', [1], 1)).toThrow(/number of samples is 1; expected at least 2/);
    expect(() => sampledResponse('own', [1, NaN], 1)).toThrow(EngineError);
  });
});

describe('catalogue', () => {
  it('offers every kind with a name, a source and as many columns as it says', () => {
    const counts = Object.fromEntries(RESPONSES.map((kind) => [kind.id, kind.make(2).length]));
    expect(counts).toEqual({
      'double-gamma': 1,
      'double-gamma-derivatives': 3,
      'glover-auditory': 1,
      'glover-motor': 1,
      boynton: 1,
      'gamma-variate': 1,
      fir: 12,
      waves: 7,
      'three-gammas': 3
    });
    for (const kind of RESPONSES) {
      expect(kind.source).not.toBe('');
      for (const response of kind.make(0.735)) expect(Number.isFinite(response.peak.value)).toBe(true);
    }
  });
});

describe('certified integral', () => {
  it('is exact for a polynomial and refuses a jump', () => {
    const cube = certifiedIntegral((t) => t ** 3, 8);
    expectNear(cube(7.3), 7.3 ** 4 / 4, 0, 1e-13);
    expect(() => certifiedIntegral((t) => (t < 1.2 ? 0 : 1), 8)).toThrow(
      /disagreement of two integration rules/
    );
  });
});
