/**
 * One attempt at one run: entry → check → ready → armed → running → complete or partial.
 *
 * It owns no clock and no screen. The host hands in edges, keys and frames with their page time (seconds) and gets
 * told what to draw and which sound to start when; every event goes into the log. The same code runs behind the
 * bundle's canvas, in the rehearsal and, on a virtual clock, in tests.
 */
import type { Profile } from '$lib/task/profile';
import { roundMicro } from './clock';
import { FrameMeter } from './frames';
import type { RunLog } from './log';
import type { FocusLine, PulseLine as PulseEntry, Timing } from './log-lines';
import { Presenter, SOUND_AHEAD, type Frame, type Stage } from './presenter';
import { pulsePlan, PulseReader, type PulseNews } from './pulses';
import { ResponseReader, type Answer } from './responses';
import type { Schedule } from './schedule';

export type RunState = 'ready' | 'armed' | 'running' | 'complete' | 'partial';

export type { Stage } from './presenter';

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
  readonly #presenter: Presenter;
  /** Page time of time zero while running, seconds. */
  #zero = NaN;
  /** Added to planned times in pulse-locked mode, seconds. */
  #shift = 0;
  #shiftedTrial = 0;
  #lastFrame = NaN;

  constructor(options: RuntimeOptions) {
    this.#o = options;
    const { schedule, profile } = options;
    this.pulses = new PulseReader(pulsePlan(profile, schedule.tr, schedule.volumes));
    this.frames = new FrameMeter(options.frameInterval ?? 1 / profile.screen.refreshRate);
    const { stage, log } = options;
    this.#presenter = new Presenter(schedule.items, stage, log, profile.displayDelay.seconds);
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
    const passed = now - this.#zero;
    return Number.isNaN(passed) ? null : passed;
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
    this.#follow(page);
    this.#presenter.frame(this.#frameAt(page));
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

  #frameAt(page: number): Frame {
    return { page, origin: this.#zero + this.#shift, zero: this.#zero, interval: this.frames.interval };
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
    this.#presenter.reset();
    this.#zero = NaN;
    this.#shift = this.#shiftedTrial = 0;
    this.#responses = new ResponseReader(this.#o.schedule.windows, this.#o.schedule.responses);
    this.#become('armed', 'false start');
  }

  /** Pulse-locked: at each new trial the plan moves to where the pulses say, by at most one frame. */
  #follow(page: number): void {
    if (this.#o.timing !== 'pulse-locked' || this.pulses.line.count < 4 || this.pulses.agrees === false)
      return;
    const { coming } = this.#presenter;
    if (!coming || coming.trial === this.#shiftedTrial) return;
    if (this.#zero + this.#shift + coming.onset > page + SOUND_AHEAD) return;
    this.#shiftedTrial = coming.trial;
    const wanted = this.pulses.line.timeAt(coming.onset / this.#o.schedule.tr) - this.#zero - coming.onset;
    const most = this.frames.interval;
    this.#shift += Math.min(most, Math.max(-most, wanted - this.#shift));
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
    if (this.#state === 'running') {
      this.#answers(this.#responses.advance(this.#planned(page)), page);
      const open = this.#responses.finish();
      // A window that an abort cut short was not missed by the participant.
      this.#answers(state === 'complete' ? open : open.filter((a) => a.presses > 0), page);
      const { mode } = this.#o.profile.pulses;
      const lacking = this.pulses.plan.volumes * this.pulses.plan.perVolume - this.pulses.found;
      if (state === 'complete' && this.pulses.found > 0 && mode !== 'once' && lacking > 0)
        this.#note(page, 'armed-late', `${lacking} pulses fewer than planned: armed late, or missed?`, {
          lacking
        });
    }
    this.#presenter.end(this.#frameAt(page), reason);
    this.#become(state, reason);
  }
}
