/** Coverage of 95 % intervals in made-up scans: 2,000 with the noise known, 400 with rho estimated from each scan. */
import { volumeTimes } from '../../../src/lib/engine/convolution/times';
import { detectionColumns } from '../../../src/lib/engine/design/columns';
import type { NoiseModel } from '../../../src/lib/engine/noise/model';
import { seeded } from '../../../src/lib/engine/random';
import { doubleGamma } from '../../../src/lib/engine/response/double-gamma';
import { monteCarlo, type MonteCarloInput } from '../../../src/lib/engine/synthetic';
import type { BenchPart, BenchRow } from '../types';

function study(noise: NoiseModel, runs: number): MonteCarloInput {
  const tr = 2;
  const volumes = 150;
  const random = seeded('coverage events');
  const events = () => Array.from({ length: 20 }, () => ({ onset: random.int(270), duration: 0 }));
  const conditions = ['A', 'B'].map((name) => ({ name, events: events() }));
  return {
    tr,
    volumes,
    columns: detectionColumns(conditions, doubleGamma(), volumeTimes({ tr, volumes })),
    effects: [0.5, 0.3],
    contrasts: [{ name: 'A − B', weights: [1, -1] }],
    highPass: 128,
    noise,
    noiseSd: 1,
    runs,
    seed: 'bench'
  };
}

export async function syntheticBench(): Promise<BenchRow[]> {
  const rows: BenchRow[] = [];
  const row = (name: string, value: number, unit: string, more: Partial<BenchRow> = {}) =>
    rows.push({ part: 'synthetic', name, value, unit, aim: null, better: 'lower', against: null, ...more });
  const models: [string, NoiseModel][] = [
    ['white', { kind: 'white' }],
    ['AR(1) 0.3', { kind: 'ar1', rho: 0.3, rhoTr: 2 }],
    ['AR(1) + white', { kind: 'ar1-white', rho: 0.6, rhoTr: 2, share: 0.5 }],
    ['1/f', { kind: 'one-over-f', exponent: 0.8 }],
    ['given', { kind: 'given', correlations: [0.4, 0.2, 0.1] }]
  ];
  for (const [name, noise] of models) {
    const [result] = monteCarlo(study(noise, 2000));
    // Promised: between 93.5 and 96.5 %.
    row(
      `coverage of 95 % intervals, ${name} known, 2,000 scans: off 95 % by`,
      Math.abs(result!.coverage - 0.95) * 100,
      '%',
      {
        aim: 1.5
      }
    );
    row(`… bias in its standard errors`, Math.abs(result!.bias / result!.biasError), 's.e.');
  }
  const [estimated] = monteCarlo({ ...study({ kind: 'ar1', rho: 0.3, rhoTr: 2 }, 400), knowledge: 'reml' });
  row('coverage with rho estimated (REML), 400 scans', estimated!.coverage * 100, '%', { better: 'higher' });
  return rows;
}

export default { name: 'synthetic', run: syntheticBench } satisfies BenchPart;
