import { describe, expect, it } from 'vitest';
import { regressor } from '$lib/engine/convolution/regressor';
import { volumeTimes } from '$lib/engine/convolution/times';
import { designReport, type DesignInput, type DesignReport } from '$lib/engine/design/report';
import { EngineError } from '$lib/engine/errors';
import { constant, dctDrift, dctDriftAt } from '$lib/engine/noise/drift';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import { denseInformation } from './dense';
import { expectNear } from './near';

const tr = 2;
const volumes = 120;
const times = volumeTimes({ tr, volumes });
const h = doubleGamma();
const at = (...onsets: number[]) =>
  regressor(
    onsets.map((onset) => ({ onset, duration: 0 })),
    h,
    times
  );
const a = at(4, 31, 60, 107, 160);
const b = at(14, 44, 81, 130, 190);

function report(columns: Record<string, Float64Array>, contrasts: Record<string, number[]>, more = {}) {
  const input: DesignInput = {
    tr,
    volumes,
    columns: Object.entries(columns).map(([name, values]) => ({ name, values })),
    contrasts: Object.entries(contrasts).map(([name, weights]) => ({ name, weights })),
    highPass: 128,
    noise: { kind: 'ar1', rho: 0.3, rhoTr: 2 },
    ...more
  };
  return designReport(input);
}

function expectNoNaN(value: unknown): void {
  if (typeof value === 'number') expect(value).not.toBeNaN();
  else if (value && typeof value === 'object') Object.values(value).forEach(expectNoNaN);
}

describe('degenerate designs give 0 with a reason, never NaN and never an exception', () => {
  it('a condition without events', () => {
    const result = report({ A: a, B: new Float64Array(volumes) }, { A: [1, 0], B: [0, 1], 'A-B': [1, -1] });
    expectNoNaN(result);
    const [first, second, third] = result.contrasts;
    expect(first!.estimable).toBe(true);
    expect(second).toMatchObject({ estimable: false, efficiency: 0, confounded: ['B'] });
    expect(second!.reason).toBe(
      'No event of “B” reaches a volume. Place one on the run, or leave it out of the contrast.'
    );
    expect(third).toMatchObject({ estimable: false, efficiency: 0, confounded: ['B'] });
    expect(result.rank).toBe(1);
    expect(result.condition).toBe(Infinity);
  });

  it('two identical conditions: A and B not, A + B yes', () => {
    const result = report({ A: a, B: a.slice(), C: b }, { A: [1, 0, 0], 'A+B': [1, 1, 0], C: [0, 0, 1] });
    expectNoNaN(result);
    expect(result.contrasts[0]).toMatchObject({ estimable: false, confounded: ['A', 'B'] });
    expect(result.contrasts[0]!.reason).toBe(
      '“A” and “B” cannot be told apart. Vary the order and gaps of their events, or model fewer columns.'
    );
    expect(result.contrasts[1]!.estimable).toBe(true);
    const merged = report({ A: a, C: b }, { A: [1, 0] });
    // (a+b)·x is one column with coefficient β_A + β_B.
    expectNear(result.contrasts[1]!.efficiency, merged.contrasts[0]!.efficiency);
    expect(result.vif.map(({ value }) => value === Infinity)).toEqual([true, true, false]);
  });

  it('A − B is estimable where A and B alone are not', () => {
    // Together the two conditions fill the run, so their sum is the constant.
    const square = Float64Array.from({ length: volumes }, (_, n) => (Math.floor(n / 8) % 2 === 0 ? 1 : 0));
    const rest = constant(volumes).map((value, n) => value - square[n]!);
    const result = report({ A: square, B: rest }, { A: [1, 0], B: [0, 1], 'A-B': [1, -1], 'A+B': [1, 1] });
    expectNoNaN(result);
    expect(result.contrasts.map(({ estimable }) => estimable)).toEqual([false, false, true, false]);
    expect(result.contrasts[2]!.efficiency).toBeGreaterThan(0);
    expect(result.contrasts[0]!.confounded).toEqual(['A', 'B', 'constant']);
    const alone = report({ A: square }, { A: [1] });
    // β_A − β_B is then the height of the square wave itself.
    expectNear(result.contrasts[2]!.efficiency, alone.contrasts[0]!.efficiency);
  });

  it('a condition that is itself drift', () => {
    const result = report({ A: a, slow: dctDrift(volumes, tr, 128)[1]! }, { slow: [0, 1] });
    expectNoNaN(result);
    expect(result.contrasts[0]).toMatchObject({ estimable: false, confounded: ['slow', 'drift 2'] });
    expect(result.contrasts[0]!.reason).toBe(
      '“slow” cannot be told from “drift 2”. Let it change faster than the drift does, or choose a longer cutoff.'
    );
  });

  it('more columns than volumes', () => {
    const few = 6;
    const columns = Object.fromEntries(
      Array.from({ length: 9 }, (_, j) => [
        `c${j}`,
        Float64Array.from({ length: few }, (_value, n) => Math.sin(1 + n * (j + 1)))
      ])
    );
    const weights = Array.from({ length: 9 }, (_, j) => (j === 0 ? 1 : 0));
    const result = report(columns, { c0: weights }, { volumes: few });
    expectNoNaN(result);
    expect(result.rank).toBe(5);
    expect(result.contrasts[0]!.efficiency).toBe(0);
  });

  it('no columns, no weights, one volume', () => {
    expectNoNaN(report({}, {}));
    expect(report({ A: a }, { none: [0] }).contrasts[0]!.reason).toMatch(
      /All weights are 0.*Give at least one/
    );
    const one = report({ A: Float64Array.of(3) }, { A: [1] }, { volumes: 1 });
    expect(one.contrasts[0]).toMatchObject({ estimable: false, confounded: ['A', 'constant'] });
  });

  it('a cutoff longer than the run leaves the constant alone', () => {
    const long: DesignReport = report({ A: a }, { A: [1] }, { highPass: 10_000 });
    const none = report({ A: a }, { A: [1] }, { highPass: null });
    expect(long.contrasts[0]!.efficiency).toBe(none.contrasts[0]!.efficiency);
  });
});

