import { describe, expect, it } from 'vitest';
import { pulsePlan } from '../../../src/lib/player/pulses';
import { buildSchedule } from '../../../src/lib/player/schedule';
import { simulateAnswers, simulatePulses } from '../../../src/lib/player/simulate';
import { profileWith, smallTask } from './support';

const quiet = { jitterSd: 0, missRate: 0, seed: 's' };

describe('a simulated scanner', () => {
  it('sends a pulse every volume, dummies first', () => {
    const plan = pulsePlan(profileWith({ pulsesBeforeZero: 2 }), 2, 3);
    expect(simulatePulses(plan, quiet, 10)).toEqual([10, 12, 14, 16, 18]);
  });

  it('sends one at the start, or several a volume within the acquisition time', () => {
    const once = pulsePlan(profileWith({ pulses: { mode: 'once', perVolume: 1 } }), 2, 3);
    expect(simulatePulses(once, quiet, 10)).toEqual([10]);
    const several = profileWith({ pulses: { mode: 'several-per-volume', perVolume: 2 }, acquisitionTime: 1 });
    expect(simulatePulses(pulsePlan(several, 2, 2), quiet, 10)).toEqual([10, 10.5, 12, 12.5]);
  });

  it('has the jitter and misses it was asked for, and stops when told', () => {
    const plan = pulsePlan(profileWith(), 2, 2000);
    const times = simulatePulses(plan, { jitterSd: 0.005, missRate: 0, seed: 's' }, 0);
    const errors = times.map((t, i) => t - i * 2);
    const sd = Math.sqrt(errors.reduce((a, e) => a + e * e, 0) / errors.length);
    // Six standard errors of an SD of 2,000.
    expect(Math.abs(sd - 0.005)).toBeLessThan(0.0005);
    const some = simulatePulses(plan, { jitterSd: 0, missRate: 0.25, seed: 's' }, 0);
    // Four standard deviations of the binomial.
    expect(Math.abs(some.length - 1500)).toBeLessThan(78);
    expect(simulatePulses(plan, { ...quiet, stopAfter: 5 }, 0)).toHaveLength(5);
  });
});

describe('an automatic participant', () => {
  const onsets = Array.from({ length: 1000 }, (_, i) => i * 4);
  const { doc, run } = smallTask({ onsets, volumes: 2000 });
  const schedule = buildSchedule(doc, run, profileWith());
  const keys = simulateAnswers(schedule, { meanRt: 0.6, sdRt: 0.2, accuracy: 0.8, missRate: 0.1, seed: 's' });
  const downs = keys.filter((k) => k.state === 'down');

  it('answers as often, as well and as fast as asked', () => {
    expect(Math.abs(downs.length - 900)).toBeLessThan(38);
    // Windows open at k·4 + 0.2; odd and even trials want different keys.
    const rts = downs.map((k) => (k.time - 0.2) % 4);
    const mean = rts.reduce((a, b) => a + b, 0) / rts.length;
    expect(Math.abs(mean - 0.6)).toBeLessThan(0.027);
    const right = downs.filter((k) => (Math.floor(k.time / 4) % 2 === 0) === (k.code === 'Digit1')).length;
    expect(Math.abs(right / downs.length - 0.8)).toBeLessThan(0.054);
  });

  it('lets every key go again', () => {
    expect(keys.filter((k) => k.state === 'up')).toHaveLength(downs.length);
  });

  it('presses nothing where no finger has a key', () => {
    const without = buildSchedule(doc, run, profileWith({ responseKeys: [] }));
    const answers = { meanRt: 0.6, sdRt: 0.2, accuracy: 1, missRate: 0, seed: 's' };
    expect(simulateAnswers(without, answers)).toEqual([]);
  });
});
