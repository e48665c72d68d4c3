/**
 * The figures of the Spectrum and power page, from the document. Pure: the screen only draws them.
 * Times in seconds, frequencies in Hz, effects in percent signal change.
 */
import { designReportOf, type DesignReport, type RunDesign } from '$lib/engine/design/report';
import { blockEfficiency, bestBlockLength } from '$lib/engine/design/block-reference';
import { survivalOf, type Survival } from '$lib/engine/design/spectrum';
import { constant, dctDrift } from '$lib/engine/noise/drift';
import {
  groupPower,
  participantsFor,
  powerByParticipants,
  powerByRuns,
  powerByTrials,
  runPower,
  withinVariance,
  type CurvePoint,
  type TestRule
} from '$lib/engine/power';
import { compileRun, contrastRow, factorsOf, type Factor } from '$lib/task/compile';
import {
  designInput,
  eventsByFactor,
  isReckonable,
  RESPONSE,
  runTimes,
  type Sampling
} from '$lib/task/model';
import type { Contrast, Expected, Run, TaskDocument } from '$lib/task/schema';
import { toSeconds } from '$lib/task/time';

/** What power is reckoned from until the team says otherwise; a start to think from, from no study. */
export const FIRST_GUESS: Expected = {
  effect: 0.5,
  noise: 1.5,
  between: 0.4,
  participants: 20,
  alpha: 0.001,
  sides: 1,
  power: 0.8
};

/** Columns of one run, scaled to a single-trial peak of 1, with its drift and noise. */
function runDesign(doc: TaskDocument, run: Run, sampling: Sampling): RunDesign {
  const { tr, columns, highPass, noise } = designInput(doc, run, sampling);
  return { tr, volumes: run.volumes, columns, highPass, noise };
}

export function reportOver(doc: TaskDocument, runs: readonly Run[], sampling: Sampling): DesignReport | null {
  const factors = factorsOf(doc);
  if (factors.length === 0 || runs.length === 0 || !runs.every((r) => isReckonable(doc, r))) return null;
  const contrasts = doc.brief.contrasts.map((c) => ({ name: c.name, weights: contrastRow(c, factors) }));
  return designReportOf(
    runs.map((run) => runDesign(doc, run, sampling)),
    contrasts
  );
}

export interface MatrixRow {
  name: string;
  factor: Factor | null;
  values: Float64Array;
}

/** The design matrix of a run, lying: a row a column of the design, then the nuisance. */
export function matrixRows(doc: TaskDocument, run: Run, sampling: Sampling): MatrixRow[] {
  const factors = factorsOf(doc);
  const { columns, tr, highPass } = designInput(doc, run, sampling);
  const drift = dctDrift(run.volumes, tr, highPass);
  return [
    ...columns.map(({ name, values }, i) => ({ name, factor: factors[i] ?? null, values })),
    { name: 'constant', factor: null, values: constant(run.volumes) },
    ...drift.map((values, i) => ({ name: `drift ${i + 1}`, factor: null, values }))
  ];
}

/** What can be looked at in the spectrum: each factor, then each contrast. */
export interface Choice {
  key: string;
  name: string;
  weights: number[];
}

export function choicesOf(doc: TaskDocument): Choice[] {
  const factors = factorsOf(doc);
  return [
    ...doc.brief.contrasts.map((c) => ({
      key: `contrast ${c.id}`,
      name: c.name,
      weights: contrastRow(c, factors)
    })),
    ...factors.map((f, i) => ({
      key: f.key,
      name: f.name,
      weights: factors.map((_, j) => (i === j ? 1 : 0))
    }))
  ];
}

/** Energy by frequency of a weighted sum of the run's factors, and what survives. Null without events. */
export function spectrumOf(doc: TaskDocument, run: Run, sampling: Sampling, choice: Choice): Survival | null {
  const parts = eventsByFactor(doc, compileRun(doc, run));
  const events = parts.flatMap(({ events, scale }, i) => {
    const weight = (choice.weights[i] ?? 0) * scale;
    return weight === 0 ? [] : events.map((e) => ({ ...e, height: weight }));
  });
  if (events.length === 0) return null;
  return survivalOf({
    events,
    response: RESPONSE,
    tr: toSeconds(doc.brief.tr),
    volumes: run.volumes,
    times: runTimes(doc, run, sampling),
    highPass: doc.brief.highPass
  });
}

const LENGTHS = Array.from({ length: 30 }, (_, i) => 4 + 2 * i);

