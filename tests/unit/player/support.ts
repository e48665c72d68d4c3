/** A small task in the demo lab's manner, and a player on a virtual clock. */
import type { LogEntry } from '../../../src/lib/player/log-lines';
import { makeHeader } from '../../../src/lib/player/header';
import { RunLog } from '../../../src/lib/player/log';
import { Runtime, type RuntimeOptions } from '../../../src/lib/player/runtime';
import { buildSchedule, type ScheduledItem } from '../../../src/lib/player/schedule';
import { defaultProfile, type Profile } from '../../../src/lib/task/profile';
import { documentSchema, type Run, type TaskDocument } from '../../../src/lib/task/schema';

const S = 1_000_000;

export interface SmallTask {
  /** s */
  tr?: number;
  volumes?: number;
  /** Onsets in s; cards alternate. */
  onsets?: number[];
  sound?: boolean;
}

/** Two conditions, a lantern for 0.5 s each, a window from 0.2 to 1.8 s; left answers with 1, right with 2. */
export function smallTask({ tr = 2, volumes = 10, onsets = [1, 4, 7.5], sound = false }: SmallTask = {}) {
  const card = (name: string, n: number) => ({
    id: `card0${n}`,
    name,
    condition: `condition${n}`,
    duration: 2 * S,
    items: [
      {
        id: 'lantern',
        name: 'lantern',
        kind: 'shape',
        shape: 'lantern',
        onset: 0,
        duration: S / 2,
        modelled: true,
        x: n === 1 ? -4 : 4,
        y: 0,
        size: 3,
        colour: '#e0b35a'
      },
      ...(sound
        ? [
            {
              id: 'chimes',
              name: 'chime',
              kind: 'sound',
              onset: S / 4,
              duration: S / 5,
              modelled: false,
              frequency: 440,
              level: -30,
              ear: 'both',
              ramp: 10_000
            }
          ]
        : [])
    ],
    windows: [
      {
        id: 'answer',
        name: 'answer',
        onset: 200_000,
        duration: 1_600_000,
        allowed: [],
        correct: n === 1 ? 'goleft' : 'goright',
        take: 'first'
      }
    ]
  });
  const doc: TaskDocument = documentSchema.parse({
    format: 1,
    brief: {
      title: 'Chime and Lantern',
      label: 'chimelantern',
      question: '',
      instructions: 'Press the {left} for left, the {right} for right.',
      tr: tr * S,
      volumes,
      highPass: 128,
      noise: { kind: 'ar1', rho: 0.3, rhoTr: 2 },
      profile: null,
      conditions: [1, 2].map((n) => ({
        id: `condition${n}`,
        name: n === 1 ? 'follow-lantern' : 'follow-chime',
        colour: `c${n}`,
        pattern: 'dots'
      })),
      contrasts: [],
      responses: [
        { id: 'goleft', name: 'left', finger: 'right-index' },
        { id: 'goright', name: 'right', finger: 'right-middle' }
      ]
    },
    cards: [card('lantern left', 1), card('lantern right', 2)],
    lists: [],
    runs: [
      {
        id: 'run001',
        name: 'Run 1',
        volumes,
        trials: onsets.map((onset, i) => ({
          id: `trial${String(i).padStart(3, '0')}`,
          card: `card0${(i % 2) + 1}`,
          onset: Math.round(onset * S)
        }))
      }
    ]
  });
  return { doc, run: doc.runs[0] as Run };
}

export const profileWith = (change: Partial<Profile> = {}): Profile => ({ ...defaultProfile(), ...change });

/** A runtime in hand, with what it drew and sounded. */
export function player(task: SmallTask = {}, profile = profileWith(), options: Partial<RuntimeOptions> = {}) {
  const { doc, run } = smallTask(task);
  const schedule = buildSchedule(doc, run, profile);
  const header = makeHeader({
    kind: 'PROOF',
    simulated: false,
    document: doc,
    profile,
    run,
    row: null,
    timing: options.timing ?? 'free-run',
    started: new Date(Date.UTC(2026, 0, 1))
  });
  const log = new RunLog(header);
  const drawn: string[][] = [];
  const sounded: { name: string; at: number }[] = [];
  const stage = {
    draw: (items: readonly ScheduledItem[]) => drawn.push(items.map((i) => `${i.trial} ${i.item.name}`)),
    sound: (item: ScheduledItem, at: number) => {
      sounded.push({ name: item.item.name, at });
      return at;
    },
    silence: () => {}
  };
  const runtime = new Runtime({ schedule, profile, log, stage, timing: 'free-run', ...options });
  let frames = 0;
  const rate = profile.screen.refreshRate;
  return {
    doc,
    run,
    schedule,
    header,
    log,
    runtime,
    drawn,
    sounded,
    of: <T extends LogEntry['type']>(type: T) =>
      log.entries.filter((e): e is Extract<LogEntry, { type: T }> => e.type === type),
    /** Frames up to page time `until`. */
    framesUntil(until: number) {
      for (; frames / rate <= until; frames++) runtime.frame(frames / rate);
    },
    /** Frames and pulses every `tr` from `first`, in order of time, up to `until`. */
    scan(first: number, tr: number, count: number, until: number) {
      for (let n = 0; n < count; n++) {
        this.framesUntil(first + n * tr);
        runtime.edge(first + n * tr);
      }
      this.framesUntil(until);
    }
  };
}
