import { describe, expect, it } from 'vitest';
import { volumeTimes } from '$lib/engine/convolution/times';
import { criteriaOf, identityRows, individualAndPairs, overMembers } from '$lib/engine/design/criteria';
import { rowSpaceOf } from '$lib/engine/design/row-space';
import {
  energySpectrum,
  steadyStateDeviation,
  stimulusEnergy,
  survivalOf
} from '$lib/engine/design/spectrum';
import {
  binaryMSequence,
  fixedSpacing,
  optimalShare,
  randomSpacing,
  tradeOff
} from '$lib/engine/design/theory';
import { centred, dot, gram } from '$lib/engine/linalg/vector';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import { gammaMixture } from '$lib/engine/response/gamma-mixture';
import type { Response } from '$lib/engine/response/response';
import { gainOf, transferOf } from '$lib/engine/response/transfer';
import reference from '../../fixtures/reference/theory.json';
import designs from '../../fixtures/reference/designs.json';
import { expectAllNear, expectNear } from './near';

const theory = reference.efficiency_theory;

describe('trade-off, optimal shares, spacing (reference values: two derivations each)', () => {
  it('trade-off of one trial type', () => {
    for (const [key, { rows }] of Object.entries(theory.tradeoff_single_type.table)) {
      const k = Number(key.slice(2));
      for (const row of rows) {
        expectNear(tradeOff(k, row.alpha).estimation, row.xi_over_trace, 1e-3);
        expectNear(tradeOff(k, row.alpha).detection, row.R_over_trace_theta0);
        expectNear(tradeOff(k, row.alpha, Math.PI / 4).detection, row.R_over_trace_theta45);
      }
      // Published: both at once by lengthening less than twofold.
      const alpha = (k + 1) / (2 * k);
      const longer = (2 * k) / (k + 1);
      expect(longer).toBeLessThan(2);
      expectNear(tradeOff(k, alpha).estimation * longer, 1 / (k * k));
      expectNear(tradeOff(k, alpha).detection * longer, 1);
    }
  });

  it('optimal shares are where the design formula has its maximum', () => {
    for (const [q, individual, both, pairs] of [
      [1, 0.5, 0.5, 1],
      [2, 0.292893218813, 0.333333333333, 0.5],
      [3, 0.211324865405, 0.25, 0.333333333333],
      [6, 0.118350341907, 0.142857142857, 0.166666666667]
    ] as const) {
      // Printed to 12 digits.
      expectNear(optimalShare(q, 'individual'), individual, 1, 1e-12);
      expectNear(optimalShare(q, 'both'), both, 1, 1e-12);
      expectNear(optimalShare(q, 'pairs'), pairs, 1, 1e-12);
      const score = (p: number, aim: 'individual' | 'both') => {
        const matrix = identityRows(q).map((row, i) => row.map((_, j) => (i === j ? p : 0) - p * p));
        return criteriaOf(rowSpaceOf(matrix), aim === 'both' ? individualAndPairs(q) : identityRows(q)).a;
      };
      for (const aim of ['individual', 'both'] as const) {
        const best = optimalShare(q, aim);
        expect(score(best, aim)).toBeGreaterThan(score(best * 1.01, aim));
        expect(score(best, aim)).toBeGreaterThan(score(best * 0.99, aim));
      }
    }
  });

  it('fixed against random spacing', () => {
    for (const [key, row] of Object.entries(theory.fixed_versus_random_fir.table)) {
      const k = Number(key.slice(2));
      const periods = Array.from({ length: 3 * k }, (_, i) => k + 1 + i);
      const best = periods.reduce((a, b) => (fixedSpacing(b, k) > fixedSpacing(a, k) ? b : a));
      expect(best).toBe(row.best_fixed_period_bins);
      expectNear(fixedSpacing(best, k), row.fixed_1_over_trace_per_N);
      expectNear(randomSpacing(0.5, k), row['random_p0.5_1_over_trace_per_N']);
      expectNear(randomSpacing(0.5, k) / fixedSpacing(best, k), row.ratio_random_over_best_fixed);
      for (const [soa, value] of Object.entries(row.random_by_mean_SOA_bins))
        expectNear(randomSpacing(1 / Number(soa.slice(4)), k), value);
      expect(fixedSpacing(k, k)).toBe(0);
    }
    // Published (Dale 1999): more than ten times as efficient.
    expect(theory.fixed_versus_random_fir.table['k=40'].ratio_random_over_best_fixed).toBeGreaterThan(10);
  });
});

