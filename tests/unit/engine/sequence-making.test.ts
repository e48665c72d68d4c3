import { describe, expect, it, vi } from 'vitest';
import { EngineError } from '$lib/engine/errors';
import { seeded } from '$lib/engine/random';
import {
  blockedOrder,
  counterbalancedStream,
  deBruijn,
  drawGapsEvenly,
  drawTruncatedExponential,
  finiteField,
  fixedGap,
  fullPeriodRecursions,
  gapLaw,
  geometricGaps,
  geometricGapsWithMean,
  mSequence,
  permutedBlocks,
  randomDeBruijn,
  randomOrder,
  truncatedExponentialMean,
  truncatedExponentialScale,
  uniformGaps,
  williamsSquare
} from '$lib/engine/sequence';
import reference from '../../fixtures/reference/sequence.json';

// Seconds of arithmetic, more on a machine that does other things as well.
vi.setConfig({ testTimeout: 60_000 });

const tally = (list: readonly number[], kinds: number) =>
  Array.from({ length: kinds }, (_, kind) => list.filter((value) => value === kind).length);

describe('finite fields', () => {
  it.each([2, 3, 4, 5, 7])('GF(%i) obeys the laws of a field', (q) => {
    const { add, multiply } = finiteField(q);
    const all = Array.from({ length: q }, (_, i) => i);
    for (const a of all) {
      expect([add(a, 0), multiply(a, 1), multiply(a, 0)]).toEqual([a, a, 0]);
      expect(new Set(all.map((b) => add(a, b))).size).toBe(q);
      if (a > 0) expect(new Set(all.map((b) => multiply(a, b))).size).toBe(q);
      for (const b of all) {
        expect([add(a, b), multiply(a, b)]).toEqual([add(b, a), multiply(b, a)]);
        for (const c of all) {
          expect(multiply(a, multiply(b, c))).toBe(multiply(multiply(a, b), c));
          expect(multiply(a, add(b, c))).toBe(add(multiply(a, b), multiply(a, c)));
        }
      }
    }
  });

  it('no field of 6 or 8 is offered', () => {
    expect(() => finiteField(6)).toThrow(EngineError);
    expect(() => mSequence(8, 2)).toThrow(/2, 3, 4, 5 or 7/);
  });
});

describe('m-sequences against the reference set', () => {
  it.each(Object.entries(reference.m_sequences.table))('%s', (name, row) => {
    const [, q, n] = /GF\((\d)\) n=(\d)/.exec(name)!.map(Number) as [number, number, number];
    const { sequence, coefficients } = mSequence(q, n);
    expect(sequence).toHaveLength(row.length);
    expect(coefficients).toEqual(row['recursion_s_t=sum c_i s_(t-i), c_1..c_n']);
    expect(sequence.slice(0, 24)).toEqual(row.first_24);
    expect(tally(sequence, q)).toEqual(row.symbol_counts);
    // Every window of n but the all-zero one once in the period.
    const windows = new Set(
      sequence.map((_, t) => Array.from({ length: n }, (_v, i) => sequence[(t + i) % row.length]).join())
    );
    expect(windows.size).toBe(row.length);
    const { multiply } = finiteField(q);
    const shift = row.length / (q - 1);
    const factor = (row as unknown as Record<string, number>)[`shift_L/(q-1)=${shift}_multiplies_by`]!;
    sequence.forEach((value, t) => expect(sequence[(t + shift) % row.length]).toBe(multiply(factor, value)));
  });

  it('full sequences, and the number of primitive polynomials', () => {
    expect(mSequence(3, 4).sequence).toEqual(reference.m_sequences.full_GF3_n4_80);
    expect(mSequence(2, 6).sequence).toEqual(reference.m_sequences.full_GF2_n6_63);
    expect(mSequence(5, 2).sequence).toEqual(reference.m_sequences.full_GF5_n2_24);
    expect(mSequence(4, 2).sequence).toEqual(reference.m_sequences.full_GF4_n2_15);
    const count = (q: number, n: number) => [...fullPeriodRecursions(finiteField(q), n)].length;
    // φ(qⁿ − 1)/n; for GF(2) the published counts 1, 2, 2, 6, 6 (n = 2 … 6).
    expect([2, 3, 4, 5, 6].map((n) => count(2, n))).toEqual([1, 2, 2, 6, 6]);
    expect([count(3, 2), count(3, 3), count(4, 2), count(5, 2), count(7, 2)]).toEqual([2, 4, 4, 4, 8]);
  });

  it('variants differ, and a variant that is none is refused', () => {
    expect(mSequence(2, 5, 1).sequence).not.toEqual(mSequence(2, 5).sequence);
    expect(() => mSequence(2, 2, 1)).toThrow(/below 1/);
    expect(() => mSequence(7, 9)).toThrow(/at most 20000/);
    expect(() => mSequence(2, 1)).toThrow(EngineError);
  });
});

