/**
 * One attempt at one run: entry → check → ready → armed → running → complete or partial.
 *
 * It owns no clock and no screen. The host hands in edges, keys and frames with their page time (seconds) and gets
 * told what to draw and which sound to start when; every event goes into the log. The same code runs behind the
 * bundle's canvas, in the rehearsal and, on a virtual clock, in tests.
 */
import type { Profile } from '../task/profile';
import { roundMicro } from './clock';
import { FrameMeter, isDue } from './frames';
import type { RunLog } from './log';
import type { FocusLine, ItemLine, PulseLine as PulseEntry, Timing } from './log-lines';
import { pulsePlan, PulseReader, type PulseNews } from './pulses';
import { ResponseReader, type Answer } from './responses';
import type { Schedule, ScheduledItem } from './schedule';

export type RunState = 'ready' | 'armed' | 'running' | 'complete' | 'partial';

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

export interface RuntimeOptions {
  schedule: Schedule;
  profile: Profile;
  log: RunLog;
  stage: Stage;
  timing: Timing;
  source?: PulseEntry['source'];
  /** Measured frame interval to begin with, seconds. */
  frameInterval?: number;
  /** Told of every change of state. */
  onState?: (state: RunState, reason: string) => void;
  onPulse?: (news: PulseNews) => void;
  onAnswer?: (answer: Answer) => void;
}

/** Sounds are handed to the audio clock this long before they are due, seconds. */
const SOUND_AHEAD = 0.3;
/** Windows are closed this long after their end, seconds, since a key may be reported after its frame. */
const INPUT_LAG = 0.1;
/** A pause between frames that only a stopped computer makes, seconds. */
const CLOCK_JUMP = 10;

export class Runtime {
  readonly pulses: PulseReader;
  readonly frames: FrameMeter;
  readonly #o: RuntimeOptions;
  #state: RunState = 'ready';
  #responses: ResponseReader;
  /** Page time of time zero while running, seconds. */
  #zero = 0;
  /** Added to planned times in pulse-locked mode, seconds. */
  #shift = 0;
  #shiftedTrial = 0;
  #next = 0;
  #nextSound = 0;
  #active: ScheduledItem[] = [];
  #sounding: { sound: ScheduledItem; from: number; to: number; begun: boolean }[] = [];
  #lastFrame = NaN;
  readonly #visible: ScheduledItem[];
  readonly #sounds: ScheduledItem[];

  constructor(options: RuntimeOptions) {
    this.#o = options;
    const { schedule, profile } = options;
    this.pulses = new PulseReader(pulsePlan(profile, schedule.tr, schedule.volumes));
    this.frames = new FrameMeter(options.frameInterval ?? 1 / profile.screen.refreshRate);
    this.#visible = schedule.items.filter((i) => i.item.kind !== 'sound');
    this.#sounds = schedule.items.filter((i) => i.item.kind === 'sound');
    this.#responses = new ResponseReader(schedule.windows, schedule.responses);
  }

  get state(): RunState {
    return this.#state;
  }
  /** Whether the run has ended, one way or the other. */
  get isOver(): boolean {
    return this.#state === 'complete' || this.#state === 'partial';
  }
  /** Seconds from time zero at page time `now`; null before zero. */
  elapsed(now: number): number | null {
    return this.#state === 'running' || this.isOver ? now - this.#zero : null;
  }

