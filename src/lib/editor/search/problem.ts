/** From task, run and form to what the engine searches, and back from a candidate to trials. */
import { seeded } from '$lib/engine/random';
import { scoreEvents, type Candidate, type PlacedEvent, type SearchProblem } from '$lib/engine/search';
import { compileRun, contrastRow, type Factor } from '$lib/task/compile';
import { RESPONSE, runTimes } from '$lib/task/model';
import type { Profile } from '$lib/task/profile';
import type { Contrast, Run, TaskDocument } from '$lib/task/schema';
import { toMicros, toSeconds } from '$lib/task/time';
import type { Kind } from './kinds';
import { engineRules, type RulesForm } from './rules-form';

/** A problem as it is posted to the worker: the response shape, which is code, stays out. */
export type PlainProblem = Omit<SearchProblem, 'response' | 'times'> & { times: number[] };

export function plainProblem(
  document: TaskDocument,
  run: Run,
  profile: Profile,
  factors: readonly Factor[],
  kinds: readonly Kind[],
  contrasts: readonly Contrast[],
  form: RulesForm
): PlainProblem {
  return {
    rules: engineRules(document, run, kinds, form),
    times: Array.from(runTimes(document, run, profile)),
    highPass: document.brief.highPass,
    noise: document.brief.noise,
    contrasts: contrasts.map((c) => contrastRow(c, factors)),
    modelled: kinds.map((k) => k.parts)
  };
}

export const withResponse = (problem: PlainProblem): SearchProblem => ({ ...problem, response: RESPONSE });

/** The run as it is now, scored by the same measure; its onsets need not obey the rules. */
export function scorePresent(
  problem: PlainProblem,
  document: TaskDocument,
  run: Run,
  factors: readonly Factor[]
) {
  const events = compileRun(document, run).events.flatMap((event): PlacedEvent[] => {
    const column = factors.findIndex((f) => f.key === event.factor);
    return column < 0 ? [] : [{ column, onset: toSeconds(event.onset), duration: toSeconds(event.duration) }];
  });
  return scoreEvents(withResponse(problem), events);
}

/** Trials of a candidate. Cards that are one kind share its places as evenly as they can, in a seeded order. */
export function trialsOf(
  candidate: Pick<Candidate, 'order' | 'onsets'>,
  kinds: readonly Kind[],
  seed: string
): { card: string; onset: number }[] {
  const random = seeded(`cards/${seed}`);
  const piles = kinds.map((kind, k) => {
    const places = candidate.order.filter((n) => n === k).length;
    return random.shuffle(Array.from({ length: places }, (_, i) => kind.cards[i % kind.cards.length]!.id));
  });
  return candidate.order.map((k, i) => ({ card: piles[k]!.pop()!, onset: toMicros(candidate.onsets[i]!) }));
}
