import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

/**
 * The language leaves the last bit of these to each browser; the engine's results must not depend on it.
 * `**` is `Math.pow`.
 */
const LOOSE =
  /Math\.(exp|expm1|log|log1p|log2|log10|pow|sin|cos|tan|asin|acos|atan|atan2|sinh|cosh|tanh|hypot|cbrt)\b|\*\*/;
/** Only draws the phase of a spectrum. */
const ALLOWED = ['response/gamma-mixture.ts: Math.atan'];

const files = Object.keys(
  import.meta.glob('/src/lib/engine/{convolution,design,linalg,noise,response}/*.ts')
);

describe('the engine’s numbers are built from the same bits everywhere', () => {
  it('looks at all its files', () => expect(files.length).toBeGreaterThan(40));

  it.each(files)('%s', (path) => {
    const text = readFileSync(new URL(`../../..${path}`, import.meta.url), 'utf8');
    const code = text.replace(/\/\*[\s\S]*?\*\//g, '').replace(/\/\/.*$/gm, '');
    const name = path.replace('/src/lib/engine/', '');
    const found = [...code.matchAll(new RegExp(LOOSE, 'g'))].map(([call]) => `${name}: ${call}`);
    expect(found.filter((one) => !ALLOWED.includes(one))).toEqual([]);
  });
});
