import { EngineError, requireFinite, requireNotNegative, requirePositive, requireWhole } from '../errors';
import type { Seconds } from '../units';

/**
 * What every candidate of the timing search obeys. All times in seconds.
 *
 * A *gap* is the time from the end of a trial to the onset of the next. Onsets lie at whole multiples of `grid`,
 * the first at the earliest multiple not before `leadIn`.
 */
export interface SearchRules {
  /** Length of the run that trials may use; at most volumes · tr. */
  readonly lengthSeconds: Seconds;
  readonly volumes: number;
  readonly tr: Seconds;
  /** Distance of possible onsets, e.g. TR/4. */
  readonly grid: Seconds;
  /** Number of trials of each kind. */
  readonly counts: readonly number[];
  /** Length of a trial of each kind. */
  readonly durations: readonly Seconds[];
  readonly gapMin: Seconds;
  /** Mean of the gaps between trials: held to within one grid step over the whole run. */
  readonly gapMean: Seconds;
  readonly gapMax: Seconds;
  /** At most so many trials of one kind in a row; Infinity for no limit. */
  readonly maxInARow: number;
  /** Least time before the first onset. */
  readonly leadIn: Seconds;
  /** Least time from the end of the last trial to the end of the run; never less than the mean gap. */
  readonly leadOut: Seconds;
}

/** The rules in whole grid steps, as the search uses them. */
export interface RuleSteps {
  readonly trials: number;
  /** Grid index of the first onset. */
  readonly first: number;
  /** Fewest and most steps from the onset of a trial of this kind to the next onset. */
  readonly least: readonly number[];
  readonly most: readonly number[];
  /** Steps to be shared out above the fewest, where a trial of this kind is last. */
  readonly spare: readonly number[];
}

/** Decimal seconds are binary fractions: a step this close to a bound counts as on it. */
const SLACK = 1e-9;
const up = (x: number) => Math.ceil(x - SLACK);
const down = (x: number) => Math.floor(x + SLACK);

/** Throws `EngineError` for values that are no rules at all (NaN, negative lengths, counts that are not whole). */
export function requireRules(rules: SearchRules): void {
  requirePositive('length of the run', rules.lengthSeconds, 'Give the run a length in seconds.');
  requireWhole('number of volumes', rules.volumes, 1, 'Give the run at least one volume.');
  requirePositive('repetition time', rules.tr, 'Give TR in seconds.');
  requirePositive('onset grid', rules.grid, 'Use TR, TR/2 or TR/4, in seconds.');
  if (rules.counts.length === 0 || rules.counts.length !== rules.durations.length)
    throw new EngineError(
      'list of trial counts',
      rules.counts,
      'one count and one length for each kind of trial',
      'Name at least one kind of trial.'
    );
  for (const n of rules.counts)
    requireWhole('number of trials', n, 0, 'Give each condition a whole number of trials.');
  for (const d of rules.durations) requireNotNegative('length of a trial', d, 'Give the length in seconds.');
  requireNotNegative('smallest gap', rules.gapMin, 'Give the gap in seconds, 0 for none.');
  requireNotNegative('mean gap', rules.gapMean, 'Give the gap in seconds, 0 for none.');
  requireNotNegative('largest gap', rules.gapMax, 'Give the gap in seconds.');
  requireNotNegative('lead-in', rules.leadIn, 'Give it in seconds, 0 for none.');
  requireNotNegative('lead-out', rules.leadOut, 'Give it in seconds, 0 for none.');
  if (rules.maxInARow !== Infinity)
    requireWhole('most trials in a row', rules.maxInARow, 1, 'Give at least 1, or Infinity for no limit.');
  requireFinite(
    'trial count',
    rules.counts.reduce((a, b) => a + b, 0),
    'Give finite counts.'
  );
}

