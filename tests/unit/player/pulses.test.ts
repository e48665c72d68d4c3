import { describe, expect, it } from 'vitest';
import { seeded } from '../../../src/lib/engine/random';
import { pulsePlan, PulseReader, type PulseNews } from '../../../src/lib/player/pulses';
import { profileWith } from './support';
import type { Profile } from '../../../src/lib/task/profile';

const reader = (change: Partial<Profile> = {}, tr = 2, volumes = 10) => {
  const pulses = new PulseReader(pulsePlan(profileWith(change), tr, volumes));
  pulses.arm();
  return pulses;
};
const kinds = (news: PulseNews[]) => news.map((n) => n.kind);

describe('pulses', () => {
  it('are shown and not obeyed before the run is armed', () => {
    const pulses = new PulseReader(pulsePlan(profileWith(), 2, 10));
    expect(pulses.edge(1)).toEqual([{ kind: 'ignored', time: 1, reason: 'not-armed' }]);
    expect(pulses.zero).toBeNull();
  });

  it('set time zero with the first one', () => {
    const pulses = reader();
    expect(pulses.edge(5)).toEqual([
      { kind: 'pulse', time: 5, volume: 0, part: 0 },
      { kind: 'zero', time: 5, bridged: false }
    ]);
  });

  it('before the first stored volume count negative, and zero is the pulse after them', () => {
    const pulses = reader({ pulsesBeforeZero: 2 });
    expect(pulses.edge(1)).toEqual([{ kind: 'pulse', time: 1, volume: -2, part: 0 }]);
    expect(pulses.edge(3)).toEqual([{ kind: 'pulse', time: 3, volume: -1, part: 0 }]);
    expect(kinds(pulses.edge(5.001))).toEqual(['pulse', 'zero']);
    expect(pulses.zero).toBe(5.001);
  });

  it('put zero on the line when the pulse of zero does not come', () => {
    const pulses = reader({ pulsesBeforeZero: 2 });
    pulses.edge(1);
    pulses.edge(3);
    expect(pulses.tick(5.02)).toEqual([]);
    const [zero] = pulses.tick(5.03);
    expect(zero).toMatchObject({ kind: 'zero', bridged: true });
    expect(pulses.zero).toBeCloseTo(5, 9);
  });

  it('count once at the start only, and then nothing more is expected', () => {
    const pulses = reader({ pulses: { mode: 'once', perVolume: 1 }, pulsesBeforeZero: 1 });
    expect(kinds(pulses.edge(1))).toEqual(['pulse', 'zero']);
    expect(pulses.zero).toBe(3);
    expect(pulses.tick(100)).toEqual([]);
    expect(pulses.edge(101)).toMatchObject([{ reason: 'not-expected' }]);
    expect(pulses.missed).toBe(0);
  });

  it('several to a volume: every k-th is a volume', () => {
    const pulses = reader({ pulses: { mode: 'several-per-volume', perVolume: 4 } });
    const news = Array.from({ length: 9 }, (_, i) => pulses.edge(10 + i * 0.5)).flat();
    const volumes = news.flatMap((n) => (n.kind === 'pulse' && n.part === 0 ? [n.volume] : []));
    expect(volumes).toEqual([0, 1, 2]);
  });

  it('several to a volume with a silent gap keep their count across a missed one', () => {
    const pulses = reader({ pulses: { mode: 'several-per-volume', perVolume: 4 }, acquisitionTime: 1 });
    const at = (volume: number, part: number) => volume * 2 + part * 0.25;
    for (let v = 0; v < 3; v++) for (let p = 0; p < 4; p++) if (!(v === 1 && p === 0)) pulses.edge(at(v, p));
    expect(pulses.found).toBe(11);
    expect(pulses.missed).toBe(1);
    expect(pulses.edge(at(3, 0))).toContainEqual({ kind: 'pulse', time: 6, volume: 3, part: 0 });
  });

  it('bounces and held keys are none', () => {
    const pulses = reader();
    pulses.edge(1);
    expect(pulses.edge(1.002)).toMatchObject([{ reason: 'bounce' }]);
    expect(pulses.edge(1.2, true)).toMatchObject([{ reason: 'held-key' }]);
    expect(pulses.found).toBe(1);
  });

  it('debounce stays below half the interval, however fast the pulses', () => {
    const pulses = reader({ pulses: { mode: 'several-per-volume', perVolume: 500 } });
    expect(pulses.debounce).toBeLessThan(2 / 500 / 2);
  });

  it('one without a second within 1.5 intervals is a false start, and the run is armed again', () => {
    const pulses = reader();
    pulses.edge(1);
    expect(pulses.tick(4)).toEqual([]);
    expect(pulses.tick(4.01)).toEqual([{ kind: 'false-start', time: 4.01 }]);
    expect(pulses.zero).toBeNull();
    pulses.edge(20);
    expect(pulses.zero).toBe(20);
    expect(pulses.tick(21)).toEqual([]);
  });

  it('missed ones are bridged and named', () => {
    const pulses = reader();
    [0, 2, 4].forEach((t) => pulses.edge(t));
    expect(pulses.tick(7.01)).toEqual([{ kind: 'missed', time: 7.01, volume: 3, part: 0 }]);
    expect(pulses.edge(8)).toContainEqual({ kind: 'pulse', time: 8, volume: 4, part: 0 });
    expect(pulses.missed).toBe(1);
  });

  it('extra ones are ignored', () => {
    const pulses = reader();
    [0, 2].forEach((t) => pulses.edge(t));
    expect(pulses.edge(2.4)).toMatchObject([{ reason: 'extra' }]);
    expect(pulses.edge(4)).toMatchObject([{ kind: 'pulse', volume: 2 }]);
  });

  it('tell another TR than planned after three volumes', () => {
    const pulses = reader({}, 1.5);
    const news = [0, 1.6, 3.2, 4.8].flatMap((t) => pulses.edge(t));
    const interval = news.find((n) => n.kind === 'interval');
    expect(interval).toMatchObject({ planned: 1.5, agrees: false });
    expect(interval?.kind === 'interval' && interval.measured).toBeCloseTo(1.6, 9);
  });

  it('agree with the planned TR within jitter of milliseconds', () => {
    const pulses = reader();
    const news = [0, 2.004, 3.997, 6.002].flatMap((t) => pulses.edge(t));
    expect(news.find((n) => n.kind === 'interval')).toMatchObject({ agrees: true });
  });

  it('are said to have stopped after three volumes of silence, and not at the end', () => {
    const pulses = reader();
    [0, 2, 4].forEach((t) => pulses.edge(t));
    expect(kinds(pulses.tick(10.1))).toContain('stopped');
    const whole = reader();
    for (let v = 0; v < 10; v++) whole.edge(v * 2);
    expect(whole.tick(100)).toEqual([]);
    expect(whole.edge(101)).toMatchObject([{ reason: 'after-the-last' }]);
  });

  it('50 ppm slow are measured as 50 ± 2 ppm by the line, with jitter of a millisecond', () => {
    const pulses = reader({}, 2, 300);
    const random = seeded('line');
    for (let v = 0; v < 300; v++) pulses.edge(7 + v * 2 * 1.00005 + 0.001 * random.normal());
    expect(Math.abs((pulses.line.slope / 2 - 1) * 1e6 - 50)).toBeLessThan(2);
    expect(pulses.line.timeAt(300)).toBeCloseTo(7 + 300 * 2 * 1.00005, 3);
  });

  it('few and jittery do not bend the line: clocks differ by little, hands by much', () => {
    const pulses = reader({}, 1, 8);
    [0, 0.998, 2.003, 3.014, 4.014, 5.001, 5.998, 7.032].forEach((t) => pulses.edge(t));
    expect(Math.abs(pulses.line.measured - 1) * 1e6).toBeGreaterThan(1000);
    expect(Math.abs(pulses.line.slope - 1) * 1e6).toBeLessThan(100);
  });
});
