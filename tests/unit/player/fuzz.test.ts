import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { writeLog } from '../../../src/lib/player/log';
import type { Profile } from '../../../src/lib/task/profile';
import { player, profileWith } from './support';

type Happening = {
  kind: 'edge' | 'down' | 'up' | 'held' | 'stall' | 'blur' | 'disarm' | 'arm';
  wait: number;
  code: string;
};
const happening: fc.Arbitrary<Happening> = fc.record({
  kind: fc.oneof(
    { weight: 8, arbitrary: fc.constant<'edge'>('edge') },
    { weight: 6, arbitrary: fc.constantFrom<'down' | 'up'>('down', 'up') },
    { weight: 2, arbitrary: fc.constantFrom<Happening['kind']>('held', 'stall', 'blur') },
    { weight: 1, arbitrary: fc.constantFrom<Happening['kind']>('disarm', 'arm') }
  ),
  wait: fc.oneof(
    fc.double({ min: 0, max: 0.02, noNaN: true }),
    fc.double({ min: 0, max: 3, noNaN: true }),
    fc.double({ min: 0.48, max: 0.52, noNaN: true })
  ),
  code: fc.constantFrom('Digit1', 'Digit2', 'Digit5', 'KeyQ', 'Numpad5', '')
});
const pulses: fc.Arbitrary<Profile['pulses']> = fc.constantFrom(
  { mode: 'once', perVolume: 1 },
  { mode: 'every-volume', perVolume: 1 },
  { mode: 'several-per-volume', perVolume: 3 }
);
const scene = fc.record({
  happenings: fc.array(happening, { maxLength: 60 }),
  pulses,
  pulsesBeforeZero: fc.integer({ min: 0, max: 2 }),
  whenPulsesStop: fc.constantFrom<Profile['whenPulsesStop']>('go-on', 'end-as-partial'),
  timing: fc.constantFrom<'free-run' | 'pulse-locked'>('free-run', 'pulse-locked'),
  onsets: fc.array(fc.double({ min: -2, max: 6, noNaN: true }), { maxLength: 8 })
});

/** Plays a stream of happenings between frames at 60 Hz, and what is left of the run after it. */
function play(s: typeof scene extends fc.Arbitrary<infer T> ? T : never) {
  const { pulses, pulsesBeforeZero, whenPulsesStop, timing } = s;
  const profile = profileWith({ pulses, pulsesBeforeZero, whenPulsesStop });
  const p = player({ tr: 0.5, volumes: 10, onsets: s.onsets, sound: true }, profile, { timing });
  const { runtime } = p;
  let now = 0;
  let frame = 0;
  const framesTo = (until: number) => {
    for (; frame <= until; frame += 1 / 60) runtime.frame(frame);
  };
  runtime.arm(0);
  for (const { kind, wait, code } of s.happenings) {
    now += wait;
    if (kind === 'stall') frame = Math.max(frame, now);
    framesTo(now);
    if (kind === 'edge') runtime.edge(now);
    else if (kind === 'down') runtime.keyDown(code, now);
    else if (kind === 'held') runtime.keyDown(code, now, true);
    else if (kind === 'up') runtime.keyUp(code, now);
    else if (kind === 'blur') runtime.focus('lost', now);
    else if (kind === 'disarm') runtime.disarm(now);
    else if (kind === 'arm') runtime.arm(now);
  }
  framesTo(now + 12);
  if (!runtime.isOver) runtime.abort(now + 12, 'ended by the operator');
  return p;
}

describe('whatever pulses and keys come', () => {
  it('the log parses, is in order of time, and every planned item is shown once or reported as not shown', () => {
    fc.assert(
      fc.property(scene, (s) => {
        const p = play(s);
        const lines = writeLog(p.header, p.log.entries, { state: 'partial', reason: '', page: 1e6 });
        const all = lines.map((l) => JSON.parse(l) as Record<string, unknown>);
        const pages = all.slice(1).map((l) => l.page as number);
        expect(pages.findIndex((page, i) => i > 0 && page < pages[i - 1]!)).toBe(-1);

        const told = new Map<string, string[]>();
        for (const l of all.filter((l) => l.type === 'item')) {
          const key = `${String(l.trialId)} ${String(l.itemId)}`;
          told.set(key, [...(told.get(key) ?? []), String(l.state)]);
        }
        expect(told.size).toBe(p.schedule.items.length);
        for (const states of told.values()) expect(['on,off', 'not-shown']).toContain(states.join());
        expect(p.drawn.at(-1)).toEqual([]);
      }),
      { numRuns: 200 }
    );
  }, 30_000);

  it('each window is answered at most once, and a press is in one place', () => {
    fc.assert(
      fc.property(scene, (s) => {
        const p = play(s);
        const lines = writeLog(p.header, p.log.entries, { state: 'partial', reason: '', page: 1e6 });
        const responses = lines
          .map((l) => JSON.parse(l) as { type: string; state: string; trialId: string; place?: string })
          .filter((l) => l.type === 'response');
        const answers = responses.filter((r) => r.state !== 'press').map((r) => r.trialId);
        expect(new Set(answers).size).toBe(answers.length);
        for (const press of responses.filter((r) => r.state === 'press'))
          expect(['in', 'late', 'early', 'unassigned']).toContain(press.place);
      }),
      { numRuns: 100 }
    );
  }, 30_000);
});
