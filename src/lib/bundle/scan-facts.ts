/** What must be typed at the scanner's console for a run, and what to expect there. */
import type { Profile } from '$lib/task/profile';
import type { Run, TaskDocument } from '$lib/task/schema';
import { clockText, toSeconds } from '$lib/task/time';

export interface ScanFacts {
  /** Stored volumes and the dummies with pulses: what the console is told to acquire. */
  volumesToType: number;
  storedVolumes: number;
  dummiesWithPulses: number;
  /** Acquired before the first pulse; the console adds them by itself. */
  silentDummies: number;
  /** Seconds. */
  tr: number;
  /** `m:ss` of everything that is acquired, dummies of both kinds included. */
  total: string;
  /** Which pulse after arming is time zero, from 1; null where the one pulse comes `dummiesWithPulses` TRs before. */
  zeroPulse: number | null;
}

/** The document's TR counts; a profile with another one is a Notice, told on the card (see `texts.ts`). */
export function scanFacts(document: TaskDocument, run: Run, profile: Profile): ScanFacts {
  const { pulses, pulsesBeforeZero, silentDummies } = profile;
  const perVolume = pulses.mode === 'several-per-volume' ? pulses.perVolume : 1;
  return {
    volumesToType: run.volumes + pulsesBeforeZero,
    storedVolumes: run.volumes,
    dummiesWithPulses: pulsesBeforeZero,
    silentDummies,
    tr: toSeconds(document.brief.tr),
    total: clockText((run.volumes + pulsesBeforeZero + silentDummies) * document.brief.tr),
    zeroPulse: pulses.mode === 'once' ? (pulsesBeforeZero ? null : 1) : pulsesBeforeZero * perVolume + 1
  };
}

/** A physical key in words: `Digit5` → `5 (top row)`. The code stays beside it on paper. */
export function keyInWords(code: string): string {
  const digit = /^Digit(\d)$/.exec(code);
  if (digit) return `${digit[1]} (top row)`;
  const pad = /^Numpad(.+)$/.exec(code);
  if (pad) return `${pad[1]} (keypad)`;
  const letter = /^Key([A-Z])$/.exec(code);
  if (letter) return `${letter[1]} (where it is on a US keyboard)`;
  return code;
}