  /** From now on pulses count. */
  arm(page: number): void {
    if (this.#state !== 'ready') return;
    this.pulses.arm();
    this.#note(page, 'armed', 'Armed: the next pulse counts.');
    this.#become('armed');
  }
  /** Pulses are shown again, not obeyed. */
  disarm(page: number): void {
    if (this.#state !== 'armed') return;
    this.pulses.disarm();
    this.#note(page, 'disarmed', 'Disarmed.');
    this.#become('ready');
  }
  /** Starts without a scanner: time zero is now. For PRACTICE. */
  startByKey(page: number): void {
    if (this.#state !== 'ready') return;
    this.#note(page, 'zero', 'Started by key, without a scanner.', { bridged: false, byKey: true });
    this.#begin(page);
  }

  /** An edge on the trigger input. */
  edge(page: number, held = false): void {
    if (this.isOver) return;
    this.#hear(this.pulses.edge(page, held));
  }

  /** A key went down; the trigger key is an edge and never a response. `held`: auto-repeat, which is no press. */
  keyDown(code: string, page: number, held = false): void {
    if (this.isOver) return;
    if (code === this.#o.profile.triggerKey) return this.edge(page, held);
    if (held) return;
    this.#key('down', code, page);
    const response = this.#responses.responseOf(code);
    if (!response || this.#state !== 'running') return;
    const pressed = page - this.#o.profile.deviceDelay.seconds;
    const time = this.#planned(pressed);
    this.#answers(this.#responses.advance(time), page);
    const press = this.#responses.press(response, time);
    this.#o.log.add({
      type: 'response',
      page,
      state: 'press',
      place: press.place,
      trial: press.window?.trial ?? null,
      trialId: press.window?.trialId ?? null,
      windowId: press.window?.window.id ?? null,
      responses: [response.id],
      names: [response.name],
      presses: [roundMicro(pressed)]
    });
  }
  keyUp(code: string, page: number): void {
    if (!this.isOver && code !== this.#o.profile.triggerKey) this.#key('up', code, page);
  }
  focus(state: FocusLine['state'], page: number): void {
    if (!this.isOver) this.#o.log.add({ type: 'focus', page, state });
  }

  /** A frame begins, with its timestamp. Everything due in it is drawn before it ends. */
  frame(page: number): void {
    if (this.isOver) return;
    const dropped = this.frames.frame(page);
    if (this.#state === 'running' && dropped > 0) this.#drop(dropped, page);
    this.#lastFrame = page;
    this.tick(page);
    if (this.#state !== 'running') return;
    const shown = page + this.#o.profile.displayDelay.seconds;
    this.#follow(page);
    this.#planSounds(page);
    this.#logSounds(page);
    if (this.#change(page, shown)) this.#o.stage.draw(this.#active);
    this.#answers(this.#responses.advance(this.#planned(page) - INPUT_LAG), page);
    if (page >= this.#zero + this.#shift + this.#o.schedule.end)
      this.#end('complete', 'the run is over', page);
  }

  /** Looks at what has become late; called by every frame, and by a timer while frames are paused. */
  tick(page: number): void {
    if (!this.isOver) this.#hear(this.pulses.tick(page));
  }

  /** Ends the run early. What was done is kept. */
  abort(page: number, reason: string): void {
    if (this.isOver) return;
    this.#note(page, 'abort', reason);
    this.#end('partial', reason, page);
  }

  /** Page time → planned time, seconds from zero. */
  #planned(page: number): number {
    return page - this.#zero - this.#shift;
  }

  #become(state: RunState, reason = ''): void {
    this.#state = state;
    this.#o.onState?.(state, reason);
  }
  #note(
    page: number,
    what:
      | 'armed'
      | 'disarmed'
      | 'zero'
      | 'false-start'
      | 'interval'
      | 'pulses-stopped'
      | 'armed-late'
      | 'abort'
      | 'clock-jump',
    text: string,
    value?: unknown
  ): void {
    this.#o.log.add({ type: 'note', page, what, text, ...(value === undefined ? {} : { value }) });
  }
  #key(state: 'down' | 'up', code: string, page: number): void {
    const finger = this.#o.profile.responseKeys.find((k) => k.code === code)?.finger ?? null;
    this.#o.log.add({ type: 'key', page, state, code, finger });
  }
  #drop(frames: number, page: number): void {
    const passed = page - this.#lastFrame;
    this.#o.log.add({ type: 'drop', page, frames, interval: roundMicro(passed) });
    if (passed > CLOCK_JUMP)
      this.#note(
        page,
        'clock-jump',
        `No frame for ${passed.toFixed(1)} s: was the computer asleep or the window hidden?`
      );
  }

  #begin(zero: number): void {
    this.#zero = zero;
    this.#become('running');
  }

  #hear(all: readonly PulseNews[]): void {
    for (const news of all) {
      this.#obey(news);
      this.#o.onPulse?.(news);
      if (this.isOver) return;
    }
  }
  #obey(news: PulseNews): void {
    const page = news.time;
    const source = this.#o.source ?? 'keyboard';
    switch (news.kind) {
      case 'ignored':
        // A held key repeats thirty times a second and tells nothing.
        if (news.reason !== 'held-key')
          this.#o.log.add({
            type: 'pulse',
            page,
            volume: null,
            part: null,
            state: 'ignored',
            reason: news.reason,
            source
          });
        return;
      case 'pulse':
        this.#o.log.add({
          type: 'pulse',
          page,
          volume: news.volume,
          part: news.part,
          state: 'counted',
          source
        });
        return;
      case 'missed':
        this.#o.log.add({
          type: 'pulse',
          page,
          volume: news.volume,
          part: news.part,
          state: 'missed',
          source
        });
        return;
      case 'zero':
        this.#note(page, 'zero', news.bridged ? 'Time zero by the pulses around it.' : 'Time zero.', {
          bridged: news.bridged
        });
        return this.#begin(page);
      case 'false-start':
        return this.#falseStart(page);
      case 'interval': {
        const words = `scanner ${news.measured.toFixed(3)} s, planned ${news.planned.toFixed(3)} s`;
        return this.#note(page, 'interval', news.agrees ? words : `${words}: another TR than planned`, {
          measured: news.measured,
          planned: news.planned,
          agrees: news.agrees
        });
      }
      case 'stopped':
        this.#note(page, 'pulses-stopped', `No pulse for ${(page - news.last).toFixed(1)} s.`);
        if (this.#o.profile.whenPulsesStop === 'end-as-partial' && this.#state === 'running')
          this.#end('partial', 'the pulses stopped', page);
    }
  }

  /** One pulse and no second: it was none of the run's. Everything is as before it, and still armed. */
  #falseStart(page: number): void {
    this.#note(page, 'false-start', 'One pulse without a second: armed again.');
    this.#o.stage.silence();
    this.#active = [];
    this.#sounding = [];
    this.#o.stage.draw(this.#active);
    this.#next = this.#nextSound = this.#shift = this.#shiftedTrial = 0;
    this.#responses = new ResponseReader(this.#o.schedule.windows, this.#o.schedule.responses);
    this.#become('armed', 'false start');
  }

  /** Pulse-locked: at each new trial the plan moves to where the pulses say, by at most one frame. */
  #follow(page: number): void {
    if (this.#o.timing !== 'pulse-locked' || this.pulses.line.count < 4 || this.pulses.agrees === false)
      return;
    const coming = this.#visible[this.#next] ?? this.#sounds[this.#nextSound];
    if (!coming || coming.trial === this.#shiftedTrial) return;
    if (this.#zero + this.#shift + coming.onset > page + SOUND_AHEAD) return;
    this.#shiftedTrial = coming.trial;
    const wanted = this.pulses.line.timeAt(coming.onset / this.#o.schedule.tr) - this.#zero - coming.onset;
    const most = this.frames.interval;
    this.#shift += Math.min(most, Math.max(-most, wanted - this.#shift));
  }

  #planSounds(page: number): void {
    while (this.#nextSound < this.#sounds.length) {
      const sound = this.#sounds[this.#nextSound]!;
      const at = this.#zero + this.#shift + sound.onset;
      if (at > page + SOUND_AHEAD) return;
      this.#nextSound += 1;
      if (sound.end < this.#planned(page)) {
        this.#notShown(sound, page, this.#whyMissed(sound));
        continue;
      }
      const heard = this.#o.stage.sound(sound, at);
      if (heard === null) this.#notShown(sound, page, 'the computer plays no sound');
      else this.#sounding.push({ sound, from: heard, to: heard + sound.end - sound.onset, begun: false });
    }
  }

  /** Logs the begin and end of sounds once they have happened: what was only planned may still be stopped. */
  #logSounds(page: number): void {
    for (let i = 0; i < this.#sounding.length; i++) {
      const s = this.#sounding[i]!;
      if (!s.begun && s.from <= page) {
        s.begun = true;
        this.#item(s.sound, 'on', s.from, null, s.from);
      }
      if (s.to > page) continue;
      this.#item(s.sound, 'off', s.to, null, s.to);
      this.#sounding.splice(i--, 1);
    }
  }

  /** Takes off and puts on what is due in the frame at `page`, seen at `shown`. Answers whether anything changed. */
  #change(page: number, shown: number): boolean {
    const interval = this.frames.interval;
    const plan = this.#zero + this.#shift;
    let changed = false;
    for (let i = this.#active.length - 1; i >= 0; i--) {
      const item = this.#active[i]!;
      if (!isDue(plan + item.end, shown, interval)) continue;
      this.#active.splice(i, 1);
      this.#item(item, 'off', page, page, shown);
      changed = true;
    }
    while (this.#next < this.#visible.length) {
      const item = this.#visible[this.#next]!;
      if (!isDue(plan + item.onset, shown, interval)) break;
      this.#next += 1;
      // Whatever lay wholly between the frames that there were has been missed, and is said to be.
      if (plan + item.end <= shown - interval / 2) {
        this.#notShown(item, page, this.#whyMissed(item));
        continue;
      }
      this.#insert(item);
      this.#item(item, 'on', page, page, shown);
      changed = true;
    }
    return changed;
  }
  #whyMissed(item: ScheduledItem): string {
    return item.end <= 0 ? 'over before time zero' : 'no frame while it was due';
  }
  #insert(item: ScheduledItem): void {
    let at = this.#active.length;
    while (at > 0 && this.#active[at - 1]!.layer > item.layer) at -= 1;
    this.#active.splice(at, 0, item);
  }

  #item(
    s: ScheduledItem,
    state: ItemLine['state'],
    page: number,
    frame: number | null,
    shown: number | null,
    reason?: string
  ): void {
    this.#o.log.add({
      type: 'item',
      page,
      state,
      trial: s.trial,
      trialId: s.trialId,
      itemId: s.item.id,
      item: s.item.name,
      kind: s.item.kind,
      planned: state === 'off' ? s.end : s.onset,
      frame: frame === null ? null : roundMicro(frame - this.#zero),
      shown: shown === null ? null : roundMicro(shown),
      ...(reason === undefined ? {} : { reason })
    });
  }
  #notShown(item: ScheduledItem, page: number, reason: string): void {
    this.#item(item, 'not-shown', page, null, null, reason);
  }

  #answers(answers: readonly Answer[], page: number): void {
    for (const answer of answers) {
      const { window, verdict, taken } = answer;
      this.#o.log.add({
        type: 'response',
        page,
        state: verdict,
        trial: window.trial,
        trialId: window.trialId,
        windowId: window.window.id,
        responses: taken.map((p) => p.response.id),
        names: taken.map((p) => p.response.name),
        presses: taken.map((p) => roundMicro(p.time + this.#zero + this.#shift))
      });
      this.#o.onAnswer?.(answer);
    }
  }

  #end(state: 'complete' | 'partial', reason: string, page: number): void {
    const began = this.#state === 'running';
    this.#o.stage.silence();
    if (began) {
      this.#answers(this.#responses.advance(this.#planned(page)), page);
      const open = this.#responses.finish();
      // A window that an abort cut short was not missed by the participant.
      this.#answers(state === 'complete' ? open : open.filter((a) => a.presses > 0), page);
      const shown = page + this.#o.profile.displayDelay.seconds;
      for (const item of this.#active) this.#item(item, 'off', page, page, shown);
      this.#logSounds(page);
      for (const { sound, begun } of this.#sounding)
        if (begun) this.#item(sound, 'off', page, null, page);
        else this.#notShown(sound, page, reason);
      const { mode } = this.#o.profile.pulses;
      const lacking = this.pulses.plan.volumes * this.pulses.plan.perVolume - this.pulses.found;
      if (state === 'complete' && this.pulses.found > 0 && mode !== 'once' && lacking > 0)
        this.#note(page, 'armed-late', `${lacking} pulses fewer than planned: armed late, or missed?`, {
          lacking
        });
    }
    for (const item of this.#visible.slice(this.#next)) this.#notShown(item, page, reason);
    for (const item of this.#sounds.slice(this.#nextSound)) this.#notShown(item, page, reason);
    this.#active = [];
    this.#sounding = [];
    this.#next = this.#visible.length;
    this.#nextSound = this.#sounds.length;
    this.#o.stage.draw(this.#active);
    this.#become(state, reason);
  }
}