/** FIR columns of a circular sequence: column (type, lag) is 1 where that type stood `lag` slots before. */
function circular(sequence: readonly number[], types: number, lags: number): Float64Array[] {
  const n = sequence.length;
  return Array.from({ length: types * lags }, (_, c) => {
    const [type, lag] = [Math.floor(c / lags) + 1, c % lags];
    return Float64Array.from({ length: n }, (_value, t) => (sequence[(t - lag + n) % n] === type ? 1 : 0));
  });
}

describe('m-sequences as designs (reference values: exact eigenvalues)', () => {
  /** s_t = s_(t−i) + s_(t−j) over GF(q), start 0…01. */
  function recursion(q: number, order: number, taps: readonly number[]): number[] {
    const s = [...new Array<number>(order - 1).fill(0), 1];
    while (s.length < q ** order - 1) s.push(taps.reduce((sum, tap) => sum + s[s.length - tap]!, 0) % q);
    return s;
  }

  it.each([
    [6, [5, 6]],
    [7, [6, 7]]
  ])('binary, order %i', (order, taps) => {
    const sequence = recursion(2, order, taps);
    for (const lags of [8, 15]) {
      const information = gram(circular(sequence, 1, lags).map(centred));
      const { a } = criteriaOf(rowSpaceOf(information), identityRows(lags));
      expectNear(a / lags, binaryMSequence(order, lags));
    }
  });

  it('binary closed form has the printed values', () => {
    for (const [order, lags, value] of [
      [6, 8, 1.964285714286],
      [7, 15, 2.114454277286],
      [8, 8, 7.967741935484],
      [8, 15, 4.248962655602]
    ] as const)
      expectNear(binaryMSequence(order, lags), value, 1, 1e-12);
  });

  it('ternary, two types, individual and pairwise', () => {
    const sequence = recursion(3, 4, [3, 4]);
    for (const [key, expected] of Object.entries(theory.m_sequence_ternary_fir.table)) {
      const lags = Number(key.slice(2));
      const space = rowSpaceOf(gram(circular(sequence, 2, lags).map(centred)));
      expectNear(criteriaOf(space, identityRows(2 * lags)).a, expected.A_eff_individual);
      expectNear(criteriaOf(space, overMembers([1, -1], lags)).a, expected.A_eff_pairwise);
    }
  });
});

describe('random slots of known shape (exact ∫h²)', () => {
  it('predicts the efficiencies of random2', () => {
    const { E_h_peak1_s, expected_for_random2_counts: expected } = theory.random_slots_known_shape;
    const counts = designs.efficiency_designs.random2.n_events;
    const p = [counts.A / 100, counts.B / 100];
    const eh = Number(E_h_peak1_s);
    const matrix = p.map((x, i) => p.map((y, j) => (100 / 2) * eh * ((i === j ? x : 0) - x * y)));
    const space = rowSpaceOf(matrix);
    expectNear(criteriaOf(space, [[1, 0]]).a, expected.A);
    expectNear(criteriaOf(space, [[0, 1]]).a, expected.B);
    expectNear(criteriaOf(space, [[1, -1]]).a, expected['A-B']);
  });
});

