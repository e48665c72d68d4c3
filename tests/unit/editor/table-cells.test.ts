import { describe, expect, it } from 'vitest';
import { efficiencyText, inflationText, signedText } from '../../../src/lib/editor/page/figure-text';
import { cellText, readCell, rowsOf } from '../../../src/lib/editor/page/table-cells';
import { compileRun } from '../../../src/lib/task/compile';
import { newCard, newDocument, newId } from '../../../src/lib/task/create';

const doc = newDocument({ title: 'Tide', label: 'tide', tr: 1_500_000, volumes: 100 });
doc.cards.push(newCard('ebb', null, 2_000_000), newCard('flood', null, 1_000_000));
const run = doc.runs[0]!;
run.trials = [3, 12].map((t, i) => ({ id: newId(), card: doc.cards[i]!.id, onset: t * 1_000_000 }));
const rows = rowsOf(doc, compileRun(doc, run).trials);
const onsetAfter = (text: string) => {
  const typed = readCell(run.id, rows[0]!, 'onset', text);
  return typed.ok ? typed.command(doc).document.runs[0]!.trials[0]!.onset : typed.message;
};

describe('the table', () => {
  it('writes exact times', () => {
    expect(cellText(rows[0]!, 'gap')).toBe('7.000');
    expect(cellText(rows[1]!, 'gap')).toBe('');
    expect(cellText(rows[1]!, 'length')).toBe('1.000');
  });
  it('reads seconds to the microsecond, with comma or point', () => {
    expect(onsetAfter('4.123456')).toBe(4_123_456);
    expect(onsetAfter('4,5')).toBe(4_500_000);
    expect(onsetAfter('−1.5')).toBe(-1_500_000);
  });
  it('says what is wrong with anything else, naming it', () => {
    for (const text of ['', 'soon', '1:30', '4.5 s', 'NaN', '--1'])
      expect(onsetAfter(text)).toContain(`‘${text}’ is no time`);
    expect(onsetAfter('1.0000001')).toContain('finer than a microsecond');
  });
  it('asks for the command of the column', () => {
    const gap = readCell(run.id, rows[0]!, 'gap', '1');
    expect(gap.ok && gap.command(doc).document.runs[0]!.trials[1]!.onset).toBe(6_000_000);
    const card = readCell(run.id, rows[0]!, 'card', doc.cards[1]!.id);
    expect(card.ok && card.command(doc).document.runs[0]!.trials[0]!.card).toBe(doc.cards[1]!.id);
  });
});

describe('figures', () => {
  it('show what is meant and nothing like NaN', () => {
    expect(efficiencyText(0)).toBe('0');
    expect(efficiencyText(14.3456)).toBe('14.3');
    expect(efficiencyText(12345)).toBe('12,345');
    expect(efficiencyText(1.2e-9)).toBe('1.20 · 10⁻⁹');
    expect(inflationText(Infinity)).toBe('∞');
    expect(inflationText(2.791)).toBe('2.79');
    expect(signedText(-0.001)).toBe('0.00');
    expect(signedText(-0.47)).toBe('−0.47');
  });
});
