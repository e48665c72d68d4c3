import { describe, expect, it } from 'vitest';
import { curvePath, extent } from '../../../src/lib/charts/curve-path';
import { DASHES, markStyle, PATTERN_BACKGROUNDS } from '../../../src/lib/charts/condition-marks';
import { CONDITION_PATTERNS } from '../../../src/lib/task/schema';

const frame = { x0: 0, step: 2, zero: 50, unit: 10, top: 0, bottom: 60 };

describe('curves', () => {
  it('draws the samples of one stretch', () => {
    expect(curvePath([0, 1, 2, 1], 1, 3, frame)).toBe('M0 40L2 30L4 40');
  });
  it('leaves out the inside of a flat stretch but keeps its two ends', () => {
    expect(curvePath([0, 0, 0, 0, 1], 0, 4, frame)).toBe('M0 50L6 50L8 40');
  });
  it('stays within its band and within the samples', () => {
    expect(curvePath([-9, 99], 0, 9, frame)).toBe('M0 60L2 0');
    expect(curvePath([], 0, 9, frame)).toBe('');
    expect(curvePath([1], 5, 9, frame)).toBe('');
  });
  it('has 0 in its extent', () => {
    expect(extent([[0.5, 2], [1]])).toEqual({ low: 0, high: 2 });
    expect(extent([])).toEqual({ low: 0, high: 0 });
  });
});

describe('marks of conditions', () => {
  it('gives every pattern a line style of its own and a picture of its own', () => {
    expect(new Set(Object.values(DASHES)).size).toBe(CONDITION_PATTERNS.length);
    expect(new Set(Object.values(PATTERN_BACKGROUNDS)).size).toBe(CONDITION_PATTERNS.length);
  });
  it('never resets the colour when it sets the pattern', () => {
    for (const pattern of CONDITION_PATTERNS) {
      const style = markStyle({ colour: 'c3', pattern });
      expect(style).toContain('background-color:var(--c3)');
      expect(style).not.toMatch(/background:/);
    }
    expect(markStyle(undefined)).toContain('--rule-strong');
  });
});
