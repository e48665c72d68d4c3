import { describe, expect, it } from 'vitest';
import { renderTone } from '../../../src/lib/player/tone';

const tone = (more = {}) =>
  ({
    id: 'chimes',
    name: 'chime',
    kind: 'sound',
    onset: 0,
    duration: 200_000,
    modelled: false,
    frequency: 1000,
    level: -20,
    ear: 'both',
    ramp: 10_000,
    ...more
  }) as Parameters<typeof renderTone>[0];
const peak = (samples: ArrayLike<number>, from = 0, to = samples.length) => {
  let most = 0;
  for (let i = from; i < to; i++) most = Math.max(most, Math.abs(samples[i]!));
  return most;
};

describe('a tone', () => {
  it('has its level in dB full scale', () => {
    expect(peak(renderTone(tone(), 0.2, 0, 48_000))).toBeCloseTo(0.1, 3);
    expect(peak(renderTone(tone({ level: -40 }), 0.2, 0, 48_000))).toBeCloseTo(0.01, 4);
  });

  it('is never louder than the profile allows', () => {
    expect(peak(renderTone(tone({ level: 0 }), 0.2, -30, 48_000))).toBeCloseTo(10 ** (-30 / 20), 4);
  });

  it('begins and ends in silence, whatever ramp is asked for', () => {
    for (const ramp of [0, 10_000, 500_000]) {
      const samples = renderTone(tone({ ramp }), 0.2, 0, 48_000);
      expect(samples).toHaveLength(9600);
      expect(peak(samples, 0, 5)).toBeLessThan(0.005);
      expect(peak(samples, 9595)).toBeLessThan(0.005);
    }
  });

  it('has its frequency: crossings of zero', () => {
    const samples = renderTone(tone({ frequency: 440, ramp: 0 }), 1, 0, 48_000);
    let crossings = 0;
    for (let i = 1; i < samples.length; i++) if (samples[i - 1]! < 0 !== samples[i]! < 0) crossings += 1;
    expect(Math.abs(crossings - 880)).toBeLessThanOrEqual(2);
  });
});
