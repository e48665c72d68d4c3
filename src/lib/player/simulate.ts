/** A scanner and a participant made of seeded random numbers, for rehearsals and tests. */
import { exp, log } from '$lib/engine/elementary';
import { seeded, type Random } from '$lib/engine/random';
import type { PulsePlan } from './pulses';
import type { Schedule } from './schedule';

export interface ScannerOptions {
  /** Standard deviation of each pulse about its time, seconds. */
  jitterSd: number;
  /** Share of pulses that do not arrive, 0 to 1. The first two always do: without them no run begins. */
  missRate: number;
  seed: string;
  /** Parts per million by which the scanner is slower than planned. */
  slowBy?: number;
  /** Pulses end after this many volumes. */
  stopAfter?: number;
}

/** Page times of the pulses of a scan whose first pulse is due at `start`, seconds, in order. */
export function simulatePulses(plan: PulsePlan, scanner: ScannerOptions, start: number): number[] {
  const random = seeded(`pulses ${scanner.seed}`);
  const tr = plan.tr * (1 + (scanner.slowBy ?? 0) / 1e6);
  const { perVolume, acquisitionTime } = plan;
  const volumes =
    plan.mode === 'once' ? 1 : Math.min(plan.before + plan.volumes, scanner.stopAfter ?? Infinity);
  const apart = acquisitionTime / perVolume;
  // A jitter that could swap two pulses would be none of a scanner's.
  const most = 0.4 * apart;
  const times: number[] = [];
  for (let i = 0; i < volumes * perVolume; i++) {
    const jitter = Math.max(-most, Math.min(most, scanner.jitterSd * random.normal()));
    const arrives = random.next() >= scanner.missRate;
    if (arrives || i < 2)
      times.push(start + Math.floor(i / perVolume) * tr + (i % perVolume) * apart + jitter);
  }
  return times.sort((a, b) => a - b);
}

export interface AnswerOptions {
  /** Mean and standard deviation of reaction time from the window's opening, seconds (log-normal). */
  meanRt: number;
  sdRt: number;
  /** Share of given answers that are correct, 0 to 1. */
  accuracy: number;
  /** Share of windows left unanswered, 0 to 1. */
  missRate: number;
  seed: string;
}

export interface SimulatedKey {
  code: string;
  state: 'down' | 'up';
  /** Seconds from time zero. */
  time: number;
}

const HELD_FOR = 0.08;

/** Key presses and releases of an automatic participant, in order of time. */
export function simulateAnswers(schedule: Schedule, answers: AnswerOptions): SimulatedKey[] {
  const random = seeded(`answers ${answers.seed}`);
  const keys: SimulatedKey[] = [];
  for (const { window, onset, allowed } of schedule.windows) {
    const rt = logNormal(random, answers.meanRt, answers.sdRt);
    const misses = random.next() < answers.missRate;
    const isRight = random.next() < answers.accuracy;
    const pick = random.next();
    if (misses) continue;
    const possible = schedule.responses.filter((r) => r.code !== null && allowed.has(r.id));
    const right = possible.find((r) => r.id === window.correct);
    const others = window.correct === null ? possible : possible.filter((r) => r !== right);
    const chosen = right && isRight ? right : others[Math.floor(pick * others.length)];
    if (!chosen || chosen.code === null) continue;
    keys.push({ code: chosen.code, state: 'down', time: onset + rt });
    keys.push({ code: chosen.code, state: 'up', time: onset + rt + HELD_FOR });
  }
  return keys.sort((a, b) => a.time - b.time);
}

function logNormal(random: Random, mean: number, sd: number): number {
  if (!(mean > 0)) return 0;
  const variance = log(1 + (sd * sd) / (mean * mean));
  return exp(log(mean) - variance / 2 + Math.sqrt(variance) * random.normal());
}
