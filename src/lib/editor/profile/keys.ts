/** Keys of a scanner profile, learned by pressing: what may stand beside what, and how a key is called. */
import type { Profile } from '$lib/task/profile';
import type { Finger } from '$lib/task/schema';
import { fingerWords } from '../forms/fingers';

/** 'Digit5' → '5 (top row)'; 'KeyB' → 'B'; names that speak for themselves stay. */
export function keyWords(code: string): string {
  const digit = /^Digit(\d)$/.exec(code);
  if (digit) return `${digit[1]} (top row)`;
  const pad = /^Numpad(\w+)$/.exec(code);
  if (pad) return `${pad[1]} (keypad)`;
  const letter = /^Key([A-Z])$/.exec(code);
  if (letter) return letter[1]!;
  return code.replace(/([a-z])([A-Z])/g, '$1 $2');
}

const MODIFIERS = /^(Shift|Control|Alt|Meta|OS|CapsLock|NumLock|Fn)/;

/** Why a pressed key cannot be learned at all, else null. */
export function refuseKey(code: string): string | null {
  if (code === '')
    return 'The browser gave no physical code for this key; switch off an input method and press again.';
  if (code === 'Escape') return 'Escape leaves full screen, so it cannot be learned; press another key.';
  if (MODIFIERS.test(code))
    return `${keyWords(code)} changes other keys instead of sending one; press another key.`;
  return null;
}

/** Why a key cannot be the trigger, else null. */
export function refuseTrigger(profile: Profile, code: string): string | null {
  const clash = profile.responseKeys.find((k) => k.code === code);
  return (
    refuseKey(code) ??
    (clash
      ? `${keyWords(code)} is already the key of the ${fingerWords(clash.finger)}. If it were the trigger too, each press would count as a pulse; learn another key, or remove that one first.`
      : null)
  );
}

/** Why a key cannot stand for the finger, else null. */
export function refuseResponseKey(profile: Profile, code: string, finger: Finger): string | null {
  const refused = refuseKey(code);
  if (refused) return refused;
  if (code === profile.triggerKey) {
    return `${keyWords(code)} is the trigger key. If it were a response too, each pulse would count as a press; learn another key, or another trigger first.`;
  }
  const other = profile.responseKeys.find((k) => k.code === code && k.finger !== finger);
  return other
    ? `${keyWords(code)} is already the key of the ${fingerWords(other.finger)}; each finger has a key of its own.`
    : null;
}
