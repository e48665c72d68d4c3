/**
 * What the engine throws when an input is malformed (NaN, TR ≤ 0, rho ≥ 1 …).
 *
 * The text always says what was given, what was expected and how to mend it. A design that is merely poor
 * (an empty condition, two identical columns) is no error: it gives 0 with a reason.
 */
export class EngineError extends Error {
  override readonly name = 'EngineError';

  constructor(
    /** What was looked at, in the trade's words: "repetition time". */
    readonly subject: string,
    /** The value as given. */
    readonly value: unknown,
    /** What would have been right: "a number above 0, in seconds". */
    readonly expected: string,
    /** How to mend it, a full sentence. */
    readonly wayOut: string
  ) {
    super(`${subject} is ${describe(value)}; expected ${expected}. ${wayOut}`);
  }
}

function describe(value: unknown): string {
  if (typeof value === 'number') return Object.is(value, -0) ? '0' : String(value);
  if (typeof value === 'string') return `“${value}”`;
  if (Array.isArray(value)) return `a list of ${value.length}`;
  return String(value);
}

/** Throws unless `value` is a finite number; returns it. */
export function requireFinite(subject: string, value: number, wayOut: string): number {
  if (typeof value !== 'number' || !Number.isFinite(value))
    throw new EngineError(subject, value, 'a finite number', wayOut);
  return value;
}

/** Throws unless `value` is finite and above 0; returns it. */
export function requirePositive(subject: string, value: number, wayOut: string): number {
  if (typeof value !== 'number' || !Number.isFinite(value) || value <= 0)
    throw new EngineError(subject, value, 'a number above 0', wayOut);
  return value;
}

/** Throws unless `value` is finite and not below 0; returns it. */
export function requireNotNegative(subject: string, value: number, wayOut: string): number {
  if (typeof value !== 'number' || !Number.isFinite(value) || value < 0)
    throw new EngineError(subject, value, 'a number not below 0', wayOut);
  return value;
}

/** Throws unless `value` is a whole number of at least `least`; returns it. */
export function requireWhole(subject: string, value: number, least: number, wayOut: string): number {
  if (!Number.isInteger(value) || value < least)
    throw new EngineError(subject, value, `a whole number of at least ${least}`, wayOut);
  return value;
}

/** Throws unless low ≤ value ≤ high; returns it. */
export function requireBetween(
  subject: string,
  value: number,
  low: number,
  high: number,
  wayOut: string
): number {
  if (typeof value !== 'number' || !(value >= low && value <= high))
    throw new EngineError(subject, value, `a number from ${low} to ${high}`, wayOut);
  return value;
}
