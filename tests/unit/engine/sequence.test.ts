import { describe, expect, it, vi } from 'vitest';
import { exp, log } from '$lib/engine/elementary';
import { EngineError } from '$lib/engine/errors';
import { seeded } from '$lib/engine/random';
import {
  counterbalanceOf,
  deBruijn,
  frequencyDeviation,
  predictabilityOf,
  runLengthsOf,
  sequenceReport,
  shuffleDistribution
} from '$lib/engine/sequence';
import reference from '../../fixtures/reference/sequence.json';

// Seconds of arithmetic, more on a machine that does other things as well.
vi.setConfig({ testTimeout: 60_000 });

const sequences: Record<string, number[]> = {
  alternating_ABAB_20: Array.from({ length: 20 }, (_, t) => t % 2),
  blocked_A10B10: Array.from({ length: 20 }, (_, t) => (t < 10 ? 0 : 1)),
  m_sequence_GF3_80: reference.m_sequences.full_GF3_n4_80,
  de_bruijn_k3n2_linear_10: [0, 0, 1, 0, 2, 1, 1, 2, 2, 0]
};

interface ReferenceRow {
  counts: number[];
  [key: string]: unknown;
}

describe('sequence numbers against the reference set', () => {
  it.each(Object.keys(sequences))('%s', (name) => {
    const row = (reference.counterbalance as unknown as Record<string, ReferenceRow>)[name]!;
    const sequence = sequences[name]!;
    const kinds = row.counts.length;
    const report = sequenceReport(sequence, kinds, { shuffles: 20 });
    expect(report.counts).toEqual(row.counts);
    for (const lag of [1, 2, 3]) {
      const table = report.counterbalance.lags[lag - 1]!;
      expect(table.transitions).toEqual(row[`transitions_lag${lag}`]);
      const expected = row[`expected_lag${lag}_(n-r)p_i p_j`] as number[][];
      table.expected.forEach((line, i) =>
        line.forEach((value, j) => expect(value).toBeCloseTo(expected[i]![j]!, 12))
      );
    }
    // Sums of a few dozen doubles: rounding stays far below 1e-12.
    const near = (value: number, key: string) => expect(value).toBeCloseTo(row[key] as number, 12);
    near(report.counterbalance.deviation, 'sum_abs_deviation_lags_1_to_3');
    near(report.counterbalance.flooredDeviation, 'sum_floor_abs_deviation_lags_1_to_3');
    near(report.counterbalance.chiSquare, 'chi_square_lag1');
    near(report.predictability[0].entropy, 'entropy0_bits');
    for (const order of [1, 2] as const) {
      near(report.predictability[order].entropy, `conditional_entropy_order${order}_bits`);
      near(report.predictability[order].perplexity, `perplexity_2^H_order${order}`);
      near(report.predictability[order].bestGuess, `best_guess_rate_order${order}`);
    }
    expect(report.runs.longest).toBe(row.longest_run);
    near(report.runs.repetitionRate, 'repetition_rate');
  });

  it('a cyclic de Bruijn sequence of triples has log2 3 bits given one or two trials', () => {
    const cycle = deBruijn(3, 3);
    // Opened with its first entries repeated, each context of the cycle occurs equally often.
    for (const order of [1, 2]) {
      const opened = [...cycle, ...cycle.slice(0, order)];
      expect(predictabilityOf(opened, 3, order).entropy).toBeCloseTo(
        reference.counterbalance.cyclic_de_bruijn_k3n3.log2_3,
        12
      );
    }
  });
});

