import { describe, expect, it } from 'vitest';
import { LATE_WITHIN, ResponseReader } from '../../../src/lib/player/responses';
import type { MappedResponse } from '../../../src/lib/player/fingers';
import type { ScheduledWindow } from '../../../src/lib/player/schedule';

const left: MappedResponse = { id: 'goleft', name: 'left', finger: 'right-index', code: 'Digit1' };
const right: MappedResponse = { id: 'goright', name: 'right', finger: 'right-middle', code: 'Digit2' };

function windowAt(
  onset: number,
  end: number,
  more: { trial?: number; allowed?: string[]; correct?: string | null; take?: 'first' | 'last' | 'all' } = {}
): ScheduledWindow {
  const { trial = 1, allowed = ['goleft', 'goright'], correct = 'goleft', take = 'first' } = more;
  const window = { id: `w${onset}`, name: 'answer', onset: 0, duration: 0, allowed, correct, take };
  return {
    trialId: `t${trial}`,
    trial,
    conditionId: null,
    window,
    trialOnset: onset - 0.5,
    onset,
    end,
    allowed: new Set(allowed)
  };
}
const reader = (...windows: ScheduledWindow[]) => new ResponseReader(windows, [left, right]);
/** As the runtime does it: windows are brought up to the press, then it is placed. */
const press = (r: ResponseReader, response: MappedResponse, time: number) => {
  const closed = r.advance(time);
  return { closed, press: r.press(response, time) };
};

describe('a response', () => {
  it('in a window is taken and judged when the window closes', () => {
    const r = reader(windowAt(1, 2));
    expect(press(r, left, 1.4).press).toMatchObject({ place: 'in', time: 1.4 });
    expect(r.advance(1.99)).toEqual([]);
    expect(r.advance(2)).toMatchObject([{ verdict: 'correct', presses: 1 }]);
  });

  it('of the wrong name is wrong, and none is missing', () => {
    const r = reader(windowAt(1, 2), windowAt(5, 6, { trial: 2 }));
    press(r, right, 1.4);
    expect(r.advance(10).map((a) => a.verdict)).toEqual(['wrong', 'missing']);
  });

  it('is only answered where none is right or wrong', () => {
    const r = reader(windowAt(1, 2, { correct: null }));
    press(r, right, 1.4);
    expect(r.advance(2)).toMatchObject([{ verdict: 'answered' }]);
  });

  it('counts first, last or all as the card says', () => {
    const taken = (take: 'first' | 'last' | 'all') => {
      const r = reader(windowAt(1, 2, { take }));
      press(r, left, 1.2);
      press(r, right, 1.5);
      const [answer] = r.advance(2);
      return [answer!.taken.map((p) => p.response.name).join(), answer!.verdict, answer!.presses];
    };
    expect(taken('first')).toEqual(['left', 'correct', 2]);
    expect(taken('last')).toEqual(['right', 'wrong', 2]);
    expect(taken('all')).toEqual(['left,right', 'wrong', 2]);
  });

  it('with overlapping windows belongs to the latest opened that allows it', () => {
    const r = reader(windowAt(1, 4), windowAt(2, 3, { trial: 2, allowed: ['goright'] }));
    expect(press(r, right, 2.5).press.window!.trial).toBe(2);
    expect(press(r, left, 2.6).press.window!.trial).toBe(1);
    expect(press(r, right, 3.5).press.window!.trial).toBe(1);
  });

  it('after a window is late for it within a limit, and then unassigned', () => {
    const r = reader(windowAt(1, 2));
    expect(press(r, left, 2.3).press).toMatchObject({ place: 'late', window: { trial: 1 } });
    expect(press(r, left, 2 + LATE_WITHIN + 0.01).press).toMatchObject({ place: 'unassigned', window: null });
  });

  it('before the window of its trial is early; late comes before early', () => {
    const r = reader(windowAt(1, 2), windowAt(2.6, 3, { trial: 2 }));
    expect(press(r, left, 0.7).press).toMatchObject({ place: 'early', window: { trial: 1 } });
    expect(press(r, left, 0.2).press.place).toBe('unassigned');
    expect(press(r, left, 2.3).press).toMatchObject({ place: 'late', window: { trial: 1 } });
  });

  it('that the window does not allow is not taken by it', () => {
    const r = reader(windowAt(1, 2, { allowed: ['goleft'] }));
    expect(press(r, right, 1.5).press.place).toBe('unassigned');
    expect(r.advance(2)).toMatchObject([{ verdict: 'missing' }]);
  });

  it('outside every window does not answer one', () => {
    const r = reader(windowAt(1, 2));
    press(r, left, 0.8);
    expect(r.advance(2)).toMatchObject([{ verdict: 'missing' }]);
  });
});
