/** What a form's action answers: the refusal in words, an error for each field, and what was typed (never passwords). */
import { fail, type ActionFailure } from '@sveltejs/kit';
import { refusalOf } from '$lib/server/errors';

export type Typed = Record<string, string>;
export interface FormAnswer {
  message: string;
  errors: Record<string, string>;
  values: Typed;
}
export interface FieldError {
  path: string;
  message: string;
}

/** Text fields of a sent form; files and repeated names are not used by these screens. */
export async function readForm(request: Request): Promise<Typed> {
  const typed: Typed = {};
  for (const [name, value] of await request.formData()) if (typeof value === 'string') typed[name] = value;
  return typed;
}

const isSecret = (name: string) => /password|present/i.test(name);
const withoutSecrets = (typed: Typed): Typed =>
  Object.fromEntries(Object.entries(typed).filter(([name]) => !isSecret(name)));

/** Refuses a form with words of its own for each field. */
export function refuseForm(typed: Typed, problems: FieldError[], status = 422): ActionFailure<FormAnswer> {
  return fail(status, {
    message: problems.length === 1 ? problems[0]!.message : `${problems.length} fields need another look.`,
    errors: Object.fromEntries(problems.map((one) => [one.path, one.message])),
    values: withoutSecrets(typed)
  });
}

/** Runs what the form asks for. A refusal of the services becomes the form's answer; anything else goes on. */
export async function answerForm<T>(
  typed: Typed,
  work: () => Promise<T>
): Promise<T | ActionFailure<FormAnswer>> {
  try {
    return await work();
  } catch (thrown) {
    const { status, body } = refusalOf(thrown);
    const details = body.details ?? [];
    return fail(status, {
      message: body.message,
      errors: Object.fromEntries(details.map((one) => [one.path, sentence(one, typed, body.message)])),
      values: withoutSecrets(typed)
    });
  }
}

/** A detail such as "an e-mail address such as …" as a sentence with the value that was given. */
function sentence({ path, message }: FieldError, typed: Typed, whole: string): string {
  if (/^(has|is) /.test(message)) return whole;
  if (!/^[a-z]/.test(message)) return `${message}.`;
  const given = typed[path];
  return given && !isSecret(path) ? `‘${given}’ was given; expected ${message}.` : `Expected ${message}.`;
}

/** Reads a number typed by a person, or says what is wrong with it. */
export function readNumber(
  typed: Typed,
  path: string,
  { what, unit, whole = false, above, most }: NumberRule
): { value: number; problem: null } | { value: null; problem: FieldError } {
  const text = (typed[path] ?? '').trim();
  const wrong = (why: string) => ({ value: null, problem: { path, message: why } });
  if (!text)
    return wrong(
      `Write ${whole ? 'a whole number' : 'a number'} of ${unit}, for example ${whole ? 300 : 1.5}.`
    );
  if (/^-?\d+,\d+$/.test(text))
    return wrong(`‘${text}’ has a comma: write it with a point, ${text.replace(',', '.')}.`);
  if (!/^[-+]?(\d+\.?\d*|\.\d+)$/.test(text))
    return wrong(`‘${text}’ is not a number of ${unit}: write digits, for example ${whole ? 300 : 1.5}.`);
  const value = Number(text);
  if (whole && !Number.isInteger(value)) return wrong(`${text} is not a whole number of ${unit}.`);
  if (value <= above) return wrong(`${text} is too small: ${what} must be more than ${above} ${unit}.`);
  if (value > most)
    return wrong(`${text} is too large: ${what} must be at most ${most.toLocaleString('en')} ${unit}.`);
  return { value, problem: null };
}
interface NumberRule {
  /** Name of the field in a sentence. */
  what: string;
  unit: string;
  whole?: boolean;
  above: number;
  most: number;
}
