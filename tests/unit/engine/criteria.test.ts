import { describe, expect, it } from 'vitest';
import { volumeTimes } from '$lib/engine/convolution/times';
import { aliasesOf } from '$lib/engine/design/aliases';
import { bestBlockLength, blockEfficiency, relativeEfficiency } from '$lib/engine/design/block-reference';
import { basisColumns, detectionColumns, estimationColumns } from '$lib/engine/design/columns';
import { criteriaOf, detectionPower, identityRows, overMembers } from '$lib/engine/design/criteria';
import { ordinaryReport } from '$lib/engine/design/ordinary';
import { designReport } from '$lib/engine/design/report';
import { rowSpaceOf } from '$lib/engine/design/row-space';
import { twoAims } from '$lib/engine/design/two-aims';
import { eigenSymmetric } from '$lib/engine/linalg/eigen';
import type { NoiseModel } from '$lib/engine/noise/model';
import { doubleGammaWithDerivatives } from '$lib/engine/response/bases';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import reference from '../../fixtures/reference/designs.json';
import theory from '../../fixtures/reference/theory.json';
import vifReference from '../../fixtures/reference/vif.json';
import { expectAllNear, expectNear } from './near';

const designs = reference.efficiency_designs;
const tr = 2;
const volumes = 200;
const start = volumeTimes({ tr, volumes, sliceReference: 0 });
const lags = designs.settings.fir_lags;
const h0 = designs.settings.h0_canonical_peak1_at_lags;
const white: NoiseModel = { kind: 'white' };
const ar: NoiseModel = { kind: 'ar1', rho: 0.3, rhoTr: 2 };
const settings: [string, number | null, NoiseModel][] = [
  ['const | white', null, white],
  ['const | ar1_0.3', null, ar],
  ['const+dct128 | white', 128, white],
  ['const+dct128 | ar1_0.3', 128, ar]
];
const events = (onsetVolumes: readonly number[]) =>
  onsetVolumes.map((volume) => ({ onset: volume * tr, duration: 0 }));

function estimation(
  conditions: Record<string, readonly number[]>,
  highPass: number | null,
  noise: NoiseModel,
  k = lags
) {
  const list = Object.entries(conditions).map(([name, onsets]) => ({ name, events: events(onsets) }));
  const columns = estimationColumns(list, k, tr, start);
  return designReport({ tr, volumes, columns, contrasts: [], highPass, noise });
}

