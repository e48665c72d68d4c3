import { describe, expect, it, vi } from 'vitest';
import { seeded } from '$lib/engine/random';

// Seconds of arithmetic, more on a machine that does other things as well.
vi.setConfig({ testTimeout: 60_000 });

describe('seeded random numbers', () => {
  it('repeats for a seed and differs between seeds', () => {
    const take = (seed: string) => {
      const random = seeded(seed);
      return [random.next(), random.int(1000), random.normal(), random.normal(), random.exponential(2)];
    };
    expect(take('a')).toEqual(take('a'));
    expect(take('a')).not.toEqual(take('b'));
    expect(take('')).toEqual(take(''));
    expect(take('12')).not.toEqual(take('13'));
  });

  it('gives the same bytes as when this was written (a change would make old searches unrepeatable)', () => {
    const random = seeded('ebb');
    expect([random.next(), random.int(100), random.int(7), random.normal(), random.exponential(3)]).toEqual([
      0.5796434344755127, 25, 1, 0.013575768052869943, 6.235483752143103
    ]);
    expect(seeded('tide').shuffle([0, 1, 2, 3, 4, 5, 6, 7])).toEqual([4, 3, 7, 5, 0, 6, 1, 2]);
  });

  it('is uniform: every bin of 20 near its share, all orders of three equally often', () => {
    const random = seeded('uniform');
    const bins = new Array<number>(20).fill(0);
    const draws = 100_000;
    for (let i = 0; i < draws; i++) bins[Math.floor(random.next() * 20)]!++;
    // Chi-square with 19 degrees of freedom: 43.8 is its 99.9 % point (tables).
    const chi = bins.reduce((sum, n) => sum + (n - draws / 20) ** 2 / (draws / 20), 0);
    expect(chi).toBeLessThan(43.8);
    const orders = new Map<string, number>();
    for (let i = 0; i < 12_000; i++) {
      const key = random.shuffle(['a', 'b', 'c']).join('');
      orders.set(key, (orders.get(key) ?? 0) + 1);
    }
    expect(orders.size).toBe(6);
    // 99.9 % point for 5 degrees of freedom: 20.5.
    expect([...orders.values()].reduce((sum, n) => sum + (n - 2000) ** 2 / 2000, 0)).toBeLessThan(20.5);
  });

  it('has the moments of its laws', () => {
    const random = seeded('moments');
    const n = 100_000;
    let mean = 0;
    let square = 0;
    let fourth = 0;
    let waited = 0;
    for (let i = 0; i < n; i++) {
      const z = random.normal();
      mean += z / n;
      square += (z * z) / n;
      fourth += z ** 4 / n;
      waited += random.exponential(3) / n;
    }
    // Four standard errors of each estimate.
    expect(Math.abs(mean)).toBeLessThan(4 / Math.sqrt(n));
    expect(Math.abs(square - 1)).toBeLessThan(4 * Math.sqrt(2 / n));
    expect(Math.abs(fourth - 3)).toBeLessThan(4 * Math.sqrt(96 / n));
    expect(Math.abs(waited - 3)).toBeLessThan((4 * 3) / Math.sqrt(n));
  });

  it('refuses a range that is none', () => {
    const random = seeded('x');
    for (const n of [0, -1, 1.5, NaN, 2 ** 33])
      expect(() => random.int(n)).toThrow(/whole number from 1 to 4294967296/);
    expect(random.int(1)).toBe(0);
  });
});
