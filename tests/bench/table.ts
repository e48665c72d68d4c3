import { isMet, type BenchRow } from './types';

const figure = (value: number): string =>
  Number.isInteger(value)
    ? value.toLocaleString('en')
    : value
        .toPrecision(4)
        .replace(/(\.\d*?)0+$/, '$1')
        .replace(/\.$/, '');

/** Rows as a table for the terminal, columns aligned. */
export function benchTable(rows: readonly BenchRow[]): string {
  const head = ['part', 'figure', 'value', 'unit', 'aim', '', 'against'];
  const cells = rows.map((row) => [
    row.part,
    row.name,
    figure(row.value),
    row.unit,
    row.aim === null ? '' : `${row.better === 'lower' ? '≤' : '≥'} ${figure(row.aim)}`,
    row.aim === null ? '' : isMet(row) ? 'met' : 'NOT MET',
    row.against === null ? '' : `${row.against.name}: ${figure(row.against.value)}`
  ]);
  const widths = head.map((title, column) =>
    Math.max(title.length, ...cells.map((line) => line[column]!.length))
  );
  const isNumber = (column: number) => column === 2;
  const line = (texts: string[]) =>
    texts
      .map((text, column) =>
        isNumber(column) ? text.padStart(widths[column]!) : text.padEnd(widths[column]!)
      )
      .join('  ')
      .trimEnd();
  return [line(head), line(widths.map((width) => '─'.repeat(width))), ...cells.map(line)].join('\n');
}