describe('estimation: FIR designs (statsmodels, R, direct formula)', () => {
  it.each(settings)('one condition: %s', (setting, highPass, noise) => {
    for (const name of ['fixed20', 'jitter', 'block16'] as const) {
      const expected = designs[name][setting as 'const | white'].fir;
      const { information } = estimation({ A: designs[name].onset_volumes.A }, highPass, noise);
      const space = rowSpaceOf(information);
      const { a, d, reason } = criteriaOf(space, identityRows(lags));
      expect(reason).toBeNull();
      expectNear(a, expected.A_efficiency_r_over_trace);
      expectNear(d, expected.D_efficiency);
      expectNear(detectionPower(information, h0), expected.detection_power_R);
      expectNear(
        information.reduce((sum, row, i) => sum + row[i]!, 0),
        expected.trace_of_information
      );
    }
  });

  it.each(settings)('two conditions and their contrasts: %s', (setting, highPass, noise) => {
    const expected = designs.random2[setting as 'const | white'].fir;
    const { information } = estimation(designs.random2.onset_volumes, highPass, noise);
    const space = rowSpaceOf(information);
    const all = criteriaOf(space, identityRows(2 * lags));
    expectNear(all.a, expected.A_efficiency_r_over_trace);
    expectNear(all.d, expected.D_efficiency);
    for (const [weights, contrast] of [
      [[1, 0], expected.contrast_A],
      [[0, 1], expected.contrast_B],
      [[1, -1], expected.contrast_A_minus_B]
    ] as const) {
      const { a, d } = criteriaOf(space, overMembers(weights, lags));
      expectNear(a, contrast.A_efficiency_r_over_trace);
      expectNear(d, contrast.D_efficiency);
    }
  });

  it.each(settings)(
    'shape fixed to the response at the lags, and the range of eigenvalues: %s',
    (setting, highPass, noise) => {
      const expected = designs.random2[setting as 'const | white'].fir;
      const { information } = estimation(designs.random2.onset_volumes, highPass, noise);
      const { values } = eigenSymmetric(information);
      expectNear(values[0]!, expected.max_eig_of_information);
      expectNear(values.at(-1)!, expected.min_eig_of_information);
      // Weighing the lags by h₀ turns each condition's eight columns into one.
      const fixed = [0, 1].map((i) =>
        [0, 1].map((j) =>
          h0.reduce(
            (sum, a, k) =>
              sum + h0.reduce((rest, b, l) => rest + a * b * information[i * lags + k]![j * lags + l]!, 0),
            0
          )
        )
      );
      const space = rowSpaceOf(fixed);
      expectNear(criteriaOf(space, [[1, 0]]).a, expected.shape_fixed_to_h0.A);
      expectNear(criteriaOf(space, [[0, 1]]).a, expected.shape_fixed_to_h0.B);
      expectNear(criteriaOf(space, [[1, -1]]).a, expected.shape_fixed_to_h0['A-B']);
    }
  );

  it('both aims at once, over runs', () => {
    const conditions = Object.entries(designs.random2.onset_volumes).map(([name, at]) => ({
      name,
      events: events(at)
    }));
    const run = { tr, volumes, modelledAt: start, conditions, highPass: 128, noise: ar };
    const one = twoAims([run], doubleGamma(), 16);
    const { contrasts } = designReport({
      ...run,
      columns: detectionColumns(conditions, doubleGamma(), start),
      contrasts: [
        [1, 0],
        [0, 1],
        [1, -1]
      ].map((weights) => ({ name: `${weights}`, weights }))
    });
    expectNear(one.detection.a, 3 / contrasts.reduce((sum, { efficiency }) => sum + 1 / efficiency, 0));
    const expected = designs.random2['const+dct128 | ar1_0.3'].fir;
    expectNear(one.estimation.d, expected.D_efficiency);
    const traces = [expected.contrast_A, expected.contrast_B, expected.contrast_A_minus_B];
    expectNear(one.estimation.a, 24 / traces.reduce((sum, { trace_of_covariance: trace }) => sum + trace, 0));
    const two = twoAims([run, run], doubleGamma(), 16);
    expectNear(two.detection.a, 2 * one.detection.a);
    expectNear(two.estimation.d, 2 * one.estimation.d);
  });

  it('ten lags of 2 s every 20 s: rank 10 of 11 with the constant, and the columns are named', () => {
    const trap = designs.trap_fixed20_fir_10_lags;
    const report = estimation({ A: designs.fixed20.onset_volumes.A }, null, white, 10);
    expect(report.rank + 1).toBe(trap.rank_with_constant);
    const names = report.vif.map(({ name }) => name);
    const [alias, ...more] = aliasesOf(rowSpaceOf(report.information), names);
    expect(more).toEqual([]);
    expect(alias!.columns).toEqual(names);
    expectAllNear(alias!.weights, new Array<number>(10).fill(1), 1, 1e-6);
    expect(criteriaOf(rowSpaceOf(report.information), identityRows(10))).toMatchObject({ a: 0, d: 0 });
  });

  it('without null events no lag of A or B can be estimated, but their difference can (published statement)', () => {
    const slots = Array.from({ length: 100 }, (_, i) => 2 * i);
    const isA = (i: number) => (i * i + Math.floor(i / 3)) % 5 < 2;
    const onsets = {
      A: slots.filter((_, i) => isA(i)),
      B: slots.filter((_, i) => !isA(i))
    };
    const space = rowSpaceOf(estimation(onsets, null, white).information);
    expect(criteriaOf(space, overMembers([1, 0], lags)).a).toBe(0);
    expect(criteriaOf(space, overMembers([1, -1], lags)).a).toBeGreaterThan(0);
  });

  it('contrasts that depend on each other have an A but no D', () => {
    const space = rowSpaceOf([
      [2, 0],
      [0, 3]
    ]);
    const rows = [
      [1, 0],
      [0, 1],
      [1, -1]
    ];
    const result = criteriaOf(space, rows);
    expectNear(result.a, 3 / (1 / 2 + 1 / 3 + 5 / 6), 0, 1e-14);
    expect(result.d).toBe(0);
    expect(result.reason).toMatch(/depend on each other/);
  });
});

