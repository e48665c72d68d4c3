import { describe, expect, it, vi } from 'vitest';
import { detectionColumns } from '$lib/engine/design/columns';
import { designReport } from '$lib/engine/design/report';
import { EngineError } from '$lib/engine/errors';
import { autocorrelationOf } from '$lib/engine/noise/autocorrelation';
import type { NoiseModel } from '$lib/engine/noise/model';
import { whitenerOf } from '$lib/engine/noise/whitener';
import { seeded } from '$lib/engine/random';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import { monteCarlo, noiseMaker, syntheticScan, type MonteCarloInput } from '$lib/engine/synthetic';

// Seconds of arithmetic, more on a machine that does other things as well.
vi.setConfig({ testTimeout: 60_000 });

const models: NoiseModel[] = [
  { kind: 'white' },
  { kind: 'ar1', rho: 0.5, rhoTr: 2 },
  { kind: 'ar1', rho: -0.4, rhoTr: 2 },
  { kind: 'ar1-white', rho: 0.7, rhoTr: 2, share: 0.6 },
  { kind: 'one-over-f', exponent: 0.8 },
  { kind: 'given', correlations: [0.5, 0.3, 0.1] }
];

describe('noise of each model', () => {
  it.each(models.map((model) => [JSON.stringify(model), model] as const))(
    '%s has its autocorrelation',
    (_name, model) => {
      const volumes = 40;
      const base = { tr: 2, volumes, times: null };
      const make = noiseMaker(model, base);
      const random = seeded('autocorrelation');
      const wanted = autocorrelationOf(model, 2, volumes);
      const draws = 6000;
      const found = new Float64Array(4);
      for (let i = 0; i < draws; i++) {
        const x = make(random);
        for (let lag = 0; lag < 4; lag++)
          for (let t = 0; t + lag < volumes; t++)
            found[lag]! += (x[t]! * x[t + lag]!) / (draws * (volumes - lag));
      }
      // Each is a mean over at least 6000 · 37 products, correlated within a draw: 0.02 is above four standard errors.
      for (let lag = 0; lag < 4; lag++) expect(Math.abs(found[lag]! - wanted[lag]!)).toBeLessThan(0.02);
    }
  );

  it('comes out white when whitened, and the same for a seed', () => {
    for (const model of models) {
      const base = { tr: 2, volumes: 30, times: null };
      const make = noiseMaker(model, base);
      const whitener = whitenerOf(model, base);
      const random = seeded('white');
      let variance = 0;
      let neighbours = 0;
      for (let i = 0; i < 2000; i++) {
        const z = whitener.apply(make(random));
        for (let t = 1; t < 30; t++) {
          variance += (z[t]! * z[t]!) / (2000 * 29);
          neighbours += (z[t]! * z[t - 1]!) / (2000 * 29);
        }
      }
      // Four standard errors: √2/√58,000 and 1/√58,000; 1/f has lost its mean, a thirtieth of the variance.
      const expected = model.kind === 'one-over-f' ? 29 / 30 : 1;
      expect(Math.abs(variance - expected)).toBeLessThan(0.025);
      expect(Math.abs(neighbours - (expected - 1))).toBeLessThan(0.02);
      expect(make(seeded('s'))).toEqual(make(seeded('s')));
    }
  });

  it('AR(1) follows uneven times; other models refuse them', () => {
    const times = [0, 1, 5, 6];
    const base = { tr: 2, volumes: 4, times };
    const make = noiseMaker({ kind: 'ar1', rho: 0.5, rhoTr: 2 }, base);
    const random = seeded('uneven');
    const products = [0, 0, 0];
    for (let i = 0; i < 20_000; i++) {
      const x = make(random);
      for (let t = 1; t < 4; t++) products[t - 1]! += (x[t]! * x[t - 1]!) / 20_000;
    }
    // ρ^(distance/2 s); four standard errors of 20,000 products are below 0.04.
    [1, 4, 1].forEach((distance, k) =>
      expect(Math.abs(products[k]! - 0.5 ** (distance / 2))).toBeLessThan(0.04)
    );
    expect(() => noiseMaker({ kind: 'one-over-f', exponent: 1 }, base)).toThrow(EngineError);
    expect(() => noiseMaker({ kind: 'given', correlations: [0.1] }, base)).toThrow(EngineError);
    expect(() =>
      noiseMaker({ kind: 'given', correlations: [0.9, -0.9] }, { tr: 2, volumes: 9, times: null })
    ).toThrow(/positive definite/);
  });
});

