/**
 * A rehearsal: the player's own runtime with a simulated scanner and, if wanted, an automatic participant.
 * `rehearse` runs it on a virtual clock, as fast as possible; `render/rehearsal-host.ts` drives the same
 * `Rehearsal` by the screen's frames.
 */
import type { EventRow } from '$lib/task/events';
import type { Profile } from '$lib/task/profile';
import type { Run, TaskDocument } from '$lib/task/schema';
import { VirtualClock } from './clock';
import { makeHeader } from './header';
import { RunLog, writeLog } from './log';
import type { LogHeader, Timing } from './log-lines';
import type { PlanRow } from './payload';
import { rowsOf } from './performance';
import type { PulseNews } from './pulses';
import { makeReport, type Report } from './report';
import { Runtime, type Stage } from './runtime';
import { buildSchedule, type Schedule } from './schedule';
import type { Answer } from './responses';
import {
  simulateAnswers,
  simulatePulses,
  type AnswerOptions,
  type ScannerOptions,
  type SimulatedKey
} from './simulate';

export interface RehearsalOptions {
  document: TaskDocument;
  run: Run;
  profile: Profile;
  /** Whose fingers; null: the document's own. */
  plan?: PlanRow | null;
  scanner: ScannerOptions;
  answers: 'keyboard' | AnswerOptions;
  /** Real: by the screen's frames, needs `render/rehearsal-host.ts`. Virtual: as fast as possible. */
  speed: 'real' | 'virtual';
  timing?: Timing;
  startedAt?: Date;
  onAnswer?: (answer: Answer) => void;
  /** Told of what the simulated scanner's pulses mean, as they come. */
  onPulse?: (news: PulseNews) => void;
}

export interface RehearsalResult {
  /** The log, one JSON object a line. */
  lines: string[];
  rows: EventRow[];
  report: Report;
  /** Ended by hand before its end. */
  partial: boolean;
}

/** A stage that shows nothing and plays every sound at its time. */
export const blindStage: Stage = { draw: () => {}, sound: (_item, at) => at, silence: () => {} };

/** Seconds between arming and the scanner's first pulse. */
const LEAD = 1;

export class Rehearsal {
  readonly schedule: Schedule;
  readonly runtime: Runtime;
  readonly log: RunLog;
  readonly header: LogHeader;
  readonly #options: RehearsalOptions;
  readonly #pulses: number[];
  readonly #keys: SimulatedKey[];
  #nextPulse = 0;
  #nextKey = 0;

  /** Arms at page time `now`, seconds; the first pulse is due a second later. */
  constructor(options: RehearsalOptions, stage: Stage, now: number, frameInterval?: number) {
    const { document: doc, run, profile, plan = null, answers, scanner } = options;
    const timing = options.timing ?? 'free-run';
    this.#options = options;
    this.schedule = buildSchedule(doc, run, profile, plan);
    this.header = makeHeader({
      kind: 'REHEARSAL',
      simulated: true,
      document: doc,
      profile,
      run,
      row: plan,
      timing,
      started: options.startedAt ?? new Date()
    });
    this.log = new RunLog(this.header);
    this.runtime = new Runtime({
      schedule: this.schedule,
      profile,
      log: this.log,
      stage,
      timing,
      source: 'simulated',
      frameInterval,
      onAnswer: options.onAnswer,
      onPulse: options.onPulse
    });
    this.#pulses = simulatePulses(this.runtime.pulses.plan, scanner, now + LEAD);
    this.#keys = answers === 'keyboard' ? [] : simulateAnswers(this.schedule, answers);
    this.runtime.arm(now);
  }

  /** Hands in the pulses and automatic presses that are due by `now`, in order of time. */
  feed(now: number): void {
    for (;;) {
      const pulse = this.#pulses[this.#nextPulse] ?? Infinity;
      const key = this.#nextKeyAt(now);
      if (Math.min(pulse, key) > now || this.runtime.isOver) return;
      if (pulse <= key) {
        this.#nextPulse += 1;
        this.runtime.edge(pulse);
      } else {
        const { code, state } = this.#keys[this.#nextKey++]!;
        if (state === 'down') this.runtime.keyDown(code, key);
        else this.runtime.keyUp(code, key);
      }
    }
  }
  #nextKeyAt(now: number): number {
    const elapsed = this.runtime.elapsed(now);
    const key = this.#keys[this.#nextKey];
    return elapsed === null || !key ? Infinity : now - elapsed + key.time;
  }

  /** One frame of the screen, with its timestamp in page seconds. */
  frame(now: number): void {
    this.feed(now);
    this.runtime.frame(now);
  }

  result(now: number): RehearsalResult {
    const { document: doc, run } = this.#options;
    const partial = this.runtime.state !== 'complete';
    const { entries } = this.log;
    const rows = rowsOf(doc, run, this.header, entries);
    const name = (id: string | null) => doc.brief.conditions.find((c) => c.id === id)?.name ?? 'no condition';
    return {
      lines: writeLog(this.header, entries, {
        state: partial ? 'partial' : 'complete',
        reason: partial ? 'rehearsal ended by hand' : 'the run is over',
        page: now
      }),
      rows,
      report: makeReport({
        header: this.header,
        entries,
        schedule: this.schedule,
        rows,
        frameInterval: this.runtime.frames.interval,
        conditionName: name
      }),
      partial
    };
  }
}

/** Rehearses at once, on a virtual clock with the profile's frame rate. Automatic or no answers. */
export function rehearse(options: RehearsalOptions, stage: Stage = blindStage): RehearsalResult {
  if (options.speed !== 'virtual')
    throw new Error(
      `A rehearsal at speed '${options.speed}' needs a screen: use rehearseOnScreen, or speed 'virtual'.`
    );
  const clock = new VirtualClock();
  const rehearsal = new Rehearsal(options, stage, clock.now());
  const interval = 1 / options.profile.screen.refreshRate;
  // Without a pulse no run would ever begin: a minute beyond its length it is called off.
  const latest =
    rehearsal.schedule.end + LEAD + 60 + options.profile.pulsesBeforeZero * rehearsal.schedule.tr;
  for (let n = 0; !rehearsal.runtime.isOver; n++) {
    clock.moveTo(n * interval);
    if (clock.now() > latest) rehearsal.runtime.abort(clock.now(), 'no time zero');
    else rehearsal.frame(clock.now());
  }
  return rehearsal.result(clock.now());
}
