/**
 * The examples in the doc blocks of these rooms are run: `@example expression // result` must give that result to the
 * digits shown.
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

const sources = import.meta.glob(
  '/src/lib/engine/{sequence,power,distribution,estimation,synthetic,search}/*.ts'
);
const random = import.meta.glob('/src/lib/engine/random.ts');
const modules = await Promise.all(Object.values({ ...sources, ...random }).map((load) => load()));
const scope: Record<string, unknown> = Object.assign({}, ...modules);

const examples = Object.keys(sources).flatMap((path) => {
  const text = readFileSync(new URL(`../../..${path}`, import.meta.url), 'utf8');
  return [...text.matchAll(/@example (.+?) \/\/ (.+)/g)].map(([, expression, result]) => ({
    name: `${path.replace('/src/lib/engine/', '')}: ${expression}`,
    expression: expression!,
    result: result!
  }));
});

const evaluate = (expression: string): unknown =>
  new Function(...Object.keys(scope), `return (${expression});`)(...Object.values(scope));
const flat = (value: unknown): number[] =>
  typeof value === 'number' ? [value] : Array.from(value as ArrayLike<unknown>).flatMap(flat);

describe('examples in doc blocks', () => {
  it('are there', () => expect(examples.length).toBeGreaterThan(20));

  it.each(examples)('$name', ({ expression, result }) => {
    const shown = [...result.matchAll(/-?\d+(?:\.(\d+))?/g)];
    const got = flat(evaluate(expression));
    expect(got).toHaveLength(shown.length);
    shown.forEach(([text, decimals], i) => {
      // Half a unit of the last digit shown, and what binary makes of it.
      const allowed = decimals ? 0.5 * 10 ** -decimals.length : 0;
      expect(Math.abs(got[i]! - Number(text))).toBeLessThanOrEqual(allowed + 1e-15 * Math.abs(Number(text)));
    });
  });
});