function smallStudy(changes: Partial<MonteCarloInput> = {}): MonteCarloInput {
  const volumes = 100;
  const times = Float64Array.from({ length: volumes }, (_, n) => 2 * n + 1);
  const random = seeded('events');
  const events = () => Array.from({ length: 14 }, () => ({ onset: random.int(90) * 2, duration: 0 }));
  return {
    tr: 2,
    volumes,
    columns: detectionColumns(
      [
        { name: 'A', events: events() },
        { name: 'B', events: events() }
      ],
      doubleGamma(),
      times
    ),
    effects: [0.5, 0.2],
    contrasts: [
      { name: 'A', weights: [1, 0] },
      { name: 'A − B', weights: [1, -1] }
    ],
    highPass: 128,
    noise: { kind: 'ar1', rho: 0.4, rhoTr: 2 },
    noiseSd: 1,
    runs: 200,
    seed: 'coverage',
    ...changes
  };
}

describe('made-up scans', () => {
  it('without noise is the signal itself', () => {
    const study = smallStudy({ noiseSd: 0 });
    const make = noiseMaker(study.noise, { tr: 2, volumes: 100, times: null });
    const y = syntheticScan(study, make, seeded('x'));
    y.forEach((value, n) =>
      expect(value).toBeCloseTo(
        100 + 0.5 * study.columns[0]!.values[n]! + 0.2 * study.columns[1]!.values[n]!,
        12
      )
    );
  });

  it.each(models.map((noise) => [JSON.stringify(noise), noise] as const))(
    'with known noise %s: no bias, honest spread, 95 %% coverage over 200 scans',
    (_name, noise) => {
      const study = smallStudy({ noise });
      const results = monteCarlo(study);
      const report = designReport({ ...study, contrasts: [...study.contrasts] });
      results.forEach(({ truth, bias, biasError, spread, reportedSpread, coverage }, i) => {
        expect(truth).toBeCloseTo([0.5, 0.3][i]!, 14);
        expect(Math.abs(bias)).toBeLessThan(4 * biasError);
        // The spread of 200 estimates has a relative standard error of 1/√400 = 5 %.
        expect(Math.abs(spread / reportedSpread - 1)).toBeLessThan(0.2);
        expect(Math.abs(spread * Math.sqrt(report.contrasts[i]!.efficiency) - 1)).toBeLessThan(0.2);
        // 200 scans: standard error of a share of 0.95 is 1.5 %; four of them. 2,000 scans stand in the bench.
        expect(Math.abs(coverage - 0.95)).toBeLessThan(0.062);
      });
    }
  );

  it('with rho found from each scan, reported beside it', () => {
    const [a] = monteCarlo(smallStudy({ knowledge: 'reml', runs: 60 }));
    expect(Math.abs(a!.bias)).toBeLessThan(4 * a!.biasError);
    expect(a!.coverage).toBeGreaterThan(0.8);
  }, 60_000);

  it('repeats for a seed', () => {
    const study = smallStudy({ runs: 5 });
    expect(monteCarlo(study)).toEqual(monteCarlo(study));
    expect(monteCarlo({ ...study, seed: 'other' })).not.toEqual(monteCarlo(study));
  });

  it('gives 0 where a contrast cannot be estimated', () => {
    const study = smallStudy({ runs: 3 });
    const [b] = monteCarlo({
      ...study,
      columns: [study.columns[0]!, { name: 'B', values: new Float64Array(100) }],
      contrasts: [{ name: 'B', weights: [0, 1] }]
    });
    expect(b).toMatchObject({ bias: 0, spread: 0, coverage: 0 });
  });

  it('refuses malformed input', () => {
    const make = noiseMaker({ kind: 'white' }, { tr: 2, volumes: 100, times: null });
    for (const call of [
      () => monteCarlo(smallStudy({ runs: 1 })),
      () => monteCarlo(smallStudy({ noiseSd: -1 })),
      () => monteCarlo(smallStudy({ effects: [1] })),
      () => monteCarlo(smallStudy({ noise: { kind: 'ar1', rho: 1, rhoTr: 2 } })),
      () => syntheticScan(smallStudy({ effects: [NaN, 1] }), make, seeded('x')),
      () =>
        syntheticScan(
          smallStudy(),
          noiseMaker({ kind: 'white' }, { tr: 2, volumes: 9, times: null }),
          seeded('x')
        )
    ])
      expect(call).toThrow(EngineError);
  });
});
