import { describe, expect, it } from 'vitest';
import { peakScale, singleEventPeak } from '$lib/engine/convolution/peak-scale';
import { regressor } from '$lib/engine/convolution/regressor';
import { volumeTimes } from '$lib/engine/convolution/times';
import { sinesAndCosines } from '$lib/engine/response/bases';
import { dispersionDifference } from '$lib/engine/response/derivatives';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import { gammaMixture } from '$lib/engine/response/gamma-mixture';
import { glover } from '$lib/engine/response/published';
import reference from '../../fixtures/reference/response.json';
import regressors from '../../fixtures/reference/regressor.json';
import { expectAllNear, expectNear } from './near';

// The shapes and regressors of the reference values in their other scales, named beside each.
const table = reference.canonical_hrf;
const h = doubleGamma();
const raw = table.t.map((t) => h.value(t));
const total = (list: readonly number[]) => list.reduce((a, b) => a + b, 0);
const divided = (list: readonly number[], by: number) => list.map((value) => value / by);

/** Where the curve passes half of its peak, between a point outside and one inside. */
function halfWay(outside: number, inside: number): number {
  for (let i = 0; i < 80; i += 1) {
    const middle = (outside + inside) / 2;
    if (h.value(middle) > h.peak.value / 2) inside = middle;
    else outside = middle;
  }
  return inside;
}

describe('shapes in other scales (SciPy, mpmath, NiPy)', () => {
  it('double gamma: raw, peak 1, area 1, sum 1 over whole seconds', () => {
    expectAllNear(raw, table.raw);
    expectAllNear(divided(raw, 1 / peakScale(h, 0)), table.peak1);
    expectAllNear(divided(raw, h.integral(32)), table.area1_over_0_32);
    expectAllNear(divided(raw, total(raw)), table.sum1_on_grid_0_1_32);
    expectNear(total(raw), table.sum_of_samples_t_0_to_32_step_1);
  });

  it('double gamma: trough over peak, width at half of the peak', () => {
    expectNear(h.value(Number(table.undershoot_time_s)) / h.peak.value, Number(table.undershoot_over_peak));
    expectNear(halfWay(9, h.peak.time) - halfWay(1, h.peak.time), Number(table.fwhm_s));
  });

  it('dispersion difference of two curves of area 1 each', () => {
    const plain = doubleGamma({ length: Infinity });
    const wide = doubleGamma({ length: Infinity, dispersion: 1.01 });
    const difference = table.t.map(
      (t) => (plain.value(t) / plain.integral(1e4) - wide.value(t) / wide.integral(1e4)) / 0.01
    );
    // Both areas are 5/6 exactly, so this is the raw difference times 6/5. The table's areas are numeric sums, good to
    // some 1e-12 each; divided by the 0.01 this is 1e-10 of a curve near 0.2, or 2e-9 of the largest entry.
    const numeric = table.dispersion_derivative.finite_difference_each_area1_nipy;
    expectAllNear(difference, numeric, Math.max(...numeric), 2e-9);
    expectAllNear(
      difference,
      table.dispersion_derivative.finite_difference_raw.map((value) => 1.2 * value)
    );
    expectAllNear(
      table.t.map((t) => 1.2 * dispersionDifference().value(t)),
      difference
    );
  });

  it('Glover 1999: area 1, trough over peak, peaks of its two terms', () => {
    const all = reference.glover_1999;
    const endless = glover(undefined, Infinity);
    expectAllNear(
      all.t.map((t) => endless.value(t) / endless.integral(1e3)),
      all.auditory_area1
    );
    for (const { parameters, ...row } of [all.auditory, all.motor]) {
      const whole = glover(parameters);
      expectNear(
        whole.value(Number(row.undershoot_time_s)) / whole.peak.value,
        Number(row.undershoot_over_peak)
      );
      for (const [n, scale, at] of [
        [parameters.n1, parameters.t1, row.first_gamma_peak_s],
        [parameters.n2, parameters.t2, row.second_gamma_peak_s]
      ] as const) {
        const term = gammaMixture('term', [{ weight: 1, shape: n + 1, scale }], Infinity);
        expectNear(term.peak.time, at);
      }
    }
  });

  it('windowed sines and cosines: their products by the trapezoid rule', () => {
    const { t, T, K, trapezoid_gram_matrix_step_1s: gram } = reference.fourier_set;
    const basis = sinesAndCosines({ window: T, order: K, isWindowed: true });
    basis.forEach((a, i) =>
      basis.forEach((b, j) => {
        const products = t.map((time, n) => (n % 32 === 0 ? 0.5 : 1) * a.value(time) * b.value(time));
        // Of the largest, 12: the entries that are 0 come out as rounding in either.
        expectNear(total(products), gram[i]![j]!, 12);
      })
    );
  });
});

describe('the regressor of 20 events, by further routes', () => {
  const example = regressors.regressor_example;
  const events = example.design.onsets_s.map((onset) => ({ onset, duration: 0 }));
  const at = (sliceReference: number) => volumeTimes({ tr: 2, volumes: 200, sliceReference });
  const values = [...regressor(events, h, at(0), peakScale(h, 0))];

  it('steady state, variance, what is lost by ending at 32 s', () => {
    const steady = values.slice(20, 30);
    expectAllNear(steady, example.steady_state_period_phi0_volumes_20_to_29);
    const mean = total(values) / 200;
    expectNear(total(values.map((value) => (value - mean) ** 2)) / 200, example.variance_population_phi0);
    const endless = regressor(events, doubleGamma({ length: Infinity }), at(0), peakScale(h, 0));
    const lost = Math.max(...values.map((value, n) => Math.abs(value - endless[n]!)));
    // A difference of numbers near 1: 1e-9 of those, not of itself.
    expectNear(lost, example.max_abs_truncated_minus_untruncated, 1);
  });

  it('one boxcar of 2 s: its peak', () => {
    const peak = singleEventPeak(doubleGamma({ length: Infinity }), 2);
    expectNear(peak.value, example.single_2s_boxcar_peak_value_raw_integral);
    // A maximiser's place on a flat maximum is good to about the root of 1e-16.
    expectNear(peak.time, example.single_2s_boxcar_peak_time_s, 1, 2e-7);
  });

  it('on a fine grid of TR/16 with a kernel of sum 1', () => {
    // Onsets lie on the grid, so that the grid's convolution is the closed form over the kernel's sum.
    const sum = total(Array.from({ length: 257 }, (_, i) => h.value(i / 8)));
    for (const [phi, expected] of [
      [0, example.fine_grid16_sum1_kernel_sampled_at_bin_0],
      [0.5, example.fine_grid16_sum1_kernel_sampled_at_bin_8]
    ] as const)
      expectAllNear(regressor(events, h, at(phi), 1 / sum), expected);
    expect(example.fine_grid16_sum1_kernel_sampled_at_bin_0).toHaveLength(200);
  });
});
