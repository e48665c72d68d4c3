import { describe, expect, it } from 'vitest';
import { checkFrames, checkKeys, checkResolution, checkStorage } from '../../../src/lib/player/self-check';

const frames = (rate: number, count = 181) => Array.from({ length: count }, (_, i) => 5 + i / rate);

describe('the self-check', () => {
  it('is green for frames as planned, amber for another rate or dropped ones, red for none', () => {
    expect(checkFrames(frames(60), 60)).toMatchObject({
      level: 'green',
      text: 'Screen 60.0 Hz, none of 180 frames dropped'
    });
    expect(checkFrames(frames(120), 60)).toMatchObject({ level: 'amber', detail: 'planned 60 Hz' });
    const some = frames(60).filter((_, i) => i !== 50 && i !== 51);
    expect(checkFrames(some, 60)).toMatchObject({ level: 'amber' });
    expect(checkFrames(some, 60).text).toContain('2 of 178 frames dropped');
    expect(checkFrames([], 60).level).toBe('red');
  });

  it('measures the interval by its median', () => {
    expect(checkFrames(frames(75), 60).interval).toBeCloseTo(1 / 75, 9);
  });

  it('compares the screen with the profile', () => {
    const planned = { width: 1920, height: 1080 };
    expect(checkResolution(planned, planned).level).toBe('green');
    expect(checkResolution({ width: 1280, height: 720 }, planned).level).toBe('amber');
  });

  it('is red where nothing can be kept or little is free', () => {
    expect(checkStorage(false, 1e10).level).toBe('red');
    expect(checkStorage(true, 1e6).level).toBe('red');
    expect(checkStorage(true, 9.8e9)).toMatchObject({ level: 'green', detail: '9.8 GB' });
    expect(checkStorage(true, null).level).toBe('green');
  });

  it('wants each response key once, or a word why not', () => {
    const wanted = ['Digit1', 'Digit2'];
    expect(checkKeys([], wanted, null)).toMatchObject({ level: 'red', detail: 'Digit1, Digit2' });
    expect(checkKeys(['Digit2'], wanted, null).detail).toBe('Digit1');
    expect(checkKeys(['Digit2', 'Digit1'], wanted, null).level).toBe('green');
    expect(checkKeys([], wanted, 'device at the scanner')).toMatchObject({
      level: 'amber',
      detail: 'device at the scanner'
    });
    expect(checkKeys([], [], null).level).toBe('green');
  });
});
