import { describe, expect, it } from 'vitest';
import { peakScale } from '$lib/engine/convolution/peak-scale';
import { regressor } from '$lib/engine/convolution/regressor';
import { volumeTimes } from '$lib/engine/convolution/times';
import { designReport } from '$lib/engine/design/report';
import type { NoiseModel } from '$lib/engine/noise/model';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import reference from '../../fixtures/reference/designs.json';
import vifReference from '../../fixtures/reference/vif.json';
import { expectNear } from './near';

const designs = reference.efficiency_designs;
const h = doubleGamma();
const tr = 2;
const volumes = 200;
const start = volumeTimes({ tr, volumes, sliceReference: 0 });

const settings: [string, number | null, NoiseModel][] = [
  ['const | white', null, { kind: 'white' }],
  ['const | ar1_0.3', null, { kind: 'ar1', rho: 0.3, rhoTr: 2 }],
  ['const+dct128 | white', 128, { kind: 'white' }],
  ['const+dct128 | ar1_0.3', 128, { kind: 'ar1', rho: 0.3, rhoTr: 2 }]
];

function impulses(onsetVolumes: readonly number[], times: ArrayLike<number> = start) {
  const events = onsetVolumes.map((volume) => ({ onset: volume * tr, duration: 0 }));
  return regressor(events, h, times, peakScale(h, 0));
}

function blocks(times: ArrayLike<number> = start) {
  const events = designs.block16.block_onsets_volumes.map((volume) => ({ onset: volume * tr, duration: 16 }));
  return regressor(events, h, times, peakScale(h, 0));
}

describe('efficiency of the four small designs (statsmodels, R, whitened OLS, direct formula)', () => {
  it.each(settings)('%s', (setting, highPass, noise) => {
    const key = setting as 'const | white';
    const single = (values: Float64Array) =>
      designReport({
        tr,
        volumes,
        columns: [{ name: 'A', values }],
        contrasts: [{ name: 'A', weights: [1] }],
        highPass,
        noise
      });
    for (const name of ['fixed20', 'jitter'] as const) {
      const expected = designs[name][key]['canonical:impulse_peak1'];
      const report = single(impulses(designs[name].onset_volumes.A));
      expectNear(report.contrasts[0]!.efficiency, expected.efficiency_1_over_cMinvc.A);
      expectNear(report.information[0]![0]!, expected.information[0]![0]!);
    }
    const block = designs.block16[key];
    expectNear(
      single(blocks()).contrasts[0]!.efficiency,
      block['canonical:boxcar_integral_peak1'].efficiency_1_over_cMinvc.A
    );
    const toUnit = blocks().map((value) => value / designs.block16.boxcar_max_over_samples);
    expectNear(
      single(toUnit).contrasts[0]!.efficiency,
      block['canonical:boxcar_unit_max'].efficiency_1_over_cMinvc.A
    );
  });

  it.each(settings)('random2, its contrasts and information: %s', (setting, highPass, noise) => {
    const expected = designs.random2[setting as 'const | white']['canonical:impulse_peak1'];
    const report = random2(highPass, noise);
    for (const contrast of report.contrasts) {
      const name = contrast.name as keyof typeof expected.efficiency_1_over_cMinvc;
      expect(contrast.estimable).toBe(true);
      expectNear(contrast.efficiency, expected.efficiency_1_over_cMinvc[name]);
    }
    expected.information.forEach((row, i) =>
      row.forEach((value, j) => expectNear(report.information[i]![j]!, value))
    );
  });

  it('with volumes modelled at their middle', () => {
    const middle = volumeTimes({ tr, volumes });
    const expected = designs['canonical_phi0.5_const+dct128_ar1_0.3'];
    const report = designReport({
      tr,
      volumes,
      columns: [
        { name: 'events', values: impulses(designs.fixed20.onset_volumes.A, middle) },
        { name: 'blocks', values: blocks(middle) }
      ],
      contrasts: [],
      highPass: 128,
      noise: { kind: 'ar1', rho: 0.3, rhoTr: 2 }
    });
    // Each stands for a design of its own: its diagonal entry is its efficiency.
    expectNear(report.information[0]![0]!, expected.fixed20.A);
    expectNear(report.information[1]![1]!, expected.block16.A);
  });
});

describe('variance inflation and correlation (statsmodels)', () => {
  const expected = vifReference.vif;

  it('of random2, with the constant and with drift', () => {
    const white = { kind: 'white' } as const;
    const plain = random2(null, white);
    const drifting = random2(128, white);
    expectNear(plain.correlations[0]![1]!, expected.correlation_A_B);
    for (const report of [plain, drifting])
      report.vifConditions.forEach(({ value }) => expectNear(value, expected.two_columns_const.A));
    expectNear(plain.vif[0]!.value, expected.two_columns_const.A);
    expectNear(drifting.vif[0]!.value, expected.two_columns_const_dct.A);
    expectNear(drifting.vif[1]!.value, expected.two_columns_const_dct.B);
  });

  it('of the tiny example: 196/187', () => {
    const { x1, x2, vif, r } = expected.tiny_example;
    const report = designReport({
      tr: 1,
      volumes: 8,
      columns: [
        { name: 'x1', values: Float64Array.from(x1) },
        { name: 'x2', values: Float64Array.from(x2) }
      ],
      contrasts: [],
      highPass: null,
      noise: { kind: 'white' }
    });
    expectNear(report.vif[0]!.value, vif[0]!, 0, 1e-14);
    expectNear(report.vif[1]!.value, 196 / 187, 0, 1e-14);
    expectNear(report.correlations[1]![0]!, r, 0, 1e-14);
  });
});

function random2(highPass: number | null, noise: NoiseModel) {
  return designReport({
    tr,
    volumes,
    columns: [
      { name: 'A', values: impulses(designs.random2.onset_volumes.A) },
      { name: 'B', values: impulses(designs.random2.onset_volumes.B) }
    ],
    contrasts: [
      { name: 'A', weights: [1, 0] },
      { name: 'B', weights: [0, 1] },
      { name: 'A-B', weights: [1, -1] },
      { name: 'A+B', weights: [1, 1] },
      { name: '(A+B)/2', weights: [0.5, 0.5] }
    ],
    highPass,
    noise
  });
}