describe('de Bruijn cycles', () => {
  it.each(Object.entries(reference.de_bruijn.table))('%s is the least cycle', (name, row) => {
    const [, k, n] = /k=(\d) n=(\d)/.exec(name)!.map(Number) as [number, number, number];
    expect(deBruijn(k, n).join('')).toBe(row.sequence);
  });

  it('holds every word once, also relabelled, turned and opened', () => {
    for (const [k, n] of [
      [2, 5],
      [3, 3],
      [5, 2],
      [4, 1],
      [1, 3]
    ] as const) {
      const open = randomDeBruijn(k, n, seeded(`${k}${n}`));
      const words = Array.from({ length: k ** n }, (_, t) => open.slice(t, t + n).join());
      expect(new Set(words).size).toBe(k ** n);
      expect(open).toHaveLength(k ** n + n - 1);
    }
    expect(() => deBruijn(10, 6)).toThrow(EngineError);
  });
});

describe('Williams squares', () => {
  it.each(Object.entries(reference.williams.table))('%s', (name, row) => {
    const n = Number(name.slice(2));
    const square = williamsSquare(n);
    expect(square.map((line) => line.map((value) => value + 1))).toEqual(row.design_1_based);
  });

  it('every place and every ordered pair is balanced', () => {
    for (const n of [2, 3, 9, 12]) {
      const square = williamsSquare(n);
      for (let place = 0; place < n; place++)
        expect(
          new Set(
            tally(
              square.map((row) => row[place]!),
              n
            )
          )
        ).toEqual(new Set([square.length / n]));
      const pairs = new Map<string, number>();
      for (const row of square)
        for (let i = 1; i < n; i++) {
          const key = `${row[i - 1]},${row[i]}`;
          pairs.set(key, (pairs.get(key) ?? 0) + 1);
        }
      expect(pairs.size).toBe(n * (n - 1));
      expect(new Set(pairs.values())).toEqual(new Set([n % 2 === 0 ? 1 : 2]));
    }
    expect(() => williamsSquare(1)).toThrow(EngineError);
  });
});