describe('ordinary least squares under AR(1) (statsmodels, R)', () => {
  it.each(settings.filter(([, , noise]) => noise.kind === 'ar1'))('%s', (setting, highPass, noise) => {
    const key = setting as 'const | ar1_0.3';
    const cases = [
      [designs.fixed20[key]['canonical:impulse_peak1'], { A: designs.fixed20.onset_volumes.A }],
      [designs.jitter[key]['canonical:impulse_peak1'], { A: designs.jitter.onset_volumes.A }],
      [designs.random2[key]['canonical:impulse_peak1'], designs.random2.onset_volumes]
    ] as const;
    for (const [{ ols_under_ar1: expected, efficiency_1_over_cMinvc: best }, onsets] of cases) {
      const list = Object.entries(onsets).map(([name, at]) => ({ name, events: events(at) }));
      const columns = detectionColumns(list, doubleGamma(), start);
      const report = ordinaryReport(
        { tr, volumes, columns, highPass, noise },
        [1, 0].slice(0, columns.length)
      );
      expectNear(report.efficiency, expected.efficiency_A);
      expect(report.efficiency).toBeLessThan(best.A);
      expectNear(report.traceRV, expected.trace_RV);
      expectNear(report.effectiveDf, expected.satterthwaite_df);
      expect(report.nominalDf).toBe(expected.nominal_df);
    }
  });
});

describe('variance inflation of six columns with derivatives (statsmodels)', () => {
  const expected = vifReference.vif;
  const peak = doubleGamma().peak.value;
  const conditions = Object.entries(designs.random2.onset_volumes).map(([name, onsets]) => ({
    name,
    events: events(onsets).map((event) => ({ ...event, height: 1 / peak }))
  }));
  const columns = basisColumns(conditions, doubleGammaWithDerivatives(), start);

  it.each([
    ['constant', null, expected.six_columns_const],
    ['constant and drift', 128, expected.six_columns_const_dct]
  ] as const)('%s', (_name, highPass, values) => {
    const report = designReport({ tr, volumes, columns, contrasts: [], highPass, noise: white });
    expectAllNear(
      report.vif.map(({ value }) => value),
      values
    );
    report.correlations.forEach((row, i) => expectAllNear(row, expected.six_columns_correlation[i]!, 1));
  });
});

describe('block length (reference values: GLS by two routes)', () => {
  const modelledAt = volumeTimes({ tr: 1, volumes: 640, sliceReference: 0 });
  const base = { tr: 1, volumes: 640, modelledAt, response: doubleGamma({ length: Infinity }) };
  it.each([
    ['const | white', null, white],
    ['const+dct128 | white', 128, white],
    ['const | ar1_0.5_per_s', null, { kind: 'ar1', rho: 0.5, rhoTr: 1 }],
    ['const+dct128 | ar1_0.5_per_s', 128, { kind: 'ar1', rho: 0.5, rhoTr: 1 }]
  ] as [string, number | null, NoiseModel][])('%s', (key, highPass, noise) => {
    const expected = theory.efficiency_theory.block_length.values[key as 'const | white'];
    const table = Object.entries(expected.efficiency_by_block_length_s);
    const lengths = table.map(([length]) => Number(length));
    const result = bestBlockLength(lengths, { ...base, highPass, noise });
    table.forEach(([, efficiency], i) => expectNear(result.efficiencies[i]!.efficiency, efficiency));
    expect(result.length).toBe(expected.best_of_these_s);
  });
});

describe('relative efficiency against 16 s blocks of the same run', () => {
  const setting = { tr, volumes, modelledAt: start, response: doubleGamma(), highPass: 128, noise: ar };

  it('is 1 for that design itself', () => {
    const efficiency = blockEfficiency([1], setting);
    // 16 s on, 16 s off: the reference design, its response scaled to peak 1 (0.95375 s·peak, 16 s being past 12.07 s).
    expect(relativeEfficiency({ name: 'A', weights: [1] }, efficiency, setting)).toBe(1);
    const single = 0.9537502801288263 / doubleGamma().peak.value;
    const expected = designs.block16['const+dct128 | ar1_0.3']['canonical:boxcar_integral_peak1'];
    const scaled = expected.efficiency_1_over_cMinvc.A / single ** 2;
    // The kernel ends at 32 s there and here alike; that design stops its last block at the 13th, as this one does.
    expectNear(efficiency, scaled, 0, 1e-9);
  });

  it('puts brief events every 20 s below blocks, and is 0 where nothing can be estimated', () => {
    const columns = detectionColumns(
      [{ name: 'A', events: events(designs.fixed20.onset_volumes.A) }],
      doubleGamma(),
      start
    );
    const contrast = { name: 'A', weights: [1] };
    const { contrasts } = designReport({ ...setting, columns, contrasts: [contrast] });
    const relative = relativeEfficiency(contrast, contrasts[0]!.efficiency, setting);
    expect(relative).toBeGreaterThan(0.5);
    expect(relative).toBeLessThan(1);
    expect(relativeEfficiency(contrast, 0, setting)).toBe(0);
  });

  it('lets a difference alternate without rest', () => {
    expect(blockEfficiency([1, -1], setting)).toBeGreaterThan(0);
    expect(() => blockEfficiency([0, 0], setting)).toThrow(/at least one weight/);
  });
});
