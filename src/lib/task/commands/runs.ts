/** Edits of the list of runs. */
import { newId, newRun } from '../create';
import { MAX_TRIALS, MAX_VOLUMES, type Run, type TaskDocument, type Trial } from '../schema';
import { count, EditError, runOf, withRun, type Edit } from './edit';

const checkVolumes = (volumes: number) => {
  if (!Number.isInteger(volumes) || volumes < 1 || volumes > MAX_VOLUMES)
    throw new EditError(
      `A run has a whole number of volumes from 1 to ${MAX_VOLUMES.toLocaleString('en')}, not ‘${volumes}’.`
    );
};

export function addRun(doc: TaskDocument): Edit & { runId: string } {
  const run = newRun(doc.brief.volumes, doc.runs.length + 1);
  return { document: { ...doc, runs: [...doc.runs, run] }, words: `added ${run.name}`, runId: run.id };
}

export function duplicateRun(doc: TaskDocument, runId: string): Edit & { runId: string } {
  const run = runOf(doc, runId);
  const copy: Run = {
    ...run,
    id: newId(),
    name: `Run ${doc.runs.length + 1}`,
    trials: run.trials.map((t) => ({ ...t, id: newId() }))
  };
  return {
    document: { ...doc, runs: [...doc.runs, copy] },
    words: `copied ${run.name} as ${copy.name}`,
    runId: copy.id
  };
}

export function removeRun(doc: TaskDocument, runId: string): Edit {
  const run = runOf(doc, runId);
  if (doc.runs.length === 1)
    throw new EditError('A task keeps at least one run. Add another before this one goes.');
  return {
    document: { ...doc, runs: doc.runs.filter((r) => r.id !== runId) },
    words: `removed ${run.name} with ${count(run.trials.length, 'trial')}`
  };
}

export function renameRun(doc: TaskDocument, runId: string, name: string): Edit {
  const run = runOf(doc, runId);
  const text = name.trim();
  if (!text || text.length > 60) throw new EditError('A run needs a name of 1 to 60 characters.');
  return { document: withRun(doc, { ...run, name: text }), words: `renamed ${run.name} ${text}` };
}

export function setVolumes(doc: TaskDocument, runId: string, volumes: number): Edit {
  const run = runOf(doc, runId);
  checkVolumes(volumes);
  return {
    document: withRun(doc, { ...run, volumes }),
    words: `set ${run.name} to ${count(volumes, 'volume')}`
  };
}

/** Replaces the trials of a run, for an adopted candidate; locked trials of the run stay as they are. */
export function adoptTrials(
  doc: TaskDocument,
  runId: string,
  trials: { card: string; onset: number }[],
  words: string
): Edit {
  const run = runOf(doc, runId);
  if (trials.length > MAX_TRIALS)
    throw new EditError(
      `A run holds at most ${MAX_TRIALS.toLocaleString('en')} trials, not ${trials.length}.`
    );
  const known = new Set(doc.cards.map((c) => c.id));
  if (trials.some((t) => !known.has(t.card)))
    throw new EditError('The candidate uses a card that the task no longer has. Search again.');
  const locked = run.trials.filter((t) => t.locked);
  const made = trials.map((t): Trial => ({ id: newId(), card: t.card, onset: t.onset }));
  return { document: withRun(doc, { ...run, trials: [...locked, ...made] }), words };
}
