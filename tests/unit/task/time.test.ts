import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { gridPoint, parseSeconds, secondsText, snapToGrid, snapToMs } from '../../../src/lib/task/time';

describe('times', () => {
  it('keeps every point of an hour at TR 0.735 s on a TR/4 grid within 1 µs', () => {
    for (let k = 0; k * 183_750 <= 3_600_000_000; k++) {
      const exact = (k * 735_000) / 4;
      expect(Math.abs(gridPoint(k, 735_000, 4) - exact)).toBeLessThan(1);
    }
  });

  it('snaps to the nearest grid point', () => {
    expect(snapToGrid(1_400_000, 1_500_000, 4)).toBe(1_500_000);
    expect(snapToGrid(-1_400_000, 1_500_000, 1)).toBe(-1_500_000);
    expect(snapToGrid(100_000, 735_000, 4)).toBe(183_750);
    // toBe tells minus zero from zero.
    expect(snapToGrid(-1000, 1_500_000, 4)).toBe(0);
    expect(snapToMs(-100)).toBe(0);
  });

  it('writes and reads seconds without loss', () => {
    fc.assert(
      fc.property(fc.integer({ min: -2e10, max: 2e10 }), (micros) => {
        expect(parseSeconds(secondsText(micros))).toEqual({ micros: micros + 0, exact: true });
      })
    );
    expect(secondsText(62_250_000)).toBe('62.250');
    expect(secondsText(-1)).toBe('-0.000001');
  });

  it('reads plain decimals and refuses words', () => {
    expect(parseSeconds(' 1.5e1 ')).toEqual({ micros: 15_000_000, exact: true });
    expect(parseSeconds('0.1234567')).toEqual({ micros: 123_457, exact: false });
    for (const bad of ['', 'n/a', '1,5', '0x10', '--1', '1s', 'NaN', 'Infinity', '1e999'])
      expect(parseSeconds(bad)).toBeNull();
  });
});
