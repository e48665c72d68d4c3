/**
 * From edges on the trigger input to run time zero and a count of volumes.
 *
 * Nothing here waits or schedules: `edge` takes what came in, `tick` says how late it has become, and both answer
 * with news. Times are page seconds. Rules: `player.md`, 'Time and pulses', as kept in this room's README.
 */
import type { Profile } from '$lib/task/profile';
import { PulseLine } from './pulse-line';

export interface PulsePlan {
  mode: Profile['pulses']['mode'];
  /** Pulses in one volume, 1 unless the mode is several-per-volume. */
  perVolume: number;
  /** Seconds. */
  tr: number;
  /** Part of the TR over which the pulses of one volume are spread, seconds. */
  acquisitionTime: number;
  /** Volumes with pulses before the first stored one. */
  before: number;
  /** Stored volumes. */
  volumes: number;
}

export type IgnoredReason = 'not-armed' | 'held-key' | 'bounce' | 'extra' | 'not-expected' | 'after-the-last';
export type PulseNews =
  | { kind: 'ignored'; time: number; reason: IgnoredReason }
  | { kind: 'pulse'; time: number; /** From time zero; negative before it. */ volume: number; part: number }
  | {
      kind: 'zero';
      time: number;
      /** Put where the line says, since its own pulse did not come. */ bridged: boolean;
    }
  | { kind: 'false-start'; time: number }
  | { kind: 'missed'; time: number; volume: number; part: number }
  | { kind: 'interval'; time: number; measured: number; planned: number; agrees: boolean }
  | { kind: 'stopped'; time: number; /** When the last pulse came. */ last: number };

/** Two edges nearer than this are one, seconds; a shorter pulse interval lowers it. */
const DEBOUNCE = 0.005;
/** How long the pulse of time zero is waited for once it is due, seconds: pulse jitter is of milliseconds. */
const GRACE = 0.025;
/** No pulse for this many volumes: stopped. */
const STOPPED_AFTER = 3;

export const pulsePlan = (profile: Profile, tr: number, volumes: number): PulsePlan => ({
  mode: profile.pulses.mode,
  perVolume: profile.pulses.mode === 'several-per-volume' ? profile.pulses.perVolume : 1,
  tr,
  acquisitionTime: Math.min(tr, profile.acquisitionTime ?? tr),
  before: profile.pulsesBeforeZero,
  volumes
});

export class PulseReader {
  readonly plan: PulsePlan;
  line: PulseLine;
  armed = false;
  /** Page time of the start of the first stored volume; null while unknown. */
  zero: number | null = null;
  /** Pulses counted since arming, and those that should have come and did not. */
  found = 0;
  missed = 0;
  /** Whether the interval measured after three volumes agreed with the TR; null before that. */
  agrees: boolean | null = null;
  #lastEdge = -Infinity;
  #last = -1;
  #lastTime = 0;
  #first = 0;
  /** Next pulse that may be called missed. */
  #due = 0;
  #stopped = false;

  constructor(plan: PulsePlan) {
    this.plan = plan;
    this.line = new PulseLine(plan.tr);
  }

  arm(): void {
    this.#forget();
    this.armed = true;
  }
  disarm(): void {
    this.#forget();
    this.armed = false;
  }