describe('first-order counterbalanced streams', () => {
  const pairsOf = (stream: number[]) => {
    const pairs = new Map<string, number>();
    for (let t = 1; t < stream.length; t++) {
      const key = `${stream[t - 1]},${stream[t]}`;
      pairs.set(key, (pairs.get(key) ?? 0) + 1);
    }
    return pairs;
  };

  it('every ordered pair exactly as often as asked', () => {
    for (const [kinds, repeats, withRepetitions] of [
      [2, 1, true],
      [3, 4, true],
      [6, 1, true],
      [4, 3, false],
      [2, 5, false],
      [1, 3, true]
    ] as const) {
      const stream = counterbalancedStream(kinds, seeded(`${kinds}/${repeats}`), {
        repeats,
        withRepetitions
      });
      const pairs = pairsOf(stream);
      expect(pairs.size).toBe(withRepetitions ? kinds * kinds : kinds * (kinds - 1));
      expect(new Set(pairs.values())).toEqual(new Set([repeats]));
      expect(stream.at(-1)).toBe(stream[0]);
    }
  });

  it('every stream is equally likely', () => {
    const random = seeded('uniform streams');
    const seen = new Map<string, number>();
    const draws = 9000;
    for (let i = 0; i < draws; i++) {
      const key = counterbalancedStream(3, random, { withRepetitions: false }).join('');
      seen.set(key, (seen.get(key) ?? 0) + 1);
    }
    // All streams there are, by walking every edge every way.
    const all = new Set<string>();
    const walk = (stream: number[], used: Set<string>): void => {
      if (used.size === 6) {
        all.add(stream.join(''));
        return;
      }
      for (let to = 0; to < 3; to++) {
        const edge = `${stream.at(-1)}${to}`;
        if (to !== stream.at(-1) && !used.has(edge)) walk([...stream, to], new Set([...used, edge]));
      }
    };
    for (let start = 0; start < 3; start++) walk([start], new Set());
    expect(new Set(seen.keys())).toEqual(all);
    const even = draws / all.size;
    const chi = [...seen.values()].reduce((sum, n) => sum + (n - even) ** 2 / even, 0);
    // Mean df, standard deviation √(2 df) of a chi-square: four of them.
    expect(chi).toBeLessThan(all.size - 1 + 4 * Math.sqrt(2 * (all.size - 1)));
  });

  it('refuses what cannot be', () => {
    expect(() => counterbalancedStream(1, seeded('x'), { withRepetitions: false })).toThrow(EngineError);
    expect(() => counterbalancedStream(3, seeded('x'), { repeats: 0 })).toThrow(EngineError);
    expect(() => counterbalancedStream(1000, seeded('x'))).toThrow(/at most 100000/);
  });
});

describe('random, blocked and permuted orders', () => {
  it('keep their counts', () => {
    expect(tally(randomOrder([3, 0, 5], seeded('r')), 3)).toEqual([3, 0, 5]);
    const blocks = permutedBlocks([2, 1], 4, seeded('p'));
    for (let b = 0; b < 4; b++) expect(tally(blocks.slice(3 * b, 3 * b + 3), 2)).toEqual([2, 1]);
    expect(blockedOrder([1, 0], 2, 2)).toEqual([1, 1, 0, 0, 1, 1, 0, 0]);
    expect(randomOrder([3, 3], seeded('r'))).toEqual(randomOrder([3, 3], seeded('r')));
    for (const bad of [[1.5], [-1]]) expect(() => randomOrder(bad, seeded('r'))).toThrow(EngineError);
    expect(() => blockedOrder([], 2, 2)).toThrow(EngineError);
    expect(() => permutedBlocks([1], 0, seeded('p'))).toThrow(EngineError);
  });
});