/** The block length (s) that one condition, on and off in turn, would be seen best with on this run. */
export function blockLengths(doc: TaskDocument, run: Run, sampling: Sampling) {
  const tr = toSeconds(doc.brief.tr);
  const length = run.volumes * tr;
  const lengths = LENGTHS.filter((s) => 2 * s <= length);
  if (lengths.length === 0) return null;
  return bestBlockLength(lengths, {
    tr,
    volumes: run.volumes,
    highPass: doc.brief.highPass,
    noise: doc.brief.noise,
    modelledAt: runTimes(doc, run, sampling),
    response: RESPONSE
  });
}

/** Efficiency of 16 s blocks for a contrast, summed over like runs; null where there can be none. */
export function blocksOver(
  doc: TaskDocument,
  runs: readonly Run[],
  sampling: Sampling,
  contrast: Contrast
): number | null {
  const weights = contrastRow(contrast, factorsOf(doc));
  if (weights.every((w) => w === 0)) return null;
  return runs.reduce(
    (sum, run) =>
      sum +
      blockEfficiency(weights, {
        tr: toSeconds(doc.brief.tr),
        volumes: run.volumes,
        highPass: doc.brief.highPass,
        noise: doc.brief.noise,
        modelledAt: runTimes(doc, run, sampling),
        response: RESPONSE
      }),
    0
  );
}

export interface PowerFigures {
  name: string;
  efficiency: number;
  /** In one participant, all chosen runs. */
  single: { delta: number; df: number; power: number };
  group: { delta: number; power: number } | null;
  /** Participants for the wanted power, a fraction; null where no number is enough. */
  needed: number | null;
  /** The same with a tenth more efficiency, and with 16 s blocks. */
  neededWithMore: number | null;
  blocks: number | null;
  neededWithBlocks: number | null;
  byRuns: CurvePoint[];
  byTrials: CurvePoint[];
  byParticipants: CurvePoint[];
}

export interface PowerInput {
  name: string;
  efficiency: number;
  blocks: number | null;
  /** Volumes of all chosen runs, and rank of all their columns. */
  volumes: number;
  columns: number;
  trials: number;
  runs: number;
  expected: Expected;
}

const upTo = (most: number, from = 1): number[] =>
  Array.from({ length: most - from + 1 }, (_, i) => i + from);

/** Power of one contrast. A contrast that cannot be estimated has the power of a test on nothing. */
export function powerFigures(input: PowerInput): PowerFigures {
  const { name, efficiency, blocks, volumes, columns, trials, runs, expected } = input;
  const rule: TestRule = { alpha: expected.alpha, sides: expected.sides };
  const df = Math.max(1, volumes - columns);
  const set = { effect: expected.effect, efficiency, noiseSd: expected.noise, df };
  const groupOf = (e: number) => ({
    meanEffect: expected.effect,
    betweenSd: expected.between,
    withinVariance: withinVariance(expected.noise, e)
  });
  const needed = (e: number | null): number | null =>
    e === null || e <= 0
      ? null
      : participantsFor(expected.power, (n) => groupPower({ ...groupOf(e), participants: n }, rule).power);
  const most = Math.max(40, expected.participants + 10);
  const one = { ...set, efficiency: efficiency / Math.max(1, runs), df: Math.max(1, df / Math.max(1, runs)) };
  return {
    name,
    efficiency,
    single: runPower(set, rule),
    group:
      efficiency > 0
        ? groupPower({ ...groupOf(efficiency), participants: expected.participants }, rule)
        : null,
    needed: needed(efficiency),
    neededWithMore: needed(efficiency * 1.1),
    blocks,
    neededWithBlocks: needed(blocks),
    byRuns: powerByRuns(one, upTo(Math.max(8, runs + 2)), rule),
    byTrials: trials > 0 ? powerByTrials(set, trials, columns, trialSteps(trials), rule) : [],
    byParticipants: efficiency > 0 ? powerByParticipants(groupOf(efficiency), upTo(most, 2), rule) : []
  };
}

/** A tenth of the present trials to double of them, in at most forty steps. */
function trialSteps(trials: number): number[] {
  const step = Math.max(1, Math.round(trials / 20));
  return upTo(40)
    .map((i) => i * step)
    .filter((n) => n <= 2 * trials);
}

/** Rank of the nuisance of a run: constant and cosines. */
export const nuisanceCount = (doc: TaskDocument, run: Run): number =>
  1 + dctDrift(run.volumes, toSeconds(doc.brief.tr), doc.brief.highPass).length;
