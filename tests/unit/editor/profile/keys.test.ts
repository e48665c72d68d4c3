import { describe, expect, it } from 'vitest';
import {
  keyWords,
  refuseKey,
  refuseResponseKey,
  refuseTrigger
} from '../../../../src/lib/editor/profile/keys';
import { defaultProfile, profileSchema } from '../../../../src/lib/task/profile';

const profile = defaultProfile();

describe('keys learned by pressing', () => {
  it('tells top row and keypad apart', () => {
    expect(keyWords('Digit5')).toBe('5 (top row)');
    expect(keyWords('Numpad5')).toBe('5 (keypad)');
    expect(keyWords('KeyB')).toBe('B');
    expect(keyWords('ArrowLeft')).toBe('Arrow Left');
  });

  it('refuses a response key as the trigger, and the trigger as a response key, with the reason', () => {
    expect(refuseTrigger(profile, 'Digit1')).toContain('already the key of the right index finger');
    expect(refuseTrigger(profile, 'KeyT')).toBeNull();
    expect(refuseResponseKey(profile, 'Digit5', 'left-index')).toContain('is the trigger key');
    expect(refuseResponseKey(profile, 'Digit2', 'left-index')).toContain('right middle finger');
    expect(refuseResponseKey(profile, 'Digit1', 'right-index')).toBeNull();
    expect(refuseResponseKey(profile, 'KeyB', 'left-index')).toBeNull();
  });

  it('refuses keys that send nothing of their own', () => {
    for (const code of [
      '',
      'Escape',
      'ShiftLeft',
      'ControlRight',
      'AltLeft',
      'MetaLeft',
      'CapsLock',
      'NumLock'
    ]) {
      expect(refuseKey(code), code).not.toBeNull();
    }
    for (const code of ['KeyT', 'Space', 'Enter', 'ArrowUp', 'Numpad1']) {
      expect(refuseKey(code), code).toBeNull();
      expect(profileSchema.safeParse({ ...profile, triggerKey: code }).success).toBe(true);
    }
  });
});
