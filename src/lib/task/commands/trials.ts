/** Edits of the trials of one run. Onsets are absolute; gaps are derived, so 'change a gap' moves what follows. */
import { compileRun, trialLength, type CompiledTrial } from '../compile';
import { newId } from '../create';
import { MAX_MICROS, MAX_TRIALS, type Run, type TaskDocument, type Trial } from '../schema';
import { secondsText } from '../time';
import { cardOf, count, EditError, runOf, withRun, type Edit } from './edit';

const refuseTooMany = (n: number) => {
  if (n > MAX_TRIALS)
    throw new EditError(
      `A run holds at most ${MAX_TRIALS.toLocaleString('en')} trials; this would make ${n.toLocaleString('en')}. Split it into several runs.`
    );
};

function checkOnset(onset: number): number {
  if (!Number.isInteger(onset) || Math.abs(onset) > MAX_MICROS)
    throw new EditError(
      `An onset is a time within ${MAX_MICROS / 3_600_000_000} hours of time zero, not ${secondsText(Math.round(onset))} s.`
    );
  return onset;
}

/** Moves the given trials by µs each; locked trials refuse. */
function shifted(run: Run, by: Map<string, number>): Run {
  return {
    ...run,
    trials: run.trials.map((t) => {
      const delta = by.get(t.id) ?? 0;
      if (delta === 0) return t;
      if (t.locked)
        throw new EditError('This would move a locked trial. Unlock it first, or move fewer trials.');
      return { ...t, onset: checkOnset(t.onset + delta) };
    })
  };
}

const following = (trials: CompiledTrial[], from: number, delta: number) =>
  new Map(trials.slice(from).map((t) => [t.trial.id, delta]));

/** Puts a card on the run at `onset` (µs). Nothing else moves; an overlap becomes a Notice. */
export function placeTrial(
  doc: TaskDocument,
  runId: string,
  cardId: string,
  onset: number,
  id = newId()
): Edit & { trialId: string } {
  const run = runOf(doc, runId);
  const card = cardOf(doc, cardId);
  refuseTooMany(run.trials.length + 1);
  const trial: Trial = { id, card: cardId, onset: checkOnset(onset) };
  return {
    document: withRun(doc, { ...run, trials: [...run.trials, trial] }),
    words: `placed ${card.name} at ${secondsText(onset)} s of ${run.name}`,
    trialId: id
  };
}

/**
 * Inserts a card after a trial (or first, with null), `gap` µs after its end, and pushes what follows by the
 * card's length and the gap, so that no other gap changes.
 */
export function insertTrial(
  doc: TaskDocument,
  runId: string,
  cardId: string,
  after: string | null,
  gap: number
): Edit & { trialId: string } {
  const run = runOf(doc, runId);
  const card = cardOf(doc, cardId);
  refuseTooMany(run.trials.length + 1);
  const { trials } = compileRun(doc, run);
  const at = after === null ? 0 : trials.findIndex((t) => t.trial.id === after) + 1;
  const before = trials[at - 1];
  const onset = before ? before.end + gap : Math.max(0, Math.min(gap, trials[0]?.onset ?? gap));
  const pushed = shifted(run, following(trials, at, card.duration + gap));
  const id = newId();
  return {
    document: withRun(doc, {
      ...pushed,
      trials: [...pushed.trials, { id, card: cardId, onset: checkOnset(onset) }]
    }),
    words: `inserted ${card.name} at ${secondsText(onset)} s of ${run.name}`,
    trialId: id
  };
}

/** Moves trials by `delta` µs. */
export function moveTrials(doc: TaskDocument, runId: string, ids: readonly string[], delta: number): Edit {
  const run = runOf(doc, runId);
  const way = delta < 0 ? 'earlier' : 'later';
  return {
    document: withRun(doc, shifted(run, new Map(ids.map((id) => [id, delta])))),
    words: `moved ${count(ids.length, 'trial')} of ${run.name} ${secondsText(Math.abs(delta))} s ${way}`
  };
}

export function setOnset(doc: TaskDocument, runId: string, trialId: string, onset: number): Edit {
  const run = runOf(doc, runId);
  const now = run.trials.find((t) => t.id === trialId);
  if (!now) throw new EditError('This trial is no longer on the run.');
  return {
    document: withRun(doc, shifted(run, new Map([[trialId, onset - now.onset]]))),
    words: `moved a trial of ${run.name} to ${secondsText(onset)} s`
  };
}

/**
 * Takes trials out of the order and puts them after another trial (or first, with null). Every trial takes the gap
 * that follows it along, so that lengths, gaps and the whole run's length stay; only the order changes.
 */
