import { describe, expect, it } from 'vitest';
import { resolveVariables, tsvText } from '../../../../src/lib/charts/export';
import {
  blockLengths,
  choicesOf,
  FIRST_GUESS,
  matrixRows,
  nuisanceCount,
  powerFigures,
  reportOver,
  spectrumOf
} from '../../../../src/lib/editor/spectrum/figures';
import { saturationPreview } from '../../../../src/lib/editor/spectrum/saturation';
import { duplicateRun } from '../../../../src/lib/task/commands';
import { defaultProfile } from '../../../../src/lib/task/profile';
import { sampleTask, withTrials } from '../../task/sample';

const profile = defaultProfile();
const sample = sampleTask();
const doc = withTrials(sample, [
  ['lantern', 3],
  ['chime', 12],
  ['lantern', 27],
  ['chime', 33],
  ['chime', 51],
  ['lantern', 60]
]);
const run = doc.runs[0]!;

describe('spectrum and power figures', () => {
  it('two like runs have twice the efficiency of one (information adds up)', () => {
    const twice = duplicateRun(doc, run.id).document;
    const one = reportOver(doc, doc.runs, profile)!;
    const two = reportOver(twice, twice.runs, profile)!;
    expect(two.contrasts[0]!.efficiency / one.contrasts[0]!.efficiency).toBeCloseTo(2, 9);
  });

  it('lays out the conditions, the constant and the drift columns', () => {
    const rows = matrixRows(doc, run, profile);
    expect(rows.slice(0, 3).map((r) => r.name)).toEqual(['follow-lantern', 'follow-chime', 'constant']);
    // floor(2 · 100 · 1.5 / 128) = 2 cosines (numerics: floor(2·N·TR/cutoff)).
    expect(rows).toHaveLength(5);
    expect(nuisanceCount(doc, run)).toBe(3);
    expect(rows.every((r) => r.values.length === 100)).toBe(true);
  });

  it('energy after the response adds up to the column’s variance, and the high-pass takes some of it', () => {
    const choices = choicesOf(doc);
    expect(choices.map((c) => c.name)).toEqual(['lantern − chime', 'follow-lantern', 'follow-chime']);
    const lantern = spectrumOf(doc, run, profile, choices[1]!)!;
    const values = matrixRows(doc, run, profile)[0]!.values;
    const mean = values.reduce((a, b) => a + b, 0) / values.length;
    const variance = values.reduce((a, b) => a + (b - mean) ** 2, 0);
    const total = lantern.response.reduce((a, b) => a + b, 0);
    // Parseval; rounding of 100 additions of the discrete transform stays far below 1e-9.
    expect(total / variance).toBeCloseTo(1, 9);
    expect(lantern.shareAfterHighPass).toBeGreaterThan(0);
    expect(lantern.shareAfterHighPass).toBeLessThan(1);
    expect(spectrumOf(sample.doc, sample.doc.runs[0]!, profile, choices[1]!)).toBeNull();
  });

  it('more efficiency needs fewer participants; a contrast that cannot be estimated has no number', () => {
    const input = {
      name: 'x',
      efficiency: 20,
      blocks: 40,
      volumes: 600,
      columns: 14,
      trials: 60,
      runs: 2,
      expected: FIRST_GUESS
    };
    const figures = powerFigures(input);
    expect(figures.needed!).toBeGreaterThan(figures.neededWithMore!);
    expect(figures.neededWithMore!).toBeGreaterThan(figures.neededWithBlocks!);
    expect(figures.byRuns.find((p) => p.x === 2)!.power).toBeCloseTo(figures.single.power, 12);
    const rising = figures.byParticipants.map((p) => p.power);
    expect(rising).toEqual([...rising].sort((a, b) => a - b));
    const none = powerFigures({ ...input, efficiency: 0, blocks: null });
    expect(none).toMatchObject({ group: null, needed: null, neededWithBlocks: null });
    expect(none.single.power).toBeCloseTo(FIRST_GUESS.alpha, 12);
  });

  it('finds no block length where not even one pair of blocks fits', () => {
    expect(blockLengths({ ...doc, brief: { ...doc.brief } }, { ...run, volumes: 4 }, profile)).toBeNull();
    const best = blockLengths(doc, run, profile)!;
    expect(best.efficiencies.some((e) => e.length === best.length)).toBe(true);
  });
});

describe('preview of mild saturation', () => {
  it('one isolated event peaks at 1 in both; two close events add to less than their sum', () => {
    const single = withTrials(sample, [['lantern', 3]]);
    const lone = saturationPreview(single, single.runs[0]!)!;
    // Sampled every half second, so a little below the exact peak; the balloon model is scaled by such samples.
    expect(Math.max(...lone.added)).toBeCloseTo(1, 1);
    expect(Math.max(...lone.saturated)).toBeCloseTo(1, 1);
    const close = withTrials(sample, [
      ['lantern', 3],
      ['chime', 5],
      ['lantern', 7]
    ]);
    const own = saturationPreview(close, close.runs[0]!)!;
    expect(Math.max(...own.saturated)).toBeLessThan(Math.max(...own.added));
    expect(saturationPreview(sample.doc, sample.doc.runs[0]!)).toBeNull();
  });
});

describe('exports', () => {
  it('keeps all digits and never breaks the table', () => {
    expect(
      tsvText(
        ['a\tb', 'c'],
        [
          [0.1 + 0.2, null],
          ['x\ny', Infinity]
        ]
      )
    ).toBe('a b\tc\n0.30000000000000004\tn/a\nx y\tn/a\n');
  });

  it('resolves the theme’s colours and leaves what it does not know', () => {
    const values: Record<string, string> = { '--tide': ' #0f6b62 ' };
    expect(resolveVariables('fill="var(--tide)" stroke="var(--none)"', (n) => values[n] ?? '')).toBe(
      'fill="#0f6b62" stroke="var(--none)"'
    );
  });
});