describe('sequence numbers by their meaning', () => {
  it('frequency deviation', () => {
    expect(frequencyDeviation([0, 0, 0, 1], 2)).toBe(0.5);
    expect(frequencyDeviation([0, 0, 0, 1], 2, [3, 1])).toBe(0);
    expect(frequencyDeviation([0, 0], 2, [0, 5])).toBe(2);
    expect(frequencyDeviation([], 3)).toBe(0);
  });

  it('run lengths', () => {
    expect(runLengthsOf([2, 2, 2, 0, 1, 1, 2], 4)).toEqual({
      longest: 3,
      byKind: [1, 2, 3, 0],
      repetitionRate: 0.5
    });
    expect(runLengthsOf([], 2)).toEqual({ longest: 0, byKind: [0, 0], repetitionRate: 0 });
  });

  it('empty and very short sequences give numbers, never NaN', () => {
    for (const sequence of [[], [1], [0, 1]]) {
      const report = sequenceReport(sequence, 2, { shuffles: 5 });
      expect(JSON.stringify(report)).not.toMatch(/NaN|null/);
    }
  });

  it('relabelling the kinds changes no number', () => {
    const random = seeded('relabel');
    const sequence = Array.from({ length: 60 }, () => random.int(3));
    const renamed = sequence.map((kind) => [2, 0, 1][kind]!);
    const a = sequenceReport(sequence, 3, { shuffles: 5 });
    const b = sequenceReport(renamed, 3, { shuffles: 5 });
    expect(b.counterbalance.deviation).toBeCloseTo(a.counterbalance.deviation, 10);
    expect(b.predictability[2].entropy).toBeCloseTo(a.predictability[2].entropy, 12);
    expect(b.runs.longest).toBe(a.runs.longest);
  });

  it('refuses kinds that are none', () => {
    for (const bad of [[0, 2], [-1], [0.5], [NaN]]) {
      expect(() => counterbalanceOf(bad, 2, 1)).toThrow(EngineError);
      expect(() => predictabilityOf(bad, 2, 1)).toThrow(/from 0 to 1/);
    }
    expect(() => counterbalanceOf([0], 2, 0)).toThrow(/at least 1/);
    expect(() => predictabilityOf([0, 1], 100, 9)).toThrow(EngineError);
    expect(() => frequencyDeviation([0], 2, [0, 0])).toThrow(EngineError);
  });
});

describe('shuffles of the same counts', () => {
  const entropy2 = (list: ArrayLike<number>) => predictabilityOf(list, 2, 2).entropy;

  it('puts ABAB far below and a typical random order in the middle', () => {
    const regular = shuffleDistribution(sequences.alternating_ABAB_20!, entropy2, 'a');
    expect(regular.observed).toBeLessThan(regular.firstPercentile);
    expect(regular.rank).toBe(0);
    const random = seeded('middle').shuffle(sequences.alternating_ABAB_20!.slice());
    const typical = shuffleDistribution(random, entropy2, 'a');
    expect(typical.observed).toBeGreaterThan(typical.firstPercentile);
    // A short random order shows low second-order entropy by itself: below the 1 bit of independence.
    expect(typical.values[500]).toBeLessThan(0.95);
  });

  it('repeats for a seed, and ranks of random orders are uniform', () => {
    const one = shuffleDistribution(sequences.blocked_A10B10!, entropy2, 'seed', 200);
    expect(shuffleDistribution(sequences.blocked_A10B10!, entropy2, 'seed', 200)).toEqual(one);
    const random = seeded('ranks');
    let mean = 0;
    for (let i = 0; i < 100; i++) {
      const order = random.shuffle(sequences.blocked_A10B10!.slice());
      mean += shuffleDistribution(order, entropy2, `${i}`, 40).rank / 100;
    }
    // Four standard errors of a mean of 100 uniform numbers.
    expect(Math.abs(mean - 0.5)).toBeLessThan((4 * Math.sqrt(1 / 12)) / 10);
  });
});

it('entropy is the formula −Σ p log2 p, worked by hand', () => {
  const bits = -(0.75 * log(0.75) + 0.25 * log(0.25)) / log(2);
  expect(predictabilityOf([0, 0, 1, 0], 2, 0).entropy).toBeCloseTo(bits, 14);
  expect(predictabilityOf([0, 0, 1, 0], 2, 0).perplexity).toBeCloseTo(exp(bits * log(2)), 14);
});