describe('gaps', () => {
  const {
    truncated_exponential: cut,
    truncated_geometric_on_TR_grid: geometric,
    uniform_discrete: even
  } = reference.jitter;

  it('cut exponential and geometric laws have the reference means', () => {
    expect(truncatedExponentialMean(cut.a, cut.b, cut.lambda)).toBeCloseTo(cut.mean, 12);
    // The reference's root finder stopped at 3e-13; mpmath gives 3.74236951167337404.
    expect(truncatedExponentialScale(2, 12, 5)).toBeCloseTo(cut['lambda_for_mean_5_on_[2,12]'], 11);
    expect(truncatedExponentialScale(2, 12, 5)).toBeCloseTo(3.742369511673374, 13);
    const law = geometricGaps(2, 12, 2, geometric.q);
    expect(law.values).toEqual(geometric.values_s);
    law.probabilities.forEach((p, i) => expect(p).toBeCloseTo(geometric.probabilities[i]!, 14));
    expect(law.mean).toBeCloseTo(geometric.mean, 13);
    expect(law.variance).toBeCloseTo(geometric.variance, 12);
    const uniform = uniformGaps(2, 10, 2);
    expect([uniform.mean, uniform.variance]).toEqual([even.mean, even.variance]);
  });

  it('the scale undoes the mean, on both sides of the middle', () => {
    for (const mean of [2.001, 3, 5, 6.9, 6.9999, 7.0001, 9, 11.9]) {
      const lambda = truncatedExponentialScale(2, 12, mean);
      expect(lambda > 0).toBe(mean < 7);
      expect(truncatedExponentialMean(2, 12, lambda)).toBeCloseTo(mean, 10);
    }
    expect(truncatedExponentialScale(2, 12, 7)).toBe(Infinity);
    expect(truncatedExponentialMean(2, 12, Infinity)).toBe(7);
    for (const mean of [2, 12, 13, NaN])
      expect(() => truncatedExponentialScale(2, 12, mean)).toThrow(EngineError);
  });

  it('a geometric law with a wanted mean has it', () => {
    for (const mean of [2.01, 3.3, 6.9, 7, 8.4, 11.99]) {
      const law = geometricGapsWithMean(2, 12, 0.5, mean);
      expect(law.mean).toBeCloseTo(mean, 12);
      const ratio = law.probabilities[1]! / law.probabilities[0]!;
      law.probabilities.slice(1).forEach((p, i) => expect(p / law.probabilities[i]!).toBeCloseTo(ratio, 9));
    }
    expect(geometricGapsWithMean(4, 4, 1, 4)).toEqual(fixedGap(4));
    expect(() => geometricGapsWithMean(2, 12, 0.5, 12)).toThrow(EngineError);
  });

  it('draws have the law’s mean and stay within its bounds', () => {
    const random = seeded('gaps');
    for (const lambda of [3, Infinity, -2]) {
      let mean = 0;
      for (let i = 0; i < 20_000; i++) {
        const gap = drawTruncatedExponential(2, 12, lambda, random);
        if (!(gap >= 2 && gap <= 12)) throw new Error(`out of bounds: ${gap}`);
        mean += gap / 20_000;
      }
      // Four standard errors; the standard deviation is below 2.9 s.
      expect(Math.abs(mean - truncatedExponentialMean(2, 12, lambda))).toBeLessThan(
        (4 * 2.9) / Math.sqrt(20_000)
      );
    }
  });

  it('even draws meet frequencies and, if asked, the sum exactly', () => {
    const law = geometricGapsWithMean(2, 12, 0.5, 4.5);
    const plain = drawGapsEvenly(law, 400, seeded('even'));
    law.values.forEach((value, i) => {
      const n = plain.filter((gap) => gap === value).length;
      expect(Math.abs(n - 400 * law.probabilities[i]!)).toBeLessThan(1);
    });
    const exact = drawGapsEvenly(law, 37, seeded('even'), 37 * 4.5);
    expect(exact.reduce((a, b) => a + b, 0)).toBeCloseTo(37 * 4.5, 9);
    expect(drawGapsEvenly(law, 37, seeded('even'), 37 * 4.5)).toEqual(exact);
    expect(() => drawGapsEvenly(law, 37, seeded('even'), 1000)).toThrow(EngineError);
    expect(() => drawGapsEvenly(fixedGap(3), 2, seeded('even'), 7)).toThrow(/sum/);
  });

  it('refuses laws that are none', () => {
    for (const make of [
      () => gapLaw([], []),
      () => gapLaw([1], [0]),
      () => gapLaw([1, 2], [1]),
      () => gapLaw([-1], [1]),
      () => uniformGaps(5, 2, 1),
      () => uniformGaps(2, 5, 0),
      () => geometricGaps(2, 5, 1, 0),
      () => uniformGaps(0, 1e9, 0.001)
    ])
      expect(make).toThrow(EngineError);
  });
});