  /** Seconds after the first pulse within which the second must come. */
  get secondWithin(): number {
    return 1.5 * this.#interval(0);
  }
  get debounce(): number {
    return Math.min(DEBOUNCE, 0.4 * this.#interval(0));
  }
  /** Second pulse seen (or none is to be expected): the start is no false one. */
  get confirmed(): boolean {
    return this.plan.mode === 'once' ? this.found > 0 : this.found > 1;
  }

  /** One edge at page time `time`; `held`: auto-repeat of a key that was not let go. */
  edge(time: number, held = false): PulseNews[] {
    if (held) return [{ kind: 'ignored', time, reason: 'held-key' }];
    if (!this.armed) return [{ kind: 'ignored', time, reason: 'not-armed' }];
    const bounce = time - this.#lastEdge < this.debounce;
    this.#lastEdge = time;
    if (bounce) return [{ kind: 'ignored', time, reason: 'bounce' }];
    if (this.found === 0) return this.#take(0, time);
    if (this.plan.mode === 'once') return [{ kind: 'ignored', time, reason: 'not-expected' }];
    const step = this.#stepsSince(time);
    if (step === 0) return [{ kind: 'ignored', time, reason: 'extra' }];
    const index = this.#last + step;
    if (index >= this.#total) return [{ kind: 'ignored', time, reason: 'after-the-last' }];
    const news: PulseNews[] = [];
    for (let i = Math.max(this.#due, this.#last + 1); i < index; i++) news.push(this.#miss(i, time));
    return news.concat(this.#take(index, time));
  }

  /** What has become late by page time `now`. */
  tick(now: number): PulseNews[] {
    if (!this.armed || this.found === 0 || this.plan.mode === 'once') return [];
    if (this.found === 1) {
      if (now - this.#first <= this.secondWithin || this.#total === 1) return [];
      this.arm();
      return [{ kind: 'false-start', time: now }];
    }
    const news: PulseNews[] = [];
    const zero = this.line.timeAt(0);
    if (this.zero === null && now > zero + GRACE) news.push(this.#fix(zero, true));
    while (this.#due < this.#total && now > this.#expected(this.#due) + this.#interval(this.#due) / 2)
      news.push(this.#miss(this.#due, now));
    const silence = now - this.#lastTime;
    if (!this.#stopped && this.#last < this.#total - 1 && silence > STOPPED_AFTER * this.plan.tr) {
      this.#stopped = true;
      news.push({ kind: 'stopped', time: now, last: this.#lastTime });
    }
    return news;
  }

  get #total(): number {
    return (this.plan.before + this.plan.volumes) * this.plan.perVolume;
  }
  /** Position of pulse `index` (0 = first after arming) in volumes from time zero. */
  #position(index: number): number {
    const { perVolume, acquisitionTime, tr, before } = this.plan;
    const part = (index % perVolume) * (acquisitionTime / perVolume / tr);
    return Math.floor(index / perVolume) - before + part;
  }
  #expected(index: number): number {
    return this.line.timeAt(this.#position(index));
  }
  /** Planned seconds from pulse `index` to the next. */
  #interval(index: number): number {
    return (this.#position(index + 1) - this.#position(index)) * this.plan.tr;
  }
  /** How many pulses on from the last one `time` is nearest to; 0: too soon for another. */
  #stepsSince(time: number): number {
    const { tr, perVolume } = this.plan;
    const here = this.#position(this.#last);
    const passed = (time - this.#lastTime) / tr;
    let step = Math.max(0, (Math.floor(passed) - 1) * perVolume);
    const off = (s: number) => Math.abs(this.#position(this.#last + s) - here - passed);
    while (off(step + 1) <= off(step)) step += 1;
    return step;
  }
  #take(index: number, time: number): PulseNews[] {
    const position = this.#position(index);
    this.line.add(position, time);
    if (this.found === 0) this.#first = time;
    this.found += 1;
    this.#last = index;
    this.#lastTime = time;
    // Called missed already, and came after all.
    if (index < this.#due) this.missed -= 1;
    this.#due = Math.max(this.#due, index + 1);
    this.#stopped = false;
    const { before, perVolume, mode, tr } = this.plan;
    const news: PulseNews[] = [
      { kind: 'pulse', time, volume: Math.floor(index / perVolume) - before, part: index % perVolume }
    ];
    if (this.zero === null) {
      if (mode === 'once') news.push(this.#fix(time + before * tr, false));
      else if (index === before * perVolume) news.push(this.#fix(time, false));
      else if (position > 0) news.push(this.#fix(this.line.timeAt(0), true));
    }
    if (this.agrees === null && mode !== 'once' && position + before >= 3 && this.line.count >= 4) {
      const measured = this.line.measured;
      this.agrees = Math.abs(measured - tr) <= Math.max(0.01 * tr, 0.01);
      news.push({ kind: 'interval', time, measured, planned: tr, agrees: this.agrees });
    }
    return news;
  }
  #fix(time: number, bridged: boolean): PulseNews {
    this.zero = time;
    return { kind: 'zero', time, bridged };
  }
  #miss(index: number, time: number): PulseNews {
    this.missed += 1;
    this.#due = index + 1;
    const { perVolume, before } = this.plan;
    return { kind: 'missed', time, volume: Math.floor(index / perVolume) - before, part: index % perVolume };
  }
  #forget(): void {
    this.line = new PulseLine(this.plan.tr);
    this.zero = null;
    this.found = 0;
    this.missed = 0;
    this.agrees = null;
    this.#lastEdge = -Infinity;
    this.#last = -1;
    this.#due = 0;
    this.#stopped = false;
  }
}
