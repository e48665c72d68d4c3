/** The judge of onsets is judged: what it must call late, dropped or unseen, on frames made up for it. */
import { describe, expect, it } from 'vitest';
import { onsetErrors } from '../../e2e/support/onsets';
import type { Testimony } from '../../e2e/support/witness';

const STEP = 1000 / 60;

/** 10 s of frames; a picture stands from each `shown` frame on for 12 frames. `without`: frames not made. */
function testimony(shown: number[], without: number[] = []): Testimony {
  const frames = Array.from({ length: 600 }, (_, k) => ({ k, at: k * STEP }))
    .filter(({ k }) => !without.includes(k))
    .map(({ k, at }) => {
      const on = shown.some((first) => k >= first && k < first + 12);
      return { at, seen: on ? 7 : 3, blank: !on };
    });
  return { frames, keys: [] };
}

describe('onsetErrors', () => {
  it('gives the error in frames, with its sign', () => {
    const result = onsetErrors(testimony([60, 120, 181]), 0, [1000 + 5, 2000 - 5, 3000]);
    expect(result.onsets.map(({ error }) => Number(error.toFixed(2)))).toEqual([-0.3, 0.3, 1]);
    expect(result).toMatchObject({ unseen: 0, dropped: 0 });
    expect(result.largest).toBeCloseTo(1, 6);
    expect(result.mean).toBeCloseTo(1 / 3, 6);
  });

  it('takes zero into account', () => {
    expect(onsetErrors(testimony([90]), 500, [1000]).onsets[0]!.error).toBeCloseTo(0, 6);
  });

  it('says what was never seen', () => {
    expect(onsetErrors(testimony([60]), 0, [1000, 4000])).toMatchObject({ unseen: 1 });
  });

  it('tells frames that the browser dropped from a player that was late', () => {
    const dropped = onsetErrors(testimony([123], [119, 120, 121, 122]), 0, [2000]);
    expect(dropped.onsets[0]).toMatchObject({ dropped: true });
    expect(dropped.onsets[0]!.seen).toBeCloseTo(dropped.onsets[0]!.firstDue, 6);
    const late = onsetErrors(testimony([123]), 0, [2000]);
    expect(late.onsets[0]).toMatchObject({ dropped: false });
    expect(late.largest).toBeCloseTo(3, 6);
  });
});
