/** Planned onsets beside what the witness saw: errors in frames, and what was never seen. */
import { expect } from '@playwright/test';
import { frameInterval, type Testimony } from './witness';

export interface SeenOnset {
  /** ms from zero. */
  planned: number;
  /** Timestamp of the frame in which a picture appeared near it, ms from zero; null: none did. */
  seen: number | null;
  /** Seen minus planned, in frames. */
  error: number;
  /** The browser made no frame where one was due: what was planned there could not be shown in time by anyone. */
  dropped: boolean;
  /** First frame, ms from zero, that begins no earlier than half a frame before the plan. */
  firstDue: number;
}

export interface OnsetErrors {
  /** Frame interval, ms. */
  interval: number;
  onsets: SeenOnset[];
  unseen: number;
  dropped: number;
  /** Over the onsets that were seen and whose frames were made, in frames: signed mean, largest absolute. */
  mean: number;
  largest: number;
}

/**
 * `planned`: ms from `zero`, pictures apart by at least `within` from the next change. `zero`: ms of the page's
 * clock. An onset counts as seen where a picture appears within `within` ms of it.
 */
export function onsetErrors(
  testimony: Testimony,
  zero: number,
  planned: number[],
  within = 120
): OnsetErrors {
  const interval = frameInterval(testimony);
  const { frames } = testimony;
  const appeared = frames.filter((frame, k) => !frame.blank && k > 0 && frame.seen !== frames[k - 1]!.seen);
  const onsets = planned.map((onset): SeenOnset => {
    const due = zero + onset;
    const k = frames.findIndex((frame) => frame.at >= due - interval / 2);
    const around = frames.slice(Math.max(0, k - 1), k + 2);
    const steps = around.slice(1).map((frame, index) => frame.at - around[index]!.at);
    // Looked for where it was planned, or, in a gap between frames, where the gap ends.
    const expected = k < 0 ? due : Math.max(due, frames[k]!.at);
    const nearest = appeared.reduce(
      (best, frame) => (Math.abs(frame.at - expected) < Math.abs(best - expected) ? frame.at : best),
      Infinity
    );
    const seen = Math.abs(nearest - expected) <= within ? nearest - zero : null;
    return {
      planned: onset,
      seen,
      error: seen === null ? NaN : (seen - onset) / interval,
      dropped: k < 1 || steps.some((step) => step > 1.5 * interval),
      firstDue: k < 0 ? NaN : frames[k]!.at - zero
    };
  });
  const judged = onsets.filter((onset) => onset.seen !== null && !onset.dropped).map((onset) => onset.error);
  return {
    interval,
    onsets,
    unseen: onsets.filter((onset) => onset.seen === null).length,
    dropped: onsets.filter((onset) => onset.dropped).length,
    mean: judged.reduce((sum, error) => sum + error, 0) / judged.length,
    largest: Math.max(...judged.map(Math.abs))
  };
}

/** One line for people: every onset's error, with `*` where frames were dropped. */
export const errorsInWords = ({ onsets }: OnsetErrors): string =>
  onsets.map(({ error, dropped }) => `${error.toFixed(2)}${dropped ? '*' : ''}`).join(' ');

/**
 * Every onset is within one frame of plan. Where the browser made no frame when one was due, nobody could be in time:
 * there the picture must stand in the first frame that was made. Most onsets must have had their frames, or the
 * machine was too busy to measure on and the test fails.
 */
export function expectOnTime(result: OnsetErrors): void {
  const words = `errors in frames (* frames dropped): ${errorsInWords(result)}`;
  console.log(words);
  expect(result.unseen, words).toBe(0);
  for (const { planned, seen, error, dropped, firstDue } of result.onsets) {
    if (dropped) expect(Math.abs(seen! - firstDue), `onset planned at ${planned} ms`).toBeLessThan(1);
    else expect(Math.abs(error), `onset planned at ${planned} ms; ${words}`).toBeLessThan(1);
  }
  expect(result.dropped, 'onsets whose frames were dropped').toBeLessThanOrEqual(result.onsets.length / 2);
}
