/** Figures as the panels write them: enough digits to see a change, never more than are meant. */

/** Three significant digits; 0 for what cannot be estimated. */
export function efficiencyText(value: number): string {
  if (value === 0) return '0';
  if (!Number.isFinite(value)) return '∞';
  if (value >= 1000) return Math.round(value).toLocaleString('en');
  return value
    .toPrecision(3)
    .replace(
      /e-(\d+)$/,
      (_, power: string) => ` · 10⁻${power.replace(/\d/g, (d) => SUPERSCRIPTS[Number(d)] ?? d)}`
    );
}
const SUPERSCRIPTS = '⁰¹²³⁴⁵⁶⁷⁸⁹';

/** Two decimals; ∞ where a column is the sum of others. */
export const inflationText = (value: number): string =>
  !Number.isFinite(value) ? '∞' : value >= 1000 ? '> 1,000' : value.toFixed(2);

/** Two decimals with a true minus sign; never −0.00. */
export function signedText(value: number): string {
  const text = value.toFixed(2);
  return text === '-0.00' ? '0.00' : text.replace('-', '−');
}
