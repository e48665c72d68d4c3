import { describe, expect, it } from 'vitest';
import { performanceOf, rowsOf } from '../../../src/lib/player/performance';
import { writeLog } from '../../../src/lib/player/log';
import { player, profileWith } from './support';

const shownOnsets = (p: ReturnType<typeof player>) =>
  p.of('item').flatMap((e) => (e.state === 'on' && e.kind !== 'sound' ? [e.frame!] : []));

describe('a run', () => {
  it('waits for the trigger, runs through and is complete', () => {
    const p = player();
    p.framesUntil(1);
    expect(p.runtime.state).toBe('ready');
    p.runtime.arm(1);
    p.framesUntil(3);
    expect(p.runtime.state).toBe('armed');
    p.runtime.edge(3.004);
    expect(p.runtime.state).toBe('running');
    for (let v = 1; v < 10; v++) {
      p.framesUntil(3.004 + v * 2);
      p.runtime.edge(3.004 + v * 2);
    }
    p.framesUntil(24);
    expect(p.runtime.state).toBe('complete');
    expect(p.drawn).toEqual([['1 lantern'], [], ['2 lantern'], [], ['3 lantern'], [], []]);
  });

  it('obeys no pulse before it is armed', () => {
    const p = player();
    p.runtime.edge(0.5);
    p.framesUntil(3);
    expect(p.runtime.state).toBe('ready');
    expect(p.of('pulse')).toMatchObject([{ state: 'ignored', reason: 'not-armed' }]);
  });

  it('draws in the nearest frame at any refresh rate', () => {
    for (const refreshRate of [50, 59.94, 60, 75, 120, 144, 240]) {
      const base = profileWith();
      const p = player({}, { ...base, screen: { ...base.screen, refreshRate } });
      p.runtime.arm(0);
      p.scan(1.0037, 2, 10, 22);
      const errors = shownOnsets(p).map((at, i) => (at - [1, 4, 7.5][i]!) * refreshRate);
      expect(errors).toHaveLength(3);
      for (const e of errors) expect(Math.abs(e)).toBeLessThanOrEqual(0.5 + 1e-4);
    }
  });

  it('counts the measured display delay in: drawn as much earlier as the screen is late', () => {
    const p = player({}, profileWith({ displayDelay: { seconds: 0.05, date: '2026-01-01' } }));
    p.runtime.arm(0);
    p.scan(1, 2, 10, 22);
    const first = p.of('item').find((e) => e.state === 'on')!;
    expect(first.frame).toBeCloseTo(0.95, 1);
    expect(Math.abs(first.shown! - 2)).toBeLessThan(0.5 / 60 + 1e-9);
  });

  it('shows what a stall of frames left time for, and says what it did not', () => {
    const p = player();
    p.runtime.arm(0);
    p.framesUntil(1);
    p.runtime.edge(1);
    p.framesUntil(3);
    p.runtime.edge(3);
    p.framesUntil(4.9);
    // From 3.9 to 6.2 s: trial 2 is on at 4 and off at 4.5.
    p.runtime.edge(5);
    p.runtime.frame(7.2);
    expect(p.of('drop')).toMatchObject([{ frames: 137 }]);
    expect(p.of('item').find((e) => e.trial === 2)).toMatchObject({ state: 'not-shown', shown: null });
  });

  it('shows an item shorter than a frame for one frame', () => {
    const p = player();
    const item = p.schedule.items[0]!;
    item.end = item.onset + 0.002;
    p.runtime.arm(0);
    p.scan(1, 2, 10, 22);
    const [on, off] = p.of('item').filter((e) => e.trial === 1);
    expect(on).toMatchObject({ state: 'on' });
    expect(off!.frame! - on!.frame!).toBeCloseTo(1 / 60, 3);
  });

  it('after a false start stands as before, armed, and what it showed is undone', () => {
    const p = player();
    p.runtime.arm(0);
    p.runtime.edge(0.5);
    p.framesUntil(3.9);
    expect(p.runtime.state).toBe('armed');
    p.scan(10, 2, 10, 31);
    expect(p.runtime.state).toBe('complete');
    const lines = writeLog(p.header, p.log.entries, { state: 'complete', reason: '', page: 31 }).map(
      (l) => JSON.parse(l) as { type: string; state?: string; trial?: number; time?: number; reason?: string }
    );
    const on = lines.filter((l) => l.type === 'item' && l.state === 'on');
    expect(on.map((l) => l.trial)).toEqual([1, 2, 3]);
    expect(lines.find((l) => l.type === 'pulse')).toMatchObject({
      state: 'ignored',
      reason: 'false-start',
      time: -9.5
    });
  });

  it('pulses before zero stand in the log with negative time', () => {
    const p = player({}, profileWith({ pulsesBeforeZero: 2 }));
    p.runtime.arm(0);
    p.scan(1, 2, 12, 26);
    const lines = writeLog(p.header, p.log.entries, { state: 'complete', reason: '', page: 26 });
    const times = lines
      .map((l) => JSON.parse(l) as { type: string; time: number })
      .filter((l) => l.type === 'pulse');
    expect(times.slice(0, 4).map((l) => l.time)).toEqual([-4, -2, 0, 2]);
  });

  it('ends as partial when the pulses stop, where the profile says so', () => {
    const stopping = (whenPulsesStop: 'go-on' | 'end-as-partial') => {
      const p = player({}, profileWith({ whenPulsesStop }));
      p.runtime.arm(0);
      p.scan(1, 2, 3, 22);
      return p;
    };
    expect(stopping('end-as-partial').runtime.state).toBe('partial');
    const on = stopping('go-on');
    expect(on.runtime.state).toBe('complete');
    expect(on.of('note').map((n) => n.what)).toEqual(['armed', 'zero', 'pulses-stopped', 'armed-late']);
  });

  it('aborted keeps what was done and reports the rest as not shown', () => {
    const p = player();
    p.runtime.arm(0);
    p.scan(1, 2, 3, 5.2);
    p.runtime.abort(5.25, 'ended by the operator');
    expect(p.runtime.state).toBe('partial');
    const states = p.of('item').map((e) => `${e.trial} ${e.state}`);
    expect(states).toEqual(['1 on', '1 off', '2 on', '2 off', '3 not-shown']);
    expect(
      p
        .of('response')
        .filter((r) => r.state === 'missing')
        .map((r) => r.trial)
    ).toEqual([1]);
  });

  it('starts by key in practice, without a scanner', () => {
    const p = player();
    p.framesUntil(0.5);
    p.runtime.startByKey(0.5);
    p.framesUntil(21);
    expect(p.runtime.state).toBe('complete');
    expect(p.of('note').map((n) => n.what)).toEqual(['zero']);
  });

  it('hands sounds over ahead of their time and logs them when they are heard', () => {
    const p = player({ sound: true });
    p.runtime.arm(0);
    p.scan(1, 2, 10, 22);
    expect(p.sounded.map((s) => Math.round(s.at * 1000) / 1000)).toEqual([2.25, 5.25, 8.75]);
    const chimes = p.of('item').filter((e) => e.kind === 'sound');
    expect(chimes.map((e) => e.state)).toEqual(['on', 'off', 'on', 'off', 'on', 'off']);
  });

  it('says which sounds could not be played', () => {
    const stage = { draw: () => {}, sound: () => null, silence: () => {} };
    const p = player({ sound: true }, profileWith(), { stage });
    p.runtime.arm(0);
    p.scan(1, 2, 10, 22);
    const chimes = p.of('item').filter((e) => e.kind === 'sound');
    expect(chimes.map((e) => e.reason)).toEqual(Array(3).fill('the computer plays no sound'));
  });

  it('never takes the trigger key for a response', () => {
    const profile = profileWith({ triggerKey: 'Digit1' });
    const p = player({}, profile);
    p.runtime.arm(0);
    p.framesUntil(1);
    p.runtime.keyDown('Digit1', 1);
    p.framesUntil(2.5);
    p.runtime.keyDown('Digit1', 2.5);
    expect(p.of('response').filter((r) => r.state === 'press')).toEqual([]);
    expect(p.of('key')).toEqual([]);
  });

  it('a held key is one press', () => {
    const p = player();
    p.runtime.arm(0);
    p.framesUntil(1);
    p.runtime.edge(1);
    p.framesUntil(2.6);
    p.runtime.keyDown('Digit1', 2.6);
    p.runtime.keyDown('Digit1', 2.63, true);
    p.runtime.keyUp('Digit1', 2.7);
    expect(p.of('key').map((k) => k.state)).toEqual(['down', 'up']);
  });

  it('gives event rows with response times from their own onset, corrected by the device', () => {
    const p = player({}, profileWith({ deviceDelay: { seconds: 0.01, date: '2026-01-01' } }));
    p.runtime.arm(0);
    p.framesUntil(1);
    p.runtime.edge(1);
    p.framesUntil(2.7);
    p.runtime.keyDown('Digit1', 2.7);
    p.scan(3, 2, 9, 22);
    const rows = rowsOf(p.doc, p.run, p.header, p.log.entries);
    expect(rows.map((r) => [r.trial_type, r.response, r.correct])).toEqual([
      ['follow-lantern', 'left', 'correct'],
      ['follow-chime', null, 'missing'],
      ['follow-lantern', null, 'missing']
    ]);
    expect(rows[0]!.response_time! + rows[0]!.onset!).toBeCloseTo(1.69, 6);
    expect(rows[0]!.duration).toBeCloseTo(0.5, 1);
  });

  it('a run that never had a zero has no rows', () => {
    const p = player();
    p.runtime.arm(0);
    p.framesUntil(1);
    p.runtime.abort(1, 'ended by the operator');
    expect(performanceOf(p.header, p.log.entries).items).toEqual([]);
    const end = JSON.parse(
      writeLog(p.header, p.log.entries, { state: 'partial', reason: '', page: 1 }).at(-1)!
    ) as {
      time: number | null;
    };
    expect(end.time).toBeNull();
  });
});
