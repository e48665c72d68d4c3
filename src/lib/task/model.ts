/**
 * A run as the engine's columns: one regressor a factor, sampled at the profile's volume times. Each column is
 * scaled so that one isolated trial of it has peak 1, as the engine's README asks of efficiency.
 */
import { peakScale } from '../engine/convolution/peak-scale';
import type { DesignEvent } from '../engine/convolution/event';
import { regressor } from '../engine/convolution/regressor';
import { volumeTimes } from '../engine/convolution/times';
import { doubleGamma } from '../engine/response/double-gamma';
import type { Response } from '../engine/response/response';
import { compileRun, contrastRow, factorsOf, type CompiledRun, type Factor } from './compile';
import type { Profile } from './profile';
import type { Run, TaskDocument } from './schema';
import { toSeconds } from './time';

/** The response that predictions are made with: double gamma, Friston et al. 1998. */
export const RESPONSE: Response = doubleGamma();

/** What of the profile decides when a volume is modelled. */
export type Sampling = Pick<Profile, 'acquisitionTime' | 'acquisitionStart' | 'sliceReference'>;

/** Model time of each stored volume of a run, seconds. */
export function runTimes(doc: TaskDocument, run: Run, sampling: Sampling): Float64Array {
  const tr = toSeconds(doc.brief.tr);
  // A profile is measured for its own TR; where the task's is shorter, acquisition fills what there is.
  const start = sampling.acquisitionStart < tr ? sampling.acquisitionStart : 0;
  const whole = tr - start;
  const acquisitionTime = Math.min(sampling.acquisitionTime ?? whole, whole);
  return volumeTimes({
    tr,
    volumes: run.volumes,
    acquisitionStart: start,
    acquisitionTime,
    sliceReference: sampling.sliceReference
  });
}

/** Cells of drift columns above which design numbers would take seconds a time; no study comes near. */
export const MAX_DESIGN_CELLS = 5_000_000;

/** Whether the design numbers of a run are small enough to be reckoned while somebody waits. */
export function isReckonable(doc: TaskDocument, run: Run): boolean {
  const columns = Math.floor((2 * run.volumes * toSeconds(doc.brief.tr)) / doc.brief.highPass) + 1;
  return columns * run.volumes <= MAX_DESIGN_CELLS;
}

export interface FactorEvents {
  factor: Factor;
  /** Seconds. */
  events: DesignEvent[];
  /** Factor that gives one isolated trial peak 1; by the most frequent duration, the longest of equals. */
  scale: number;
}

/** Events by factor, seconds, in the order of `factorsOf`. */
export function eventsByFactor(
  doc: TaskDocument,
  compiled: CompiledRun,
  factors = factorsOf(doc),
  response = RESPONSE
): FactorEvents[] {
  return factors.map((factor) => {
    const own = compiled.events.filter((e) => e.factor === factor.key);
    const events = own.map((e) => ({ onset: toSeconds(e.onset), duration: toSeconds(e.duration) }));
    return { factor, events, scale: peakScale(response, usualDuration(events)) };
  });
}

function usualDuration(events: readonly DesignEvent[]): number {
  const seen = new Map<number, number>();
  for (const e of events) seen.set(e.duration, (seen.get(e.duration) ?? 0) + 1);
  let best = 0;
  let most = 0;
  for (const [duration, n] of seen)
    if (n > most || (n === most && duration > best)) {
      best = duration;
      most = n;
    }
  return best;
}

export interface DesignInput {
  tr: number;
  times: Float64Array;
  columns: { name: string; values: Float64Array }[];
  contrasts: { name: string; weights: number[] }[];
  highPass: number;
  noise: TaskDocument['brief']['noise'];
}

/** What the engine's design report takes, for one run; `compiled` saves work while dragging. */
export function designInput(
  doc: TaskDocument,
  run: Run,
  sampling: Sampling,
  compiled = compileRun(doc, run)
): DesignInput {
  const factors = factorsOf(doc);
  const times = runTimes(doc, run, sampling);
  return {
    tr: toSeconds(doc.brief.tr),
    times,
    columns: eventsByFactor(doc, compiled, factors).map(({ factor, events, scale }) => ({
      name: factor.name,
      values: regressor(events, RESPONSE, times, scale)
    })),
    contrasts: doc.brief.contrasts.map((c) => ({ name: c.name, weights: contrastRow(c, factors) })),
    highPass: doc.brief.highPass,
    noise: doc.brief.noise
  };
}
