/** Named response → finger (plan, else document) → key (profile). Cards name responses only. */
import type { Profile } from '$lib/task/profile';
import type { Finger, TaskDocument } from '$lib/task/schema';
import type { PlanRow } from './payload';

export interface MappedResponse {
  id: string;
  name: string;
  finger: Finger;
  /** Physical key (`KeyboardEvent.code`), or null where the profile has no key for the finger. */
  code: string | null;
}

/** The responses of a task as this participant gives them on this scanner's device. */
export function mapResponses(
  doc: TaskDocument,
  profile: Profile,
  row?: Pick<PlanRow, 'responses'> | null
): MappedResponse[] {
  return doc.brief.responses.map((response) => {
    const planned = row && Object.hasOwn(row.responses, response.id) ? row.responses[response.id] : undefined;
    const finger = planned ?? response.finger;
    const code = profile.responseKeys.find((key) => key.finger === finger)?.code ?? null;
    return { id: response.id, name: response.name, finger, code };
  });
}

/** `right-index` → `right index finger`. */
export const fingerWords = (finger: Finger): string =>
  `${finger.replace('-', ' ')}${finger.endsWith('thumb') ? '' : ' finger'}`;

/** What stands between mapping and run, in words; empty when the keys are in order. */
export function keyProblems(mapped: readonly MappedResponse[], profile: Profile): string[] {
  const problems = mapped
    .filter((r) => r.code === null)
    .map((r) => `'${r.name}' is given with the ${fingerWords(r.finger)}, for which the profile has no key.`);
  const clash = profile.responseKeys.find((key) => key.code === profile.triggerKey);
  if (clash)
    problems.push(
      `${clash.code} is the trigger key and the key of the ${fingerWords(clash.finger)}: change one of them in the scanner profile.`
    );
  const codes = mapped.map((r) => r.code).filter((code) => code !== null);
  const twice = mapped.find(
    (r, i) => r.code !== null && codes.indexOf(r.code) !== codes.lastIndexOf(r.code) && i >= 0
  );
  if (twice) problems.push(`${twice.code} stands for more than one response: give each a finger of its own.`);
  return problems;
}

/** Instructions with `{response name}` filled in by its finger; blank lines part the pages' paragraphs. */
export function fillInstructions(text: string, mapped: readonly MappedResponse[]): string {
  return text.replace(/\{([^{}]+)\}/g, (whole, name: string) => {
    const found = mapped.find((r) => r.name.toLowerCase() === name.trim().toLowerCase());
    return found ? fingerWords(found.finger) : whole;
  });
}
