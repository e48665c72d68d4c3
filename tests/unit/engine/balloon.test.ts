import { describe, expect, it } from 'vitest';
import { balloonSignal } from '$lib/engine/convolution/balloon';
import { EngineError } from '$lib/engine/errors';
import reference from '../../fixtures/reference/balloon.json';
import { expectAllNear } from './near';

describe('balloon model', () => {
  it.each(reference.cases.map((one) => [JSON.stringify(one.events), one] as const))(
    'SciPy’s integrator agrees: %s',
    (_name, { events, signal }) => {
      const list = events.map(([onset, duration]) => ({ onset: onset!, duration: duration! }));
      // Both integrate numerically: SciPy to 1e-12, fourth-order steps of 0.02 s to 1e-7 of the peak.
      expectAllNear(balloonSignal(list, reference.times), signal, Math.max(...signal), 1e-7);
    }
  );

  it('saturates mildly: two events 1 s apart give less than the sum of the two', () => {
    const times = Array.from({ length: 200 }, (_, i) => i / 10);
    const one = balloonSignal([{ onset: 0, duration: 0 }], times);
    const later = balloonSignal([{ onset: 1, duration: 0 }], times);
    const both = balloonSignal(
      [
        { onset: 0, duration: 0 },
        { onset: 1, duration: 0 }
      ],
      times
    );
    const linear = Math.max(...one.map((value, i) => value + later[i]!));
    const ratio = Math.max(...both) / linear;
    expect(ratio).toBeLessThan(1);
    expect(ratio).toBeGreaterThan(0.7);
  });

  it('is at rest without events, starts before the run and never gives NaN', () => {
    expect(Math.max(...balloonSignal([], [0, 10, 20]).map(Math.abs))).toBe(0);
    expect(balloonSignal([{ onset: -4, duration: 0 }], [0])[0]).toBeGreaterThan(0);
    const storm = Array.from({ length: 300 }, (_, i) => ({ onset: i / 100, duration: 4 }));
    for (const value of balloonSignal(storm, [1, 5, 9, 20, 40])) expect(value).not.toBeNaN();
    expect(() => balloonSignal([{ onset: 0, duration: 0, height: -1 }], [0])).toThrow(EngineError);
    expect(() => balloonSignal([], [0], { transit: 0 })).toThrow(/balloon parameter “transit” is 0/);
  });
});