/** The rules in grid steps; no check (see `checkRules`). */
export function stepsOf(rules: SearchRules): RuleSteps {
  const { counts, durations, grid } = rules;
  const trials = counts.reduce((a, b) => a + b, 0);
  const least = durations.map((d) => up((d + rules.gapMin) / grid));
  const most = durations.map((d) => down((d + rules.gapMax) / grid));
  const length = counts.reduce((sum, n, k) => sum + n * durations[k]!, 0);
  const fewest = counts.reduce((sum, n, k) => sum + n * least[k]!, 0);
  const first = up(rules.leadIn / grid);
  const spare = durations.map((d, k) => {
    const between = (length - d + (trials - 1) * rules.gapMean) / grid;
    // Rounding to the grid must not eat into the lead-out.
    const room = down((rules.lengthSeconds - rules.leadOut - d) / grid) - first;
    return Math.min(Math.round(between), room) - (fewest - least[k]!);
  });
  return { trials, first, least, most, spare };
}

export type RulesCheck = { readonly ok: true } | { readonly ok: false; readonly problems: string[] };

const number = (x: number, places = 3) =>
  // A fixed locale: the same text on every machine.
  (Math.round(x * 10 ** places) / 10 ** places).toLocaleString('en', { maximumFractionDigits: places });
const s = (x: number, places = 3) => `${number(x, places)} s`;
/** Rounded so that following the advice really mends it. */
const sUp = (x: number) => s(Math.ceil(x * 1000 - 1e-6) / 1000);
const sDown = (x: number) => s(Math.floor(x * 1000 + 1e-6) / 1000);

function trialsInWords(rules: SearchRules, trials: number): string {
  const used = rules.durations.filter((_, k) => rules.counts[k]! > 0);
  const same = used.every((d) => d === used[0]);
  const length = same ? `${s(used[0]!)}` : `${s(Math.min(...used))} to ${s(Math.max(...used))}`;
  return `${number(trials)} ${trials === 1 ? 'trial' : 'trials'} of ${length}`;
}

/**
 * Says before a search whether the rules can be met, and if not, which of them clash, with the numbers and the
 * nearest possible value. Every problem is one sentence or two; none is said twice.
 *
 * Errors: `EngineError` for values that are no rules at all (see `requireRules`).
 */
export function checkRules(rules: SearchRules): RulesCheck {
  requireRules(rules);
  const problems: string[] = [];
  const { counts, durations, grid, gapMin, gapMean, gapMax, leadIn, leadOut } = rules;
  const trials = counts.reduce((a, b) => a + b, 0);
  if (trials < 2) {
    problems.push(
      `The rules ask for ${trials} ${trials === 1 ? 'trial' : 'trials'} in all; a search needs at least 2.`
    );
    return { ok: false, problems };
  }
  const scan = rules.volumes * rules.tr;
  if (rules.lengthSeconds > scan + SLACK)
    problems.push(
      `The run is to last ${s(rules.lengthSeconds)}, but ${number(rules.volumes)} volumes at a TR of ${s(rules.tr)} end at ` +
        `${s(scan)}. The nearest possible length is ${s(scan)}, or use ${number(up(rules.lengthSeconds / rules.tr))} volumes.`
    );
  const inOrder = gapMin <= gapMean + SLACK && gapMean <= gapMax + SLACK;
  if (!inOrder)
    problems.push(
      gapMin > gapMax
        ? `The smallest gap (${s(gapMin)}) is above the largest gap (${s(gapMax)}).`
        : `The mean gap of ${s(gapMean)} is not between the smallest gap (${s(gapMin)}) and the largest gap (${s(gapMax)}). ` +
            `The nearest possible mean is ${s(gapMean < gapMin ? gapMin : gapMax)}.`
    );

  const length = counts.reduce((sum, n, k) => sum + n * durations[k]!, 0);
  const tail = Math.max(leadOut, gapMean);
  const start = up(leadIn / grid) * grid;
  const needed = start + length + (trials - 1) * gapMean + tail;
  if (needed > rules.lengthSeconds + SLACK) problems.push(tooLong(rules, trials, length, needed));
  if (inOrder) problems.push(...gridProblems(rules));

  for (let k = 0; k < counts.length; k++) {
    const others = trials - counts[k]!;
    if (counts[k]! > rules.maxInARow * (others + 1))
      problems.push(
        `${number(counts[k]!)} trials of kind ${k + 1} with only ${number(others)} others between them cannot keep to at most ` +
          `${rules.maxInARow} in a row. The nearest possible limit is ${Math.ceil(counts[k]! / (others + 1))} in a row, or at most ` +
          `${number(rules.maxInARow * (others + 1))} trials of this kind.`
      );
  }
  return problems.length === 0 ? { ok: true } : { ok: false, problems };
}

