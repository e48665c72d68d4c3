import { describe, expect, it } from 'vitest';
import { responseCurve } from '$lib/engine/convolution/curve';
import { IncrementalRegressor } from '$lib/engine/convolution/incremental';
import { peakScale } from '$lib/engine/convolution/peak-scale';
import { regressor } from '$lib/engine/convolution/regressor';
import { volumeTimes } from '$lib/engine/convolution/times';
import { EngineError } from '$lib/engine/errors';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import reference from '../../fixtures/reference/regressor.json';
import { expectAllNear, expectNear } from './near';

const example = reference.regressor_example;
const h = doubleGamma();
const atPeak1 = peakScale(h, 0);
const events = example.design.onsets_s.map((onset) => ({ onset, duration: 0 }));
const start = volumeTimes({ tr: 2, volumes: 200, sliceReference: 0 });
const middle = volumeTimes({ tr: 2, volumes: 200 });

describe('regressor of 20 events every 20 s (reference values: mpmath superposition, NiPy)', () => {
  it('at the start and at the middle of the volume', () => {
    expectAllNear(regressor(events, h, start, atPeak1), example.impulse_peak1_phi0);
    expectAllNear(regressor(events, h, middle, atPeak1), example['impulse_peak1_phi0.5']);
    expectAllNear(regressor(events, h, start), example.impulse_raw_phi0);
  });

  it('untruncated', () => {
    const endless = doubleGamma({ length: Infinity });
    expectAllNear(regressor(events, endless, start, atPeak1), example.impulse_peak1_phi0_untruncated);
  });

  it('with boxcars of 2 s, each single response scaled to a highest point of 1', () => {
    const boxcars = events.map(({ onset }) => ({ onset, duration: 2 }));
    expectAllNear(
      regressor(boxcars, h, start, peakScale(h, 2)),
      example.boxcar_2s_scaled_to_unit_single_event_max
    );
  });

  it('has the tabulated mean and sum of squares', () => {
    const values = regressor(events, h, start, atPeak1);
    const mean = values.reduce((sum, value) => sum + value, 0) / 200;
    expectNear(mean, example.mean_phi0);
    expectNear(
      values.reduce((sum, value) => sum + (value - mean) ** 2, 0),
      example.sumsq_centered_phi0
    );
  });
});

describe('what is common in the trade (no source)', () => {
  const values = regressor(events, h, start, atPeak1);

  it('a brief event every 20 s for 400 s at TR 2 s: 200 volumes and 20 separate peaks', () => {
    expect(values).toHaveLength(200);
    let peaks = 0;
    for (let n = 1; n < 199; n += 1)
      if (values[n]! > values[n - 1]! && values[n]! > values[n + 1]!) peaks += 1;
    // The wrapped-in tail makes no peak of its own: exactly one per event.
    expect(peaks).toBe(20);
  });

  it('averaging the stretches of ten volumes after the first gives the response with the tail wrapped in', () => {
    const isolated = regressor([{ onset: 0, duration: 0 }], h, start, atPeak1);
    for (let lag = 0; lag < 10; lag += 1) {
      let average = 0;
      for (let stretch = 1; stretch < 20; stretch += 1) average += values[10 * stretch + lag]! / 19;
      expectNear(average, isolated[lag]! + isolated[lag + 10]!, 1, 1e-9);
      expectNear(average, isolated[lag]!, 1, 0.05);
    }
  });
});

describe('incremental regressor', () => {
  it('equals the rebuilt one after adding, removing and moving', () => {
    const line = new IncrementalRegressor(h, middle, atPeak1, events);
    line.remove({ onset: 40, duration: 0 });
    line.add({ onset: -6.25, duration: 4.5, height: 0.5 });
    line.move({ onset: 60, duration: 0 }, { onset: 63.735, duration: 0 });
    const kept = events.filter(({ onset }) => onset !== 40 && onset !== 60);
    const rebuilt = [...kept, { onset: -6.25, duration: 4.5, height: 0.5 }, { onset: 63.735, duration: 0 }];
    expectAllNear(line.values, regressor(rebuilt, h, middle, atPeak1), 1, 1e-12);
  });

  it('refuses a malformed target and stays as it was', () => {
    const line = new IncrementalRegressor(h, middle, 1, events);
    const before = line.values.slice();
    expect(() => line.move(events[0]!, { onset: NaN, duration: 0 })).toThrow(EngineError);
    expect(line.values).toEqual(before);
  });
});

describe('times and curves', () => {
  it('models volume n at n·TR + start + ref·TA', () => {
    expect([...volumeTimes({ tr: 2, volumes: 3 })]).toEqual([1, 3, 5]);
    const clustered = { tr: 3, volumes: 2, acquisitionTime: 2, acquisitionStart: 0.5, sliceReference: 1 };
    expect([...volumeTimes(clustered)]).toEqual([2.5, 5.5]);
    expect(() => volumeTimes({ tr: 2, volumes: 0 })).toThrow(/number of volumes is 0; expected/);
    expect(() => volumeTimes({ tr: 2, volumes: 3, acquisitionTime: 2.5 })).toThrow(EngineError);
  });

  it('counts the last point of the kernel whatever the binary fractions', () => {
    // 0.1 + 32 − 0.1 is not 32 in binary.
    for (const onset of [0, 0.1, 0.3, 0.7, 1.1]) {
      const [value] = regressor([{ onset, duration: 0 }], h, [onset + 32]);
      expectNear(value!, h.value(32), 0, 1e-12);
    }
  });

  it('draws a curve with both ends', () => {
    const curve = responseCurve([{ onset: 0, duration: 0 }], h, 0, 32, 0.1);
    expect(curve).toHaveLength(321);
    expectNear(curve[50]!, h.value(5), 1, 1e-15);
  });

  it('refuses unsorted times, NaN and negative durations', () => {
    expect(() => regressor([], h, [0, 2, 2])).toThrow(/time of volume 2 is 2; expected a time after 2 s/);
    expect(() => regressor([{ onset: 0, duration: -1 }], h, [0])).toThrow(/event duration is -1/);
    expect(() => regressor([{ onset: Infinity, duration: 0 }], h, [0])).toThrow(EngineError);
  });
});
