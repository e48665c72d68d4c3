/** A power cut during a run: the browser is killed, and the reopened bundle offers the unfinished run. */
import { expect, test } from '@playwright/test';
import { sha256Hex } from '../../src/lib/task/canonical';
import { sampleFolder } from './support/bundle-folder';
import { killTrial } from './support/killed-browser';

for (const after of [2230, 3710, 5160])
  test(`killed ${after} ms into a run: every key older than 50 ms is there`, async () => {
    const bundle = await sampleFolder({ volumes: 60 });
    try {
      const { pressed, found, pulses, pulsesFound, lines } = await killTrial(bundle, after);
      expect(pressed).toBeGreaterThan(10);
      expect(found).toBeGreaterThanOrEqual(pressed);
      expect(pulsesFound).toBeGreaterThanOrEqual(pulses);
      expect(lines[0]).toMatchObject({ type: 'header', participant: '07' });
      expect(lines.at(-1)).toMatchObject({ type: 'end', state: 'recovered' });
      const sealed = lines.slice(0, -1).map((line) => `${JSON.stringify(line)}\n`);
      expect(lines.at(-1)!.sha256).toBe(sha256Hex(sealed.join('')));
    } finally {
      bundle.remove();
    }
  });
