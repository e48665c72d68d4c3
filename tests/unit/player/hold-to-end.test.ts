import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { HOLD, HoldToEnd } from '$lib/player/render/hold-to-end';

describe('Shift and End held', () => {
  beforeEach(() => void vi.useFakeTimers());
  afterEach(() => void vi.useRealTimers());
  const begun = () => {
    const end = vi.fn();
    const hold = new HoldToEnd(end);
    hold.down('ShiftLeft', true);
    hold.down('End', true);
    return { end, hold };
  };

  it('end the run after a second, not before', () => {
    const { end } = begun();
    vi.advanceTimersByTime(HOLD - 1);
    expect(end).not.toHaveBeenCalled();
    vi.advanceTimersByTime(1);
    expect(end).toHaveBeenCalledOnce();
  });

  it('end it although pulses and responses come meanwhile', () => {
    const { end, hold } = begun();
    for (let ms = 0; ms < HOLD; ms += 100) {
      hold.down('Digit5', true);
      hold.up('Digit5');
      hold.up('KeyB');
      vi.advanceTimersByTime(100);
    }
    expect(end).toHaveBeenCalledOnce();
  });

  it.each(['End', 'ShiftLeft', 'ShiftRight'])('do nothing when %s is let go of too soon', (code) => {
    const { end, hold } = begun();
    vi.advanceTimersByTime(HOLD - 100);
    hold.up(code);
    vi.advanceTimersByTime(HOLD);
    expect(end).not.toHaveBeenCalled();
  });

  it('do nothing when the window loses the keys, nor does End alone', () => {
    const { end, hold } = begun();
    hold.letGo();
    hold.down('End', false);
    vi.advanceTimersByTime(2 * HOLD);
    expect(end).not.toHaveBeenCalled();
  });
});
