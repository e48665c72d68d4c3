import { addEvent, requireEvent } from '../convolution/event';
import { peakScale } from '../convolution/peak-scale';
import { runInformation } from '../design/information';
import { readContrast, rowSpaceOf } from '../design/row-space';
import { prepareSetting, type Column } from '../design/setting';
import { EngineError } from '../errors';
import { partsOf, type PlacedEvent, type SearchProblem } from './problem';

/** How sharp a design is for the contrasts of a problem. */
export interface Score {
  /** A criterion: contrasts / Σ 1/efficiency; 0 where a contrast cannot be estimated. */
  readonly score: number;
  /** Efficiency of each contrast, 0 where it cannot be estimated. */
  readonly perContrast: number[];
}

/**
 * Scores any list of modelled events by building the design matrix: for the run as it is now, whose onsets need not
 * obey the rules or lie on the grid, and for the final numbers of a candidate. The search's own sums give the same to
 * 1e-9 (tested).
 *
 * Columns are scaled to a single-event peak of 1 (`peakScale`), so efficiency is that of percent signal change.
 * Errors: `EngineError` for malformed numbers or columns beyond the contrasts' weights.
 */
export function scoreEvents(
  problem: Pick<SearchProblem, 'rules' | 'response' | 'times' | 'highPass' | 'noise' | 'contrasts'>,
  events: readonly PlacedEvent[]
): Score {
  const { rules, response, times, highPass, noise, contrasts } = problem;
  const width = contrasts[0]?.length ?? 0;
  const values = Array.from({ length: width }, () => new Float64Array(times.length));
  for (const { column, onset, duration } of events) {
    const target = values[column];
    if (target === undefined)
      throw new EngineError(
        'column of an event',
        column,
        `a whole number from 0 to ${width - 1}`,
        'Give the contrasts a weight for every column.'
      );
    addEvent(target, times, response, requireEvent({ onset, duration }), peakScale(response, duration));
  }
  const columns: Column[] = values.map((column, j) => ({ name: `column ${j + 1}`, values: column }));
  const setting = prepareSetting({ tr: rules.tr, times, highPass, noise });
  const space = rowSpaceOf(runInformation(columns, setting).matrix);
  const perContrast = contrasts.map((weights) => {
    const reading = readContrast(space, weights);
    return reading.estimable ? 1 / reading.variance : 0;
  });
  const isComplete = perContrast.every((efficiency) => efficiency > 0);
  const trace = perContrast.reduce((sum, efficiency) => sum + 1 / efficiency, 0);
  return { score: isComplete ? contrasts.length / trace : 0, perContrast };
}

/** The modelled events of trials of given kinds at given onsets (s). */
export function eventsOf(
  problem: SearchProblem,
  order: ArrayLike<number>,
  onsets: ArrayLike<number>
): PlacedEvent[] {
  const parts = partsOf(problem);
  const events: PlacedEvent[] = [];
  for (let t = 0; t < order.length; t++)
    for (const part of parts[order[t]!]!)
      events.push({ column: part.column, onset: onsets[t]! + part.offset, duration: part.duration });
  return events;
}
