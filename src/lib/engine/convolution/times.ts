import { EngineError, requireBetween, requireNotNegative, requirePositive, requireWhole } from '../errors';
import type { Seconds } from '../units';

export interface VolumeTiming {
  /** Repetition time, s. */
  tr: Seconds;
  /** Number of stored volumes. */
  volumes: number;
  /** How long acquiring one volume takes, s; the whole TR unless the profile says otherwise. */
  acquisitionTime?: Seconds;
  /** Where within the TR acquisition begins, s; 0 unless told otherwise. */
  acquisitionStart?: Seconds;
  /** Which part of the acquisition stands for the volume: 0 first slice … 1 last; 0.5 (the middle) by default. */
  sliceReference?: number;
}

/**
 * The time at which each volume is modelled: n·TR + start + ref·TA, n = 0…N−1, in seconds; time 0 is the start of
 * the first stored volume (BIDS). Length N. Each from its own index, never summed.
 *
 * Errors: `EngineError` for TR ≤ 0, no volumes, a reference outside 0…1, an acquisition that does not fit the TR.
 * @example volumeTimes({ tr: 2, volumes: 3 }) // 1, 3, 5
 */
export function volumeTimes(timing: VolumeTiming): Float64Array {
  const { tr, volumes, acquisitionStart: start = 0, sliceReference: reference = 0.5 } = timing;
  requirePositive('repetition time', tr, 'Give the TR of the scanner profile in seconds.');
  requireWhole('number of volumes', volumes, 1, 'Give the run at least one volume.');
  const acquisition = timing.acquisitionTime ?? tr - start;
  requireNotNegative('acquisition start', start, 'Give it in seconds from the start of the TR.');
  requirePositive('acquisition time', acquisition, 'Give it in seconds, at most the TR.');
  requireBetween('slice reference', reference, 0, 1, 'Use 0 for the first slice, 0.5 for the middle.');
  if (start + acquisition > tr * (1 + 1e-9))
    throw new EngineError(
      'acquisition start plus acquisition time',
      start + acquisition,
      `at most the TR of ${tr} s`,
      'Shorten the acquisition or lengthen the TR.'
    );
  const shift = start + reference * acquisition;
  return Float64Array.from({ length: volumes }, (_, n) => n * tr + shift);
}

/**
 * Checks a list of volume times (clustered acquisition gives its own): finite, rising, at least one.
 * Returns it unchanged.
 */
export function requireTimes(times: ArrayLike<Seconds>): ArrayLike<Seconds> {
  if (times.length === 0)
    throw new EngineError('list of volume times', times, 'at least one time', 'Give the run a volume.');
  for (let n = 0; n < times.length; n += 1) {
    const here = times[n]!;
    if (!Number.isFinite(here) || (n > 0 && here <= times[n - 1]!))
      throw new EngineError(
        `time of volume ${n}`,
        here,
        n > 0 ? `a time after ${times[n - 1]} s` : 'a finite time in seconds',
        'Give the volume times in seconds, in rising order.'
      );
  }
  return times;
}
