/** The lines of a run's log, one JSON object each. `time` is seconds from time zero, `page` the page clock's seconds. */
import type { Profile } from '$lib/task/profile';
import type { BundleKind } from './payload';
import type { CheckItem } from './self-check';
import type { Place, Verdict } from './responses';

export const LOG_FORMAT = 1;

export interface LogHeader {
  type: 'header';
  format: typeof LOG_FORMAT;
  kind: BundleKind | 'REHEARSAL';
  /** Made by a simulated scanner or by automatic answers. */
  simulated: boolean;
  revision: string;
  saveNumber: number | null;
  profile: { name: string; hash: string };
  build: string;
  lab: string;
  study: string;
  task: string;
  participant: string;
  session: string | null;
  run: { id: string; name: string; index: number };
  attempt: number;
  operator: string;
  /** Whether run and fingers come from a plan row, or from the document's own order. */
  order: 'plan' | 'document';
  seed: string;
  responses: { id: string; name: string; finger: string; code: string | null }[];
  triggerKey: string;
  pulses: Profile['pulses'] & { beforeZero: number; acquisitionTime: number };
  tr: number;
  volumes: number;
  timing: Timing;
  delays: { display: number; sound: number; device: number };
  browser: string;
  screen: ScreenFacts | null;
  check: CheckItem[];
  started: { utc: string; offsetMinutes: number; zone: string; caveat: string };
}
export type Timing = 'free-run' | 'pulse-locked';
export interface ScreenFacts {
  /** Device pixels. */
  width: number;
  height: number;
  pixelRatio: number;
  /** Hertz, measured; null where it was not. */
  refreshRate: number | null;
}

/** A line while it is kept: `time` is worked out when zero is known for good. */
interface Kept {
  /** Counts up within an attempt. */
  seq: number;
  page: number;
}
export interface PulseLine extends Kept {
  type: 'pulse';
  /** Whole volumes from time zero (negative before it), and which pulse of the volume. Null for ignored ones. */
  volume: number | null;
  part: number | null;
  state: 'counted' | 'missed' | 'ignored';
  reason?: string;
  source: 'keyboard' | 'simulated';
}
export interface ItemLine extends Kept {
  type: 'item';
  state: 'on' | 'off' | 'not-shown';
  trial: number;
  trialId: string;
  itemId: string;
  item: string;
  kind: string;
  /** Planned onset (or end, for `off`), seconds from zero. */
  planned: number;
  /** Timestamp of the frame it was drawn in, seconds from zero; null for sounds and what was not shown. */
  frame: number | null;
  /** Page seconds at which it was on the screen or at the ear, by estimate; `onset` is the same from zero. */
  shown: number | null;
  onset?: number | null;
  reason?: string;
}
export interface KeyLine extends Kept {
  type: 'key';
  state: 'down' | 'up';
  code: string;
  /** Finger by the profile; null for a key that is no response key. */
  finger: string | null;
}
export interface ResponseLine extends Kept {
  type: 'response';
  state: 'press' | Verdict;
  place?: Place;
  trial: number | null;
  trialId: string | null;
  windowId: string | null;
  /** Response ids and names; the taken ones for a window's answer. */
  responses: string[];
  names: string[];
  /** Page seconds of the taken presses, corrected by the device's delay. */
  presses: number[];
}
export interface DropLine extends Kept {
  type: 'drop';
  frames: number;
  interval: number;
}
export interface FocusLine extends Kept {
  type: 'focus';
  state: 'lost' | 'back' | 'hidden' | 'visible' | 'left-full-screen' | 'full-screen';
}
export interface OverrideLine extends Kept {
  type: 'override';
  what: string;
  from: unknown;
  to: unknown;
}
export interface NoteLine extends Kept {
  type: 'note';
  what:
    | 'armed'
    | 'disarmed'
    | 'zero'
    | 'false-start'
    | 'interval'
    | 'pulses-stopped'
    | 'armed-late'
    | 'abort'
    | 'clock-jump'
    | 'operator'
    | 'text';
  text: string;
  value?: unknown;
}
export type LogEntry =
  PulseLine | ItemLine | KeyLine | ResponseLine | DropLine | FocusLine | OverrideLine | NoteLine;
/** An entry before the log has numbered it. */
export type NewEntry = LogEntry extends infer E ? (E extends LogEntry ? Omit<E, 'seq'> : never) : never;

export type EndState = 'complete' | 'partial' | 'recovered';
export interface LogEnd {
  type: 'end';
  time: number | null;
  page: number;
  state: EndState;
  reason: string;
  counts: Record<string, number>;
  /** SHA-256 of the lines before this one, each with its line end. */
  sha256: string;
}