describe('volume times', () => {
  const contrasts = { A: [1, 0], 'A-B': [1, -1] };
  it('that are even say the same as a number of volumes', () => {
    const counted = report({ A: a, B: b }, contrasts);
    const listed = report({ A: a, B: b }, contrasts, { volumes: undefined, times });
    expect(listed).toEqual(counted);
  });

  it('of a clustered acquisition carry the noise over the silent gap', () => {
    // Three volumes a second apart, then five seconds of silence.
    const clustered = Float64Array.from({ length: volumes }, (_, n) => 8 * Math.floor(n / 3) + (n % 3));
    const more = { volumes: undefined, times: clustered, tr: 8 / 3 };
    const events = [10, 90, 170, 250].map((onset) => ({ onset, duration: 16 }));
    const values = regressor(events, h, clustered);
    const uneven = report({ A: values }, { A: [1] }, more);
    expect(uneven.contrasts[0]!.estimable).toBe(true);
    const v = Array.from(clustered, (s) => Array.from(clustered, (t) => 0.3 ** (Math.abs(s - t) / 2)));
    const nuisance = [constant(volumes), ...dctDriftAt(clustered, 128)];
    expectNear(uneven.information[0]![0]!, denseInformation([values], nuisance, v)[0]![0]!);
  });
});

describe('malformed input throws with value, expectation and way out', () => {
  const cases: [string, object, RegExp][] = [
    [
      'rho of 1',
      { noise: { kind: 'ar1', rho: 1, rhoTr: 2 } },
      /rho is 1; expected a number between −1 and 1/
    ],
    ['TR of 0', { tr: 0 }, /repetition time is 0; expected a number above 0\. Give the TR/],
    ['no volumes', { volumes: 0 }, /number of volumes is 0; expected a whole number of at least 1/],
    ['a cutoff of NaN', { highPass: NaN }, /high-pass cutoff is NaN/],
    ['an unknown noise', { noise: { kind: 'pink' } }, /noise model is “pink”/],
    ['another length', { volumes: 100 }, /length of column “A” is 120; expected 100 values/]
  ];
  it.each(cases)('%s', (_name, more, message) => {
    expect(() => report({ A: a }, { A: [1] }, more)).toThrow(EngineError);
    expect(() => report({ A: a }, { A: [1] }, more)).toThrow(message);
  });

  it('a gap in a column, a weight too few', () => {
    const gap = a.slice();
    gap[7] = NaN;
    expect(() => report({ A: gap }, {})).toThrow(/column “A” is NaN/);
    expect(() => report({ A: a, B: b }, { A: [1] })).toThrow(/number of weights of contrast “A” is 1/);
  });
});