export function moveTrialAfter(
  doc: TaskDocument,
  runId: string,
  ids: readonly string[],
  after: string | null
): Edit {
  const run = runOf(doc, runId);
  const { trials } = compileRun(doc, run);
  const moving = new Set(ids);
  if (after !== null && moving.has(after)) throw new EditError('A trial cannot be put after itself.');
  const rest = trials.filter((t) => !moving.has(t.trial.id));
  const taken = trials.filter((t) => moving.has(t.trial.id));
  const at = after === null ? 0 : rest.findIndex((t) => t.trial.id === after) + 1;
  if (after !== null && at === 0) throw new EditError('The trial to put it after is no longer on the run.');
  const order = [...rest.slice(0, at), ...taken, ...rest.slice(at)];
  const step = new Map(
    trials.map((t, i) => [t.trial.id, i + 1 < trials.length ? trials[i + 1]!.onset - t.onset : null])
  );
  // The last trial has no gap of its own: it is given the run's median step when it no longer stands last.
  const steps = [...step.values()].filter((s): s is number => s !== null).sort((a, b) => a - b);
  const median = steps[steps.length >> 1] ?? 0;
  const by = new Map<string, number>();
  let onset = trials[0]?.onset ?? 0;
  for (const t of order) {
    by.set(t.trial.id, onset - t.onset);
    onset += step.get(t.trial.id) ?? Math.max(median, t.length);
  }
  return {
    document: withRun(doc, shifted(run, by)),
    words: `reordered ${count(ids.length, 'trial')} of ${run.name}`
  };
}

/** Sets the gap after a trial (µs) by moving everything that follows it. */
export function setGap(doc: TaskDocument, runId: string, trialId: string, gap: number): Edit {
  const run = runOf(doc, runId);
  const { trials } = compileRun(doc, run);
  const at = trials.findIndex((t) => t.trial.id === trialId);
  const here = trials[at];
  const next = trials[at + 1];
  if (!here || !next) throw new EditError('There is no trial after this one, so it has no gap to change.');
  if (!Number.isInteger(gap)) throw new EditError('A gap is a whole number of microseconds.');
  return {
    document: withRun(doc, shifted(run, following(trials, at + 1, gap - (next.onset - here.end)))),
    words: `set the gap after trial ${here.index} of ${run.name} to ${secondsText(gap)} s`
  };
}

export function removeTrials(doc: TaskDocument, runId: string, ids: readonly string[]): Edit {
  const run = runOf(doc, runId);
  const gone = new Set(ids);
  if (run.trials.some((t) => gone.has(t.id) && t.locked))
    throw new EditError('A locked trial is among these. Unlock it first.');
  return {
    document: withRun(doc, { ...run, trials: run.trials.filter((t) => !gone.has(t.id)) }),
    words: `removed ${count(gone.size, 'trial')} from ${run.name}`
  };
}

/** Copies trials to right after the last of them, keeping the spacing among them; what follows is pushed. */
export function duplicateTrials(
  doc: TaskDocument,
  runId: string,
  ids: readonly string[]
): Edit & { trialIds: string[] } {
  const run = runOf(doc, runId);
  refuseTooMany(run.trials.length + ids.length);
  const { trials } = compileRun(doc, run);
  const chosen = trials.filter((t) => ids.includes(t.trial.id));
  const first = chosen[0];
  const last = chosen.at(-1);
  if (!first || !last) throw new EditError('Choose the trials to duplicate first.');
  const at = trials.indexOf(last);
  const next = trials[at + 1];
  const gap = next ? Math.max(0, next.onset - last.end) : Math.max(0, doc.brief.tr);
  const offset = last.end + gap - first.onset;
  const pushed = shifted(run, following(trials, at + 1, next ? offset : 0));
  const copies = chosen.map((t): Trial => ({
    ...t.trial,
    id: newId(),
    locked: undefined,
    onset: checkOnset(t.onset + offset)
  }));
  return {
    document: withRun(doc, { ...pushed, trials: [...pushed.trials, ...copies.map(dropUndefined)] }),
    words: `duplicated ${count(chosen.length, 'trial')} of ${run.name}`,
    trialIds: copies.map((c) => c.id)
  };
}

function dropUndefined(trial: Trial): Trial {
  return Object.fromEntries(Object.entries(trial).filter(([, v]) => v !== undefined)) as Trial;
}

/** Gives trials another card; their onsets stay. */
export function setTrialCard(doc: TaskDocument, runId: string, ids: readonly string[], cardId: string): Edit {
  const run = runOf(doc, runId);
  const card = cardOf(doc, cardId);
  const chosen = new Set(ids);
  return {
    document: withRun(doc, {
      ...run,
      trials: run.trials.map((t) => (chosen.has(t.id) ? { ...t, card: cardId } : t))
    }),
    words: `made ${count(chosen.size, 'trial')} of ${run.name} ${card.name}`
  };
}

/** Moves a trial and all that follow it later until the trial before it no longer overlaps (the Notice's mend). */
export function pushOverlap(doc: TaskDocument, runId: string, trialId: string): Edit {
  const run = runOf(doc, runId);
  const { trials } = compileRun(doc, run);
  const at = trials.findIndex((t) => t.trial.id === trialId);
  const here = trials[at];
  if (!here || at < 1) throw new EditError('This trial is no longer on the run.');
  const end = Math.max(...trials.slice(0, at).map((t) => t.onset + trialLength(t.trial, t.card)));
  const delta = Math.max(0, end - here.onset);
  return {
    document: withRun(doc, shifted(run, following(trials, at, delta))),
    words: `pushed trial ${here.index} of ${run.name} and what follows by ${secondsText(delta)} s`
  };
}
