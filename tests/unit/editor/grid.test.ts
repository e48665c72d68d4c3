import { describe, expect, it } from 'vitest';
import { GRIDS, nudge, snap } from '../../../src/lib/editor/page/grid';

describe('snapping', () => {
  it('rounds each point from its own index: an hour at TR 0.735 s on TR/4 never drifts', () => {
    const tr = 735_000;
    for (let k = 0; k * tr < 4 * 3600 * 1e6; k += 97) {
      const exact = (k * tr) / 4;
      expect(Math.abs(snap(Math.round(exact) + 3, 'TR/4', tr) - exact)).toBeLessThanOrEqual(0.5);
    }
  });
  it('knows TR, its parts and milliseconds', () => {
    expect(snap(1_400_000, 'TR', 1_500_000)).toBe(1_500_000);
    expect(snap(1_100_000, 'TR/2', 1_500_000)).toBe(750_000);
    expect(snap(1_100_000, 'TR/4', 1_500_000)).toBe(1_125_000);
    expect(snap(1_100_499, 'ms', 1_500_000)).toBe(1_100_000);
    expect(snap(-400_000, 'TR/4', 1_500_000)).toBe(-375_000);
  });
  it('nudges from grid point to grid point, and from between two to the next', () => {
    expect(nudge(1_500_000, 1, 'TR/4', 1_500_000)).toBe(1_875_000);
    expect(nudge(1_500_000, -1, 'TR', 1_500_000)).toBe(0);
    expect(nudge(1_400_000, 1, 'TR', 1_500_000)).toBe(1_500_000);
    expect(nudge(1_400_000, -1, 'TR', 1_500_000)).toBe(0);
    expect(nudge(1_600_000, 1, 'TR', 1_500_000)).toBe(3_000_000);
    expect(nudge(1_600_000, -1, 'TR', 1_500_000)).toBe(1_500_000);
    expect(nudge(500, 1, 'ms', 1_500_000)).toBe(1000);
  });
  it('comes back to where it was after a step there and one back', () => {
    for (const grid of GRIDS)
      for (const tr of [735_000, 1_500_000, 2_000_001])
        for (let k = -40; k < 400; k++) {
          const start = snap(k * 311_111, grid, tr);
          expect(nudge(nudge(start, 1, grid, tr), -1, grid, tr)).toBe(start);
        }
  });
});
