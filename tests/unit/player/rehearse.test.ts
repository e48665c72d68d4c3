import { describe, expect, it } from 'vitest';
import { rehearse, type RehearsalOptions } from '../../../src/lib/player/rehearse';
import { profileWith, smallTask } from './support';

const options = (change: Partial<RehearsalOptions> = {}): RehearsalOptions => {
  const { doc, run } = smallTask({
    onsets: Array.from({ length: 40 }, (_, i) => 1 + i * 4.0371),
    volumes: 90
  });
  return {
    document: doc,
    run,
    profile: profileWith(),
    scanner: { jitterSd: 0.002, missRate: 0, seed: 'a' },
    answers: { meanRt: 0.6, sdRt: 0.15, accuracy: 0.9, missRate: 0.1, seed: 'a' },
    speed: 'virtual',
    startedAt: new Date(0),
    ...change
  };
};

describe('a rehearsal on the virtual clock', () => {
  it('shows every item within half a frame of its plan', () => {
    const { report, partial } = rehearse(options());
    expect(partial).toBe(false);
    expect(report.items).toEqual({ planned: 40, shown: 40, notShown: 0 });
    expect(Math.abs(report.onsetErrors!.worst)).toBeLessThanOrEqual(0.5 + 1e-9);
    expect(Math.abs(report.onsetErrors!.mean)).toBeLessThan(0.15);
  });

  it('gives the same log again from the same seeds, and another from others', () => {
    const one = rehearse(options()).lines;
    expect(rehearse(options()).lines).toEqual(one);
    const other = rehearse(options({ scanner: { jitterSd: 0.002, missRate: 0, seed: 'b' } })).lines;
    expect(other).not.toEqual(one);
  });

  it('finds the pulses that came and names those that did not', () => {
    const { report } = rehearse(options({ scanner: { jitterSd: 0.005, missRate: 0.2, seed: 'a' } }));
    expect(report.pulses.found + report.pulses.missed).toBe(90);
    expect(report.pulses.missed).toBeGreaterThan(5);
    expect(report.pulses.measuredTr).toBeCloseTo(2, 2);
    expect(report.items.shown).toBe(40);
  });

  it('answers about as often and as well as asked', () => {
    const answers = { meanRt: 0.6, sdRt: 0.15, accuracy: 0.9, missRate: 0.1 };
    const runs = Array.from('abcdefghij', (seed) => rehearse(options({ answers: { ...answers, seed } })));
    const conditions = runs.flatMap((r) => r.report.conditions);
    const sum = (f: (c: (typeof conditions)[number]) => number) => conditions.reduce((n, c) => n + f(c), 0);
    expect(sum((c) => c.windows)).toBe(400);
    // Four standard deviations of the binomial about 10 % and 81 % of 400.
    expect(Math.abs(sum((c) => c.missing) - 40)).toBeLessThan(24);
    expect(Math.abs(sum((c) => c.correct) - 324)).toBeLessThan(32);
    // 0.6 s from the window, which opens 0.2 s after the lantern; 0.05 is over five standard errors.
    expect(Math.abs(sum((c) => c.meanRt! / conditions.length) - 0.8)).toBeLessThan(0.05);
    const { rows } = runs[0]!;
    expect(rows).toHaveLength(40);
    expect(rows.filter((r) => r.correct === 'missing').every((r) => r.response_time === null)).toBe(true);
  });

  it('follows a slow scanner when locked to its pulses, and drifts away when not', () => {
    const scanner = { jitterSd: 0.001, missRate: 0, seed: 'a', slowBy: 2000 };
    const locked = rehearse(options({ scanner, timing: 'pulse-locked' }));
    const free = rehearse(options({ scanner }));
    const worst = (r: typeof locked) =>
      Math.max(...r.rows.map((row) => Math.abs(row.onset! - row.planned_onset)));
    expect(worst(locked)).toBeLessThan(1 / 60 + 0.002);
    expect(worst(free)).toBeGreaterThan(0.2);
  });

  it('without pulses is called off and everything is reported as not shown', () => {
    const { report, partial, rows } = rehearse(
      options({ scanner: { jitterSd: 0, missRate: 0, seed: 'a', stopAfter: 0 } })
    );
    expect(partial).toBe(true);
    expect(report.items).toEqual({ planned: 40, shown: 0, notShown: 40 });
    expect(rows).toEqual([]);
  });
});
