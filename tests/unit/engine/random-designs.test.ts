import { describe, expect, it } from 'vitest';
import { regressor } from '$lib/engine/convolution/regressor';
import { volumeTimes } from '$lib/engine/convolution/times';
import { designReport } from '$lib/engine/design/report';
import type { NoiseModel } from '$lib/engine/noise/model';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import reference from '../../fixtures/reference/random-designs.json';
import { expectAllNear, expectNear } from './near';

const h = doubleGamma();

describe('random designs: any TR, timing, durations, heights, noise (SciPy and NumPy, the long way)', () => {
  it.each(reference.cases.map((one, i) => [`${i}: TR ${one.timing.tr} s, ${one.noise.kind}`, one] as const))(
    '%s',
    (_name, one) => {
      const times = volumeTimes(one.timing);
      const columns = one.conditions.map((events, j) => ({
        name: `c${j}`,
        values: regressor(
          events.map(([onset, duration, height]) => ({
            onset: onset!,
            duration: duration!,
            height: height!
          })),
          h,
          times
        )
      }));
      columns.forEach(({ values }, j) => {
        const scale = Math.max(...values.map(Math.abs));
        expectAllNear(
          one.probe.map((n) => values[n]!),
          one.columns_at_probe[j]!,
          scale
        );
        expectNear(
          values.reduce((sum, value) => sum + value, 0),
          one.sums[j]!,
          scale
        );
      });
      const report = designReport({
        tr: one.timing.tr,
        volumes: one.timing.volumes,
        columns,
        contrasts: one.contrasts.map((weights, i) => ({ name: `${i}`, weights })),
        highPass: one.highPass,
        noise: one.noise as NoiseModel
      });
      expect(report.rank).toBe(columns.length);
      report.contrasts.forEach(({ efficiency }, i) => expectNear(efficiency, one.efficiency[i]!));
      report.vif.forEach(({ value }, j) => expectNear(value, one.vif[j]!));
      report.correlations.forEach((row, i) => expectAllNear(row, one.correlations[i]!, 1));
    }
  );
});
