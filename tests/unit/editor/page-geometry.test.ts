import { describe, expect, it } from 'vitest';
import {
  lineNumbers,
  lineOf,
  makeGeometry,
  pageClock,
  stretches,
  timeAt,
  volumeAt,
  volumeTicks,
  xOn
} from '../../../src/lib/editor/page/page-geometry';

const s = 1_000_000;
const page = makeGeometry(60 * s, 600, 0, 450 * s);

describe('the wrapped page', () => {
  it('has as many lines as the run needs, and none for an end that falls on a line end', () => {
    expect(page.count).toBe(8);
    expect(makeGeometry(60 * s, 600, 0, 480 * s).count).toBe(8);
    expect(makeGeometry(60 * s, 600, 0, 480 * s + 1).count).toBe(9);
    expect(makeGeometry(60 * s, 600, 0, 0).count).toBe(1);
  });
  it('begins with a line before time zero where a trial starts there', () => {
    const g = makeGeometry(60 * s, 600, -2 * s, 100 * s);
    expect(lineNumbers(g)).toEqual([-1, 0, 1]);
    expect(lineOf(g, -2 * s)).toBe(-1);
    expect(xOn(g, -1, -2 * s)).toBeCloseTo(580, 9);
  });
  it('turns time to x and back', () => {
    expect(xOn(page, 1, 90 * s)).toBe(300);
    expect(timeAt(page, 1, 300)).toBe(90 * s);
    for (const t of [0, 1, 59_999_999, 60 * s, 449_123_457])
      expect(Math.abs(timeAt(page, lineOf(page, t), xOn(page, lineOf(page, t), t)) - t)).toBeLessThanOrEqual(
        1
      );
  });
  it('gives no NaN before the width is known', () => {
    const g = makeGeometry(60 * s, 0, 0, 100 * s);
    expect(timeAt(g, 1, 10)).toBe(60 * s);
    expect(xOn(g, 0, 30 * s)).toBe(0);
  });
  it('breaks a block at the line end', () => {
    expect(stretches(page, 58 * s, 61 * s)).toEqual([
      { line: 0, x: 580, width: 20, begins: true, ends: false },
      { line: 1, x: 0, width: 10, begins: false, ends: true }
    ]);
    expect(stretches(page, 58 * s, 60 * s)).toHaveLength(1);
    expect(stretches(page, 5 * s, 5 * s)).toEqual([{ line: 0, x: 50, width: 0, begins: true, ends: true }]);
  });
  it('rules volumes from their index, the last line only to the end of the scan', () => {
    const ticks = volumeTicks(page, 7, 1_500_000, 300);
    expect(ticks[0]).toEqual({ x: 0, volume: 281, major: true });
    expect(ticks.at(-1)?.volume).toBe(300);
    const tr = 735_001;
    const long = makeGeometry(60 * s, 600, 0, 3600 * s);
    for (const line of [0, 1, 30, 59])
      for (const tick of volumeTicks(long, line, tr, 5000)) {
        expect(tick.x).toBeGreaterThanOrEqual(0);
        expect(tick.x).toBeLessThan(600);
        expect(timeAt(long, line, tick.x)).toBe((tick.volume - 1) * tr);
      }
  });
  it('thins the ruling before it becomes a wash', () => {
    const dense = makeGeometry(120 * s, 600, 0, 600 * s);
    expect(volumeTicks(dense, 0, 200_000, 3000).every((t) => (t.volume - 1) % 5 === 0)).toBe(true);
  });
  it('names volume and time', () => {
    expect(volumeAt(0, 1_500_000, 300)).toBe(1);
    expect(volumeAt(449_999_999, 1_500_000, 300)).toBe(300);
    expect(volumeAt(450_000_000, 1_500_000, 300)).toBeNull();
    expect(volumeAt(-1, 1_500_000, 300)).toBeNull();
    expect(pageClock(62_250_000)).toBe('1:02.25');
    expect(pageClock(-30 * s)).toBe('−0:30');
    expect(pageClock(0)).toBe('0:00');
  });
});
