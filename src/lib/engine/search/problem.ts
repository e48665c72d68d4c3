import { peakScale } from '../convolution/peak-scale';
import { EngineError, requireFinite, requireNotNegative } from '../errors';
import type { NoiseModel } from '../noise/model';
import type { Response } from '../response/response';
import type { Seconds } from '../units';
import type { SearchRules } from './rules';

/** A modelled event within a trial: a boxcar of `duration` (0: an impulse) that begins `offset` after the onset. */
export interface ModelledPart {
  readonly offset: Seconds;
  readonly duration: Seconds;
  /** Column of the design it belongs to; left out: the column with the trial kind's own number. */
  readonly column?: number;
}

/** What the search is to find: order and gaps under rules that make the contrasts as sharp as possible. */
export interface SearchProblem {
  readonly rules: SearchRules;
  readonly response: Response;
  /** When each volume is modelled (`volumeTimes`), s; as many as rules.volumes. */
  readonly times: ArrayLike<Seconds>;
  /** High-pass cutoff, s; null for the constant alone. */
  readonly highPass: Seconds | null;
  readonly noise: NoiseModel;
  /** Rows of weights, one weight per column. */
  readonly contrasts: readonly (readonly number[])[];
  /** Per trial kind its modelled event, or several of them (cue and target in columns of their own). */
  readonly modelled: readonly (ModelledPart | readonly ModelledPart[])[];
}

/** A modelled part with its column settled and scaled to a single-event peak of 1. */
export interface Part {
  readonly offset: Seconds;
  readonly duration: Seconds;
  readonly column: number;
  readonly scale: number;
}

/** One modelled event at a place of its own, for scoring a run that did not come from the search. */
export interface PlacedEvent {
  readonly column: number;
  readonly onset: Seconds;
  readonly duration: Seconds;
}

/**
 * Per trial kind its parts. Throws `EngineError` where lists do not fit one another.
 */
export function partsOf(problem: SearchProblem): Part[][] {
  const { rules, modelled, contrasts, response } = problem;
  if (modelled.length !== rules.counts.length)
    throw new EngineError(
      'list of modelled events',
      modelled.length,
      `${rules.counts.length}, one entry per trial kind`,
      'Give every kind of trial its modelled events; an empty list for none.'
    );
  if (contrasts.length === 0)
    throw new EngineError(
      'list of contrasts',
      contrasts,
      'at least one contrast',
      'Choose a contrast to search for.'
    );
  const columns = contrasts[0]!.length;
  for (const row of contrasts) {
    if (row.length !== columns || columns === 0)
      throw new EngineError(
        'number of weights of a contrast',
        row.length,
        `${columns || 'at least 1'}, one per column`,
        'Give every column a weight; 0 leaves it out.'
      );
    for (const weight of row) requireFinite('weight of a contrast', weight, 'Give every column a number.');
    if (row.every((weight) => weight === 0))
      throw new EngineError(
        'contrast',
        row,
        'at least one weight other than 0',
        'Give a condition a weight.'
      );
  }
  return modelled.map((entry, kind) =>
    (Array.isArray(entry) ? (entry as readonly ModelledPart[]) : [entry as ModelledPart]).map((part) => {
      const column = part.column ?? kind;
      if (!Number.isInteger(column) || column < 0 || column >= columns)
        throw new EngineError(
          'column of a modelled event',
          column,
          `a whole number from 0 to ${columns - 1}`,
          'Give the contrasts a weight for every column.'
        );
      requireFinite(
        'offset of a modelled event',
        part.offset,
        'Give it in seconds from the onset of the trial.'
      );
      requireNotNegative(
        'duration of a modelled event',
        part.duration,
        'Use 0 for a brief event or the length in seconds.'
      );
      return {
        offset: part.offset,
        duration: part.duration,
        column,
        scale: peakScale(response, part.duration)
      };
    })
  );
}
