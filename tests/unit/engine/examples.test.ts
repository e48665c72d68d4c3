/**
 * The examples in the engine's doc blocks are run: `@example expression // result` must give that result, numbers to
 * the digits shown. A result in words ("321 values") is a length.
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

const rooms = '{convolution,design,linalg,noise,response}';
const sources = import.meta.glob('/src/lib/engine/{convolution,design,linalg,noise,response}/*.ts');
const borders = import.meta.glob('/src/lib/engine/{units,errors}.ts');
const modules = await Promise.all(Object.values({ ...sources, ...borders }).map((load) => load()));
const scope: Record<string, unknown> = Object.assign({}, ...modules);

interface Example {
  file: string;
  expression: string;
  result: string;
}

const examples: Example[] = Object.keys({ ...sources, ...borders }).flatMap((path) => {
  const text = readFileSync(new URL(`../../..${path}`, import.meta.url), 'utf8');
  return [...text.matchAll(/@example (.+?) \/\/ (.+)/g)].map(([, expression, result]) => ({
    file: path.replace('/src/lib/engine/', ''),
    expression: expression!,
    result: result!.replace(/\s*\*\/$/, '')
  }));
});

function evaluate(expression: string): unknown {
  const code = `return (${expression});`;
  return new Function(...Object.keys(scope), code)(...Object.values(scope));
}

/** `1, 3, 5` is a list, `heights −1 and 1` and `321 values` are words around numbers. */
function numbersOf(value: unknown): number[] {
  if (typeof value === 'number') return [value];
  if (value instanceof Float64Array || Array.isArray(value)) return Array.from(value).flatMap(numbersOf);
  if (value && typeof value === 'object') return Object.values(value).flatMap(numbersOf);
  return [];
}

describe(`examples of engine/${rooms}`, () => {
  it('are there', () => expect(examples.length).toBeGreaterThan(15));

  it.each(examples.map((one) => [`${one.file}: ${one.expression}`, one] as const))('%s', (_name, one) => {
    const value = evaluate(one.expression);
    const words = /^(\d+) values$/.exec(one.result);
    if (words) {
      expect((value as ArrayLike<number>).length).toBe(Number(words[1]));
      return;
    }
    const shown = /^[-\d[{(M]/.test(one.result) ? evaluate(`[${one.result}].flat(3)`) : null;
    expect(shown, `result of the example in ${one.file}: ${one.result}`).not.toBeNull();
    const [got, expected] = [numbersOf(value), numbersOf(shown)];
    expect(got).toHaveLength(expected.length);
    expected.forEach((number, i) =>
      expect(Math.abs(got[i]! - number)).toBeLessThanOrEqual(1e-13 * Math.abs(number))
    );
  });
});
