/** Twenty power cuts: see `tests/e2e/bundle-kill.realtime.e2e.ts` for what is promised. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { sampleFolder, type BundleFolder } from '../e2e/support/bundle-folder';
import { killTrial } from '../e2e/support/killed-browser';

describe('a browser killed during a run', () => {
  let bundle: BundleFolder;
  beforeAll(async () => {
    bundle = await sampleFolder({ volumes: 60 });
  }, 60_000);
  afterAll(() => bundle?.remove());

  // From one to nearly nine seconds in, each at another distance from the last key and pulse.
  const moments = Array.from({ length: 20 }, (_, trial) => 1000 + trial * 413);
  it.each(moments)(
    'after %i ms keeps every key older than 50 ms',
    async (after) => {
      const { pressed, found, pulses, pulsesFound, lines } = await killTrial(bundle, after);
      expect(pressed).toBeGreaterThan(0);
      expect(found).toBeGreaterThanOrEqual(pressed);
      expect(pulsesFound).toBeGreaterThanOrEqual(pulses);
      expect(lines.at(-1)).toMatchObject({ type: 'end', state: 'recovered' });
    },
    90_000
  );
});
