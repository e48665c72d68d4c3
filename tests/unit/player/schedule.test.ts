import { describe, expect, it } from 'vitest';
import { fillInstructions, keyProblems, mapResponses } from '../../../src/lib/player/fingers';
import { buildSchedule } from '../../../src/lib/player/schedule';
import { profileWith, smallTask } from './support';

describe('a schedule', () => {
  it('is in seconds from time zero, sorted, with the scan as its end', () => {
    const { doc, run } = smallTask({ onsets: [7.5, 1, 4] });
    const schedule = buildSchedule(doc, run, profileWith());
    expect(schedule.items.map((i) => [i.trial, i.onset, i.end])).toEqual([
      [1, 1, 1.5],
      [2, 4, 4.5],
      [3, 7.5, 8]
    ]);
    expect(schedule.windows.map((w) => [w.onset, w.end])[0]).toEqual([1.2, 2.8]);
    expect(schedule.scan).toBe(20);
    expect(schedule.end).toBe(20);
  });

  it('goes on to the last item where the run is longer than its volumes', () => {
    const { doc, run } = smallTask({ onsets: [19.5], volumes: 10 });
    const schedule = buildSchedule(doc, run, profileWith());
    expect(schedule.end).toBeCloseTo(21.3, 9);
  });

  it('is exact for a late trial: divided from its own microseconds, never summed', () => {
    const { doc, run } = smallTask({ onsets: [0.735 * 4000], tr: 0.735, volumes: 5000 });
    expect(buildSchedule(doc, run, profileWith()).items[0]!.onset).toBe(2940);
  });

  it('takes the fingers of the plan before those of the document', () => {
    const { doc, run } = smallTask();
    const swapped = { responses: { goleft: 'right-middle', goright: 'right-index' } } as const;
    const codes = buildSchedule(doc, run, profileWith(), swapped).responses.map((r) => r.code);
    expect(codes).toEqual(['Digit2', 'Digit1']);
  });
});

describe('fingers', () => {
  const { doc } = smallTask();
  it('stand in the instructions by name', () => {
    const mapped = mapResponses(doc, profileWith());
    expect(fillInstructions(doc.brief.instructions, mapped)).toBe(
      'Press the right index finger for left, the right middle finger for right.'
    );
    expect(fillInstructions('{nothing} {Left}', mapped)).toBe('{nothing} right index finger');
  });

  it('without a key, with the trigger key, or two on one key are named as problems', () => {
    const some = profileWith({ responseKeys: [{ code: 'Digit1', finger: 'right-index' }] });
    expect(keyProblems(mapResponses(doc, some), some)).toHaveLength(1);
    const clash = profileWith({ triggerKey: 'Digit2' });
    expect(keyProblems(mapResponses(doc, clash), clash)[0]).toContain('Digit2 is the trigger key');
    const same = mapResponses(doc, profileWith(), { responses: { goleft: 'right-middle' } });
    expect(keyProblems(same, profileWith())[0]).toContain('more than one response');
    expect(keyProblems(mapResponses(doc, profileWith()), profileWith())).toEqual([]);
  });
});
