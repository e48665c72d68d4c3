import { describe, expect, it } from 'vitest';
import { regressor } from '$lib/engine/convolution/regressor';
import {
  averageTrials,
  fitBasis,
  fitImpulseResponse,
  fitSines,
  interpolateShape,
  removeDrift,
  type ShapeData
} from '$lib/engine/estimation';
import { dot } from '$lib/engine/linalg/vector';
import { sinesAndCosines, threeGammas } from '$lib/engine/response/bases';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import type { Response } from '$lib/engine/response/response';
import { expectAllNear, expectNear } from './near';
import reference from '../../fixtures/reference/glm.json';

const { glm } = reference;
const f64 = (list: readonly number[]) => Float64Array.from(list);
const ones = (n: number) => new Float64Array(n).fill(1);

describe('response shapes', () => {
  const { y, overlapping_onsets: onsets } = glm.trial_average;
  const data = (volumes: number[], nuisance: Float64Array[]): ShapeData => ({
    y: f64(y),
    times: Float64Array.from({ length: 60 }, (_, n) => n),
    conditions: [{ name: 'A', events: volumes.map((v) => ({ onset: v, duration: 0 })) }],
    nuisance
  });

  it('trial average and FIR fit against the reference', () => {
    const { onset_volumes: apart, window_volumes: window, average } = glm.trial_average;
    const mean = averageTrials(f64(y), apart, window);
    expectAllNear(mean.average, average, 0, 1e-13);
    expectAllNear(mean.standardError, glm.trial_average['sem_(sd ddof 1 / sqrt n)'], 0, 1e-12);
    expect([mean.trials, mean.overlaps]).toEqual([5, false]);
    // Windows that do not overlap: the FIR fit without a constant is the average.
    const fir = fitImpulseResponse(data(apart, []), window, 1);
    expectAllNear(fir.shapes[0]!.values, average, 0, 1e-12);
    const naive = averageTrials(f64(y), onsets.slice(0, 6), window);
    expectAllNear(naive.average, glm.trial_average['overlapping_naive_average_(first_6_events)'], 0, 1e-12);
    expect(naive.overlaps).toBe(true);
    const told = fitImpulseResponse(data(onsets, [ones(60)]), window, 1);
    expect(told.fit.rank).toBe(glm.trial_average.overlapping_fir_rank);
    expectAllNear(
      told.fit.coefficients,
      glm.trial_average.overlapping_fir_least_squares_with_constant,
      0,
      1e-11
    );
  });

  it('recovers a shape that lies in the basis, with no error where there is no noise', () => {
    const h = threeGammas()[1]!;
    const times = Float64Array.from({ length: 150 }, (_, n) => 2 * n + 1);
    const events = [3, 31, 52.5, 90, 118, 121, 160, 201, 250].map((onset) => ({ onset, duration: 0 }));
    const signal = regressor(events, h, times).map((value) => 100 + 3 * value);
    const fit = fitBasis(
      { y: signal, times, conditions: [{ name: 'A', events }], nuisance: [ones(150)] },
      threeGammas(),
      0.5
    );
    const shape = fit.shapes[0]!;
    shape.times.forEach((t, k) => expectNear(shape.values[k]!, 3 * h.value(t), 1, 1e-10));
    const curve = interpolateShape(shape);
    for (const t of [0, 0.5, 3, 7, 20]) expectNear(curve.value(t), 3 * h.value(t), 1, 1e-9);
    // Between points 0.5 s apart a cubic is near, not equal.
    expectNear(curve.value(6.77), 3 * h.value(6.77), 1, 1e-3);
  });

  it('sines and cosines: a shape of the set comes back, a double gamma comes closer with every order', () => {
    const h = doubleGamma();
    const times = Float64Array.from({ length: 200 }, (_, n) => 2 * n);
    const events = Array.from({ length: 25 }, (_, k) => ({ onset: 15 * k + (k % 4), duration: 0 }));
    const fitTo = (shape: Response, order: number) =>
      fitSines(
        {
          y: regressor(events, shape, times),
          times,
          conditions: [{ name: 'A', events }],
          nuisance: [ones(200)]
        },
        32,
        order,
        1
      ).shapes[0]!;
    const member = sinesAndCosines({ window: 32, order: 3, isWindowed: true })[4]!;
    const back = fitTo(member, 3);
    back.times.forEach((t, k) => expectNear(back.values[k]!, member.value(t), 1, 1e-10));
    const worst = [1, 2, 3, 4].map((order) => {
      const shape = fitTo(h, order);
      return Math.max(...shape.times.map((t, k) => Math.abs(shape.values[k]! - h.value(t)) / h.peak.value));
    });
    expect(worst).toEqual([...worst].sort((a, b) => b - a));
    // Order 4 (nine functions) leaves less than a tenth of the peak here.
    expect(worst[3]).toBeLessThan(0.1);
  });

  it('drift removal', () => {
    const { N, TR, cutoff, residual_forming_example: example } = reference.dct_residual;
    const wave = Float64Array.from(
      { length: N },
      (_, i) => Math.sin((2 * Math.PI * i * TR) / 200) + 0.5 * Math.sin((2 * Math.PI * i * TR) / 40)
    );
    const variance = (list: Float64Array) => dot(list, list) / N - (list.reduce((a, b) => a + b, 0) / N) ** 2;
    expectNear(variance(wave), example.variance_before_population, 0, 1e-12);
    expectNear(variance(removeDrift(wave, TR, cutoff)), example.variance_after_population, 0, 1e-11);
    const kept = removeDrift(
      wave.map((value) => value + 7),
      TR,
      cutoff,
      { keepMean: true }
    );
    expectNear(kept.reduce((a, b) => a + b, 0) / N, 7, 0, 1e-12);
  });
});
