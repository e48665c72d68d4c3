import { describe, expect, it } from 'vitest';
import { regressor } from '../../../src/lib/engine/convolution/regressor';
import { doubleGamma } from '../../../src/lib/engine/response/double-gamma';
import { LiveSignal } from '../../../src/lib/editor/page/live-signal';
import type { ModelledEvent } from '../../../src/lib/task/compile';

const response = doubleGamma();
const grid = { from: -3_000_000, step: 500_000, count: 400 };
const times = Float64Array.from({ length: grid.count }, (_, i) => (grid.from + i * grid.step) / 1e6);
const event = (n: number, onset: number, factor = 'a', duration = 2_000_000): ModelledEvent => ({
  trialId: `trial${n}`,
  itemId: 'item',
  conditionId: factor,
  trialType: factor,
  factor,
  onset,
  duration
});
const plain = (events: ModelledEvent[], factor: string, scale: number) =>
  regressor(
    events
      .filter((e) => e.factor === factor)
      .map((e) => ({ onset: e.onset / 1e6, duration: e.duration / 1e6 })),
    response,
    times,
    scale
  );

describe('the live signal', () => {
  it('equals the signal computed from nothing, however it got there', () => {
    const live = new LiveSignal(
      response,
      grid,
      new Map([
        ['a', 1.5],
        ['b', 2]
      ])
    );
    let events = Array.from({ length: 40 }, (_, n) => event(n, n * 4_000_000, n % 2 ? 'a' : 'b'));
    for (let step = 0; step < 200; step++) {
      const n = (step * 7) % events.length;
      events = events.map((e, i) =>
        i === n
          ? event(i, e.onset + ((step % 5) - 2) * 375_000, step % 3 ? e.factor : 'a', 1_000_000 + step)
          : e
      );
      if (step === 100) events = events.slice(3);
      live.update(events);
    }
    for (const [factor, scale] of [
      ['a', 1.5],
      ['b', 2]
    ] as const) {
      const expected = plain(events, factor, scale);
      const got = live.values(factor);
      // 200 changes, each within one rounding of values near 1.
      for (let i = 0; i < times.length; i++) expect(Math.abs(got[i]! - expected[i]!)).toBeLessThan(1e-12);
    }
  });
  it('equals it for onsets and sample times that are no multiples of each other, and beyond both ends', () => {
    // TR 0.735001 s sampled at its middle, onsets on the ms grid, some before the grid and some at its very end.
    const odd = { from: 367_500.5, step: 735_001, count: 300 };
    const at = Float64Array.from({ length: odd.count }, (_, i) => (odd.from + i * odd.step) / 1e6);
    const live = new LiveSignal(response, odd, new Map([['a', 1]]));
    const events = Array.from({ length: 60 }, (_, n) =>
      event(n, -40_000_000 + n * 4_321_000, 'a', n % 3 ? 0 : 750_000)
    );
    live.update(events);
    const expected = regressor(
      events.map((e) => ({ onset: e.onset / 1e6, duration: e.duration / 1e6 })),
      response,
      at
    );
    // Lags are rounded at another place than in the regressor: 1e-13 s times the steepest slope, for 60 events.
    for (let i = 0; i < odd.count; i++)
      expect(Math.abs(live.values('a')[i]! - expected[i]!)).toBeLessThan(1e-12);
    expect(Math.max(...expected)).toBeGreaterThan(0.1);
  });
  it('draws nothing for a factor it was not told about', () => {
    const live = new LiveSignal(response, grid, new Map([['a', 1]]));
    live.update([event(1, 0, 'z')]);
    expect(live.values('z').every((v) => v === 0)).toBe(true);
    expect(live.values('a').every((v) => v === 0)).toBe(true);
  });
});
