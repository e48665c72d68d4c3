/** Times between the document's integer µs and the seconds that people and tables read. */

export const MICROS = 1_000_000;
export const toSeconds = (micros: number): number => micros / MICROS;
export const toMicros = (seconds: number): number => Math.round(seconds * MICROS);

/** Point k of a grid that divides the TR into `parts`, µs: rounded from its own index, never summed. */
export const gridPoint = (k: number, tr: number, parts: number): number => Math.round((k * tr) / parts);

/** Nearest point of the TR/parts grid, µs. */
export const snapToGrid = (micros: number, tr: number, parts: number): number =>
  gridPoint(Math.round((micros * parts) / tr), tr, parts) + 0; // never minus zero

/** Whole milliseconds, µs. */
export const snapToMs = (micros: number): number => Math.round(micros / 1000) * 1000 + 0;

/** Exact decimal seconds of integer µs with at least `least` decimals: 62250000 → `62.250`. */
export function secondsText(micros: number, least = 3): string {
  const sign = micros < 0 ? '-' : '';
  const whole = Math.floor(Math.abs(micros) / MICROS);
  let part = String(Math.abs(micros) % MICROS).padStart(6, '0');
  while (part.length > least && part.endsWith('0')) part = part.slice(0, -1);
  return `${sign}${whole}${part ? `.${part}` : ''}`;
}

/** Decimal seconds read exactly into µs; null when the text is no plain decimal number or too large. */
export function parseSeconds(text: string): { micros: number; exact: boolean } | null {
  const m = /^\s*([+-]?)(\d+)?(?:\.(\d*))?(?:[eE]([+-]?\d{1,3}))?\s*$/.exec(text);
  if (!m || (m[2] === undefined && !m[3])) return null;
  if (m[4] !== undefined) {
    const value = Number(text) * MICROS;
    if (!Number.isFinite(value) || Math.abs(value) > Number.MAX_SAFE_INTEGER) return null;
    return { micros: Math.round(value) + 0, exact: Number.isInteger(value) };
  }
  const decimals = (m[3] ?? '').padEnd(6, '0');
  const rest = decimals.slice(6);
  const size =
    Number(m[2] ?? 0) * MICROS + Number(decimals.slice(0, 6)) + (Number(`0.${rest || 0}`) >= 0.5 ? 1 : 0);
  if (size > Number.MAX_SAFE_INTEGER) return null;
  return { micros: m[1] === '-' && size !== 0 ? -size : size, exact: !/[1-9]/.test(rest) };
}

/** `m:ss` of whole seconds, as the scanner's console shows a run's length. */
export function clockText(micros: number): string {
  const s = Math.round(micros / MICROS);
  return `${Math.floor(s / 60)}:${String(s % 60).padStart(2, '0')}`;
}
