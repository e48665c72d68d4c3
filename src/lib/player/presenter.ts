/**
 * Which items are on in each frame, which sounds are started when, and a line in the log for each. It knows the plan
 * and the stage; zero and shift are told to it by the runtime with every frame.
 */
import { roundMicro } from './clock';
import { isDue } from './frames';
import type { RunLog } from './log';
import type { ItemLine } from './log-lines';
import type { ScheduledItem } from './schedule';

/** The screen and loudspeaker that a runtime plays on. */
export interface Stage {
  /** Draws exactly these items, in this order, in the present frame. Called only when they change. */
  draw(items: readonly ScheduledItem[]): void;
  /**
   * Has a sound begin at page time `at`, seconds. Answers the page time at which it will be heard by estimate, or
   * null where it cannot be played.
   */
  sound(item: ScheduledItem, at: number): number | null;
  /** Silences what has been started or planned. */
  silence(): void;
}

/** One frame: its timestamp, the page time of the plan's zero (`origin`, shift included), time zero; seconds. */
export interface Frame {
  page: number;
  origin: number;
  zero: number;
  interval: number;
}

/** Sounds are handed to the audio clock this long before they are due, seconds. */
export const SOUND_AHEAD = 0.3;

interface Sounding {
  sound: ScheduledItem;
  from: number;
  to: number;
  begun: boolean;
}

export class Presenter {
  readonly #visible: readonly ScheduledItem[];
  readonly #sounds: readonly ScheduledItem[];
  readonly #stage: Stage;
  readonly #log: RunLog;
  readonly #displayDelay: number;
  #next = 0;
  #nextSound = 0;
  #active: ScheduledItem[] = [];
  #sounding: Sounding[] = [];

  /** `displayDelay`: from a frame's timestamp to light, seconds. */
  constructor(items: readonly ScheduledItem[], stage: Stage, log: RunLog, displayDelay: number) {
    this.#visible = items.filter((i) => i.item.kind !== 'sound');
    this.#sounds = items.filter((i) => i.item.kind === 'sound');
    this.#stage = stage;
    this.#log = log;
    this.#displayDelay = displayDelay;
  }

  /** The item that comes next, if any. */
  get coming(): ScheduledItem | undefined {
    return this.#visible[this.#next] ?? this.#sounds[this.#nextSound];
  }

  /** Takes off, puts on and draws what is due in this frame; hands over the sounds that are near. */
  frame(f: Frame): void {
    this.#planSounds(f);
    this.#logSounds(f);
    if (this.#change(f)) this.#stage.draw(this.#active);
  }

  /** As before the first frame: after a false start. Nothing is logged. */
  reset(): void {
    this.#stage.silence();
    this.#next = this.#nextSound = 0;
    this.#active = [];
    this.#sounding = [];
    this.#stage.draw(this.#active);
  }

  /** Takes everything off; what has not been shown is reported with `reason`. */
  end(f: Frame, reason: string): void {
    this.#stage.silence();
    for (const item of this.#active) this.#item(item, 'off', f, f.page, f.page + this.#displayDelay);
    this.#logSounds(f);
    for (const { sound, begun } of this.#sounding)
      if (begun) this.#item(sound, 'off', f, null, f.page);
      else this.#notShown(sound, f, reason);
    for (const item of this.#visible.slice(this.#next)) this.#notShown(item, f, reason);
    for (const item of this.#sounds.slice(this.#nextSound)) this.#notShown(item, f, reason);
    this.#next = this.#visible.length;
    this.#nextSound = this.#sounds.length;
    this.#active = [];
    this.#sounding = [];
    this.#stage.draw(this.#active);
  }

  #planSounds(f: Frame): void {
    while (this.#nextSound < this.#sounds.length) {
      const sound = this.#sounds[this.#nextSound]!;
      const at = f.origin + sound.onset;
      if (at > f.page + SOUND_AHEAD) return;
      this.#nextSound += 1;
      if (f.origin + sound.end < f.page) {
        this.#notShown(sound, f, whyMissed(sound));
        continue;
      }
      const heard = this.#stage.sound(sound, at);
      if (heard === null) this.#notShown(sound, f, 'the computer plays no sound');
      else this.#sounding.push({ sound, from: heard, to: heard + sound.end - sound.onset, begun: false });
    }
  }

  /** Logs the begin and end of sounds once they have happened: what was only planned may still be stopped. */
  #logSounds(f: Frame): void {
    for (let i = 0; i < this.#sounding.length; i++) {
      const s = this.#sounding[i]!;
      if (!s.begun && s.from <= f.page) {
        s.begun = true;
        this.#item(s.sound, 'on', { ...f, page: s.from }, null, s.from);
      }
      if (s.to > f.page) continue;
      this.#item(s.sound, 'off', { ...f, page: s.to }, null, s.to);
      this.#sounding.splice(i--, 1);
    }
  }

  /** Answers whether anything changed. */
  #change(f: Frame): boolean {
    const shown = f.page + this.#displayDelay;
    let changed = false;
    for (let i = this.#active.length - 1; i >= 0; i--) {
      const item = this.#active[i]!;
      if (!isDue(f.origin + item.end, shown, f.interval)) continue;
      this.#active.splice(i, 1);
      this.#item(item, 'off', f, f.page, shown);
      changed = true;
    }
    while (this.#next < this.#visible.length) {
      const item = this.#visible[this.#next]!;
      if (!isDue(f.origin + item.onset, shown, f.interval)) break;
      this.#next += 1;
      // Whatever lay wholly between the frames that there were has been missed, and is said to be.
      if (f.origin + item.end <= shown - f.interval / 2) {
        this.#notShown(item, f, whyMissed(item));
        continue;
      }
      this.#insert(item);
      this.#item(item, 'on', f, f.page, shown);
      changed = true;
    }
    return changed;
  }

  #insert(item: ScheduledItem): void {
    let at = this.#active.length;
    while (at > 0 && this.#active[at - 1]!.layer > item.layer) at -= 1;
    this.#active.splice(at, 0, item);
  }

  #item(
    s: ScheduledItem,
    state: ItemLine['state'],
    f: Frame,
    frame: number | null,
    shown: number | null,
    reason?: string
  ): void {
    this.#log.add({
      type: 'item',
      page: f.page,
      state,
      trial: s.trial,
      trialId: s.trialId,
      itemId: s.item.id,
      item: s.item.name,
      kind: s.item.kind,
      planned: state === 'off' ? s.end : s.onset,
      frame: frame === null ? null : roundMicro(frame - f.zero),
      shown: shown === null ? null : roundMicro(shown),
      ...(reason === undefined ? {} : { reason })
    });
  }
  #notShown(item: ScheduledItem, f: Frame, reason: string): void {
    this.#item(item, 'not-shown', f, null, null, reason);
  }
}

const whyMissed = (item: ScheduledItem): string =>
  item.end <= 0 ? 'over before time zero' : 'no frame while it was due';
