/**
 * What a person typed into a field → a value, or one sentence that says what is wrong, what is expected and how
 * to mend it. Pure, so that every sentence is tested without a page.
 */
export interface NumberRule {
  /** How the sentence calls it: 'TR', 'Volumes'. */
  name: string;
  unit?: string;
  min?: number;
  moreThan?: number;
  max?: number;
  lessThan?: number;
  whole?: boolean;
  /** An empty field means `null` instead of a mistake. */
  optional?: boolean;
  /** A good value, shown to help. */
  example?: number;
}

export type Checked<T> = { ok: true; value: T } | { ok: false; message: string };

const withUnit = (value: number, unit: string | undefined) =>
  unit ? (unit === '°' ? `${value}°` : `${value} ${unit}`) : `${value}`;

/** At most six decimals, no trailing zeros: the document's microseconds and nothing finer. */
export function showNumber(value: number | null): string {
  return value === null ? '' : String(Number(value.toFixed(6)));
}

/** A decimal comma is read as a point; anything else that is no plain number is refused, not guessed. */
export function checkNumber(text: string, rule: NumberRule): Checked<number | null> {
  const { name, unit } = rule;
  const help = rule.example === undefined ? '' : ` Type for example ${rule.example}.`;
  const trimmed = text.trim();
  if (trimmed === '') {
    if (rule.optional) return { ok: true, value: null };
    return { ok: false, message: `${name} is empty; a number${unit ? ` in ${unit}` : ''} is needed.${help}` };
  }
  const plain = trimmed.replace('−', '-').replace(',', '.');
  if (!/^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(plain)) {
    const short = trimmed.length > 24 ? `${trimmed.slice(0, 24)}…` : trimmed;
    return {
      ok: false,
      message: `‘${short}’ is not a number; ${name} is a number${unit ? ` in ${unit}` : ''}.${help}`
    };
  }
  const value = Number(plain);
  const refuse = (expected: string) => ({
    ok: false as const,
    message: `${name} is ${withUnit(value, unit)}, but must be ${expected}.${help}`
  });
  if (!Number.isFinite(value)) return refuse('a number of ordinary size');
  if (rule.whole && !Number.isInteger(value)) return refuse('a whole number');
  if (rule.moreThan !== undefined && value <= rule.moreThan) {
    return refuse(`more than ${withUnit(rule.moreThan, unit)}`);
  }
  if (rule.min !== undefined && value < rule.min) return refuse(`${withUnit(rule.min, unit)} or more`);
  if (rule.max !== undefined && value > rule.max) return refuse(`at most ${withUnit(rule.max, unit)}`);
  if (rule.lessThan !== undefined && value >= rule.lessThan) {
    return refuse(`less than ${withUnit(rule.lessThan, unit)}`);
  }
  return { ok: true, value };
}

export interface TextRule {
  name: string;
  required?: boolean;
  max?: number;
  pattern?: RegExp;
  /** What the pattern asks for, to end the sentence '… must be'. */
  patternWords?: string;
}

export function checkText(text: string, rule: TextRule): Checked<string> {
  if (rule.required && text.trim() === '') {
    return { ok: false, message: `${rule.name} is empty; type a few words.` };
  }
  if (rule.max !== undefined && text.length > rule.max) {
    return {
      ok: false,
      message: `${rule.name} has ${text.length} characters, but at most ${rule.max} fit; shorten it by ${text.length - rule.max}.`
    };
  }
  if (rule.pattern && !rule.pattern.test(text)) {
    const short = text.length > 24 ? `${text.slice(0, 24)}…` : text;
    return {
      ok: false,
      message: `${rule.name} is ‘${short}’, but must be ${rule.patternWords ?? 'of another form'}.`
    };
  }
  return { ok: true, value: text };
}

/** 450 → '7:30'; parts of a second are kept to the millisecond. */
export function showMinutes(seconds: number): string {
  const milliseconds = Math.round(seconds * 1000);
  const minutes = Math.floor(milliseconds / 60_000);
  const rest = (milliseconds - minutes * 60_000) / 1000;
  return `${minutes}:${rest < 10 ? '0' : ''}${rest}`;
}