function tooLong(rules: SearchRules, trials: number, length: number, needed: number): string {
  const { gapMean, gapMin, leadIn, leadOut, lengthSeconds, grid } = rules;
  const around = [
    leadIn > 0 ? `a lead-in of ${s(leadIn)}` : '',
    leadOut > gapMean ? `a lead-out of ${s(leadOut)}` : ''
  ].filter(Boolean);
  const text =
    `${trialsInWords(rules, trials)} with a mean gap of ${s(gapMean)} (end to onset)` +
    `${around.length > 0 ? `, ${around.join(' and ')}` : ''} need ${sUp(needed)}; the run has ${s(lengthSeconds)}. `;
  // The last trial is followed by the lead-out or by a mean gap, whichever is longer.
  const room = lengthSeconds - up(leadIn / grid) * grid - length;
  const byGap = Math.min((room - leadOut) / (trials - 1), room / trials);
  const nearest: string[] = [];
  if (byGap >= gapMin - SLACK && byGap >= 0) nearest.push(`a mean gap of at most ${sDown(byGap)}`);
  const mean = length / trials;
  const free = lengthSeconds - up(leadIn / grid) * grid - Math.max(leadOut - gapMean, 0);
  const fitting = mean + gapMean > 0 ? down(free / (mean + gapMean)) : trials;
  if (fitting >= 2) nearest.push(`${number(fitting)} trials`);
  nearest.push(`a run of ${number(up(needed / rules.tr))} volumes (${s(up(needed / rules.tr) * rules.tr)})`);
  return `${text}Possible: ${nearest.join(', or ')}.`;
}

/** What the grid makes impossible although the gaps themselves are in order. */
function gridProblems(rules: SearchRules): string[] {
  const { counts, durations, grid, gapMin, gapMax, gapMean } = rules;
  const { least, most, spare, trials } = stepsOf(rules);
  for (let k = 0; k < counts.length; k++) {
    if (counts[k]! === 0 || most[k]! >= least[k]!) continue;
    const below = down((durations[k]! + gapMin) / grid) * grid - durations[k]!;
    const above = least[k]! * grid - durations[k]!;
    const choices = [below, above].filter((x) => x >= 0).map((gap) => s(gap));
    return [
      `After a trial of ${s(durations[k]!)} no gap from ${s(gapMin)} to ${s(gapMax)} reaches the onset grid of ${s(grid, 6)}. ` +
        `The nearest possible gap is ${choices.join(' or ')}.`
    ];
  }
  for (let k = 0; k < counts.length; k++) {
    if (counts[k]! === 0) continue;
    const room = counts.reduce((sum, n, j) => sum + (n - (j === k ? 1 : 0)) * (most[j]! - least[j]!), 0);
    if (spare[k]! >= 0 && spare[k]! <= room) continue;
    const isShort = spare[k]! < 0;
    // The mean at which the fewest (or most) steps of every gap just add up.
    const fewest = counts.reduce((sum, n, j) => sum + (n - (j === k ? 1 : 0)) * least[j]!, 0);
    const length = counts.reduce((sum, n, j) => sum + (n - (j === k ? 1 : 0)) * durations[j]!, 0);
    const nearest = ((fewest + (isShort ? 0 : room)) * grid - length) / (trials - 1);
    return [
      `A mean gap of ${s(gapMean)} cannot be met on an onset grid of ${s(grid, 6)} with gaps from ${s(gapMin)} to ${s(gapMax)}, because ` +
        `onsets can lie on the grid only. The nearest possible mean is ${isShort ? sUp(nearest) : sDown(nearest)}.`
    ];
  }
  return [];
}
