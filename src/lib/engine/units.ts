/**
 * Units at the engine's borders. Everything public is in seconds; task documents hold whole microseconds.
 */
export type Seconds = number;
/** Whole microseconds, as stored in task documents. */
export type Micros = number;
/** Cycles per second. */
export type Hertz = number;

/** Task documents cannot tell times apart that are closer than this; the engine snaps edges within half of it. */
export const MICRO: Seconds = 1e-6;

/**
 * Microseconds → seconds, the double nearest to the decimal fraction.
 * @example secondsOf(735000) // 0.735
 */
export function secondsOf(micros: Micros): Seconds {
  return micros / 1e6;
}

/**
 * Seconds → whole microseconds, rounded to nearest.
 * @example microsOf(0.735) // 735000
 */
export function microsOf(seconds: Seconds): Micros {
  return Math.round(seconds * 1e6);
}

/**
 * Onset number `index` of a grid of TR/`parts`, in whole microseconds, rounded from its own index and never summed,
 * so that an hour-long run stays within 1 µs of index·TR/parts.
 *
 * @param index whole number of grid steps, may be negative
 * @param tr repetition time in microseconds
 * @param parts grid steps per TR
 * @example onsetOnGrid(3, 735000, 4) // 551250
 */
export function onsetOnGrid(index: number, tr: Micros, parts: number): Micros {
  return Math.round((index * tr) / parts);
}
