/** The rules as a form holds them, with sensible first values, and as the engine takes them. */
import { checkRules, type SearchRules } from '$lib/engine/search';
import { EngineError } from '$lib/engine/errors';
import type { Run, TaskDocument } from '$lib/task/schema';
import { toSeconds } from '$lib/task/time';
import { countsOf, type Kind } from './kinds';

export const GRID_PARTS = { TR: 1, 'TR/2': 2, 'TR/4': 4 } as const;
export type SearchGrid = keyof typeof GRID_PARTS;

export interface RulesForm {
  grid: SearchGrid;
  /** By kind. */
  counts: number[];
  /** Seconds. */
  gapMin: number;
  gapMean: number;
  gapMax: number;
  /** null: no limit. */
  maxInARow: number | null;
  leadIn: number;
  leadOut: number;
}

const tidy = (seconds: number) => Math.round(seconds * 1e6) / 1e6;

/**
 * First values: the run's own counts (or as many of each as fit with a mean gap of about 4 s), and gaps that fill the
 * run, from half to three times their mean.
 */
export function firstRules(document: TaskDocument, run: Run, kinds: readonly Kind[]): RulesForm {
  const tr = toSeconds(document.brief.tr);
  const step = tr / 4;
  const length = run.volumes * tr;
  const leadIn = tidy(Math.min(2 * tr, length / 10));
  const leadOut = Math.min(12, tidy(length / 4));
  const room = length - leadIn - leadOut;
  let counts = countsOf(kinds, run);
  if (counts.every((n) => n === 0)) {
    const modelled = kinds.filter((k) => k.parts.length > 0);
    const each = Math.floor(room / modelled.reduce((sum, k) => sum + k.duration + 4, 0));
    counts = kinds.map((k) => (k.parts.length > 0 && Number.isFinite(each) ? Math.max(0, each) : 0));
  }
  const trials = counts.reduce((a, b) => a + b, 0);
  const busy = counts.reduce((sum, n, k) => sum + n * kinds[k]!.duration, 0);
  // One step less than the room leaves place for rounding to the grid.
  const mean = trials > 1 ? Math.floor((room - busy) / (trials - 1) / step - 0.5) * step : 4;
  const gapMean = tidy(Math.max(step, Math.min(mean, 12)));
  return {
    grid: 'TR/4',
    counts,
    gapMin: tidy(Math.max(0, Math.floor(gapMean / 2 / step) * step)),
    gapMean,
    gapMax: tidy(gapMean * 3),
    maxInARow: 3,
    leadIn,
    leadOut
  };
}

export function engineRules(
  document: TaskDocument,
  run: Run,
  kinds: readonly Kind[],
  form: RulesForm
): SearchRules {
  const tr = toSeconds(document.brief.tr);
  return {
    lengthSeconds: run.volumes * tr,
    volumes: run.volumes,
    tr,
    grid: tr / GRID_PARTS[form.grid],
    counts: form.counts,
    durations: kinds.map((k) => k.duration),
    gapMin: form.gapMin,
    gapMean: form.gapMean,
    gapMax: form.gapMax,
    maxInARow: form.maxInARow ?? Infinity,
    leadIn: form.leadIn,
    leadOut: form.leadOut
  };
}

/** Sentences on why a search cannot start; empty when it can. */
export function ruleProblems(
  rules: SearchRules,
  kinds: readonly Kind[],
  run: Run,
  contrasts: number
): string[] {
  const problems: string[] = [];
  if (kinds.length === 0) return ['There is no trial card yet; make one for each condition, then search.'];
  if (contrasts === 0) {
    problems.push('No contrast is chosen, so there is nothing to push; choose one, or add one in the Brief.');
  }
  const locked = run.trials.filter((t) => t.locked).length;
  if (locked > 0) {
    problems.push(
      `${run.name} has ${locked} locked ${locked === 1 ? 'trial' : 'trials'}, and this search places every trial itself; unlock ${locked === 1 ? 'it' : 'them'} on the Page first.`
    );
  }
  try {
    const check = checkRules(rules);
    if (!check.ok) problems.push(...check.problems);
  } catch (error) {
    if (!(error instanceof EngineError)) throw error;
    problems.push(error.message);
  }
  return problems.map((words) =>
    words.replace(/\b(?:trials of )?kind (\d+)\b/g, (all, n: string) => {
      const name = kinds[Number(n) - 1]?.name;
      return name === undefined ? all : all.replace(/kind \d+/, `‘${name}’`);
    })
  );
}