describe('frequencies (reference values: closed form, SciPy)', () => {
  const endless = doubleGamma({ length: Infinity });
  const all = theory.canonical_transfer_function;

  it('transfer function of the double gamma', () => {
    for (const [f, gain] of Object.entries(all.gain_table)) expectNear(gainOf(endless, Number(f)), gain);
    expectNear(gainOf(endless, all.f_of_max_gain_Hz), all.gain_max);
    for (const side of [0.999, 1.001])
      expect(gainOf(endless, all.f_of_max_gain_Hz * side)).toBeLessThan(all.gain_max);
  });

  it('by quadrature equals the closed form', () => {
    const long = doubleGamma({ length: 80 });
    for (const f of [0, 0.013, 0.05, 0.21]) {
      const [a, b] = [transferOf(long, f), transferOf(endless, f)];
      expectNear(a.re, b.re, 1, 1e-12);
      expectNear(a.im, b.im, 1, 1e-12);
    }
  });

  it('best constant interval (published rule holds for the gamma variate only)', () => {
    const shapes: [Response, keyof typeof theory.constant_interval_optimum.values][] = [
      [
        gammaMixture('variate', [{ weight: 1, shape: 9.6, scale: 0.547 }], Infinity),
        'gamma_t^8.6_exp(-t/0.547)'
      ],
      [endless, 'canonical']
    ];
    for (const [shape, key] of shapes) {
      const values = theory.constant_interval_optimum.values[key];
      for (const sd of ['0.5', '1', '2', '4', '8', '12'] as const) {
        const { T_opt_s: best, sd_at_opt: at } = values[`SD=${sd}`];
        const duration = Number(sd);
        expectNear(steadyStateDeviation(shape, duration, best), at);
        for (const side of [0.99, 1.01])
          expect(steadyStateDeviation(shape, duration, best * side)).toBeLessThan(at);
      }
      for (const [block, deviation] of Object.entries(values.block_sd)) {
        const length = Number(/\d+/.exec(block)![0]);
        expectNear(steadyStateDeviation(shape, length, 2 * length), deviation);
      }
    }
  });

  it('block length of the largest deviation', () => {
    const best = theory.constant_interval_optimum.values.canonical.block_length_with_largest_sd_s;
    const at = (length: number) => steadyStateDeviation(endless, length, 2 * length);
    expectNear(best, 18.719273, 0, 1e-7);
    expect(at(best)).toBeGreaterThan(at(best * 1.002));
    expect(at(best)).toBeGreaterThan(at(best * 0.998));
  });
});

describe('spectrum of a run', () => {
  const tr = 2;
  const volumes = 201;
  const times = volumeTimes({ tr, volumes });
  const events = Array.from({ length: 12 }, (_, i) => ({
    onset: 32 * i + 3,
    duration: i % 2 === 0 ? 16 : 12
  }));

  it('adds up to the centred sum of squares (Parseval), also for even runs', () => {
    for (const n of [200, 201]) {
      const values = Float64Array.from({ length: n }, (_, i) => Math.sin(i) + (i % 7) * 0.3);
      const { frequencies, energy } = energySpectrum(values, tr);
      expect(frequencies).toHaveLength(Math.floor(n / 2));
      expectNear(
        energy.reduce((a, b) => a + b, 0),
        dot(centred(values), centred(values))
      );
    }
  });

  it('finds a sinusoid where it is', () => {
    const wave = Float64Array.from({ length: 200 }, (_, i) => Math.sin((2 * Math.PI * 9 * i) / 200));
    const { frequencies, energy } = energySpectrum(wave, tr);
    expectNear(energy[8]!, 100);
    expectNear(frequencies[8]!, 9 / 400);
  });

  it('stimulus energy: an impulse has it everywhere, a boxcar none at its own frequency', () => {
    expectNear(stimulusEnergy([{ onset: 3.3, duration: 0 }], 0.2), 1);
    expectNear(stimulusEnergy([{ onset: 3.3, duration: 8 }], 0.125), 0, 1, 1e-28);
    expectNear(stimulusEnergy([{ onset: 3.3, duration: 8 }], 0), 64);
  });

  it('survives as stated: shares between 0 and 1, slow blocks lose to the high-pass', () => {
    const base = { response: doubleGamma(), tr, volumes, times, highPass: 128 };
    const fast = survivalOf({ ...base, events });
    const slow = survivalOf({ ...base, events: [0, 200].map((onset) => ({ onset, duration: 100 })) });
    expect(fast.shareAfterHighPass).toBeGreaterThan(0.9);
    expect(slow.shareAfterHighPass).toBeLessThan(0.3);
    for (const { shareAfterResponse } of [fast, slow]) {
      expect(shareAfterResponse).toBeGreaterThan(0);
      expect(shareAfterResponse).toBeLessThanOrEqual(1);
    }
    expectNear(
      fast.filtered.reduce((a, b) => a + b, 0) / fast.response.reduce((a, b) => a + b, 0),
      fast.shareAfterHighPass
    );
    expectAllNear(survivalOf({ ...base, events: [] }).filtered, new Array<number>(100).fill(0), 1);
    expect(survivalOf({ ...base, events: [] }).shareAfterHighPass).toBe(0);
  });
});
