import { describe, expect, it } from 'vitest';
import { addItem } from '../../../src/lib/task/commands';
import { noticesOf, type ContrastFacts } from '../../../src/lib/task/notices';
import { defaultProfile, type Profile } from '../../../src/lib/task/profile';
import type { TaskDocument } from '../../../src/lib/task/schema';
import { sampleTask, withTrials } from './sample';

const profile = defaultProfile();
const ids = (doc: TaskDocument, p: Profile | null = profile, contrasts: ContrastFacts[] = []) =>
  noticesOf(doc, doc.runs[0]!, p, contrasts).map((n) => n.id.split(' ').slice(0, 2).join(' '));

describe('notices', () => {
  it('says nothing about a sound run', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 9]
    ]);
    expect(noticesOf(doc, doc.runs[0]!, profile)).toEqual([]);
  });

  it('names an overlap with its size, and its mend removes it', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 4.625],
      ['chime', 9]
    ]);
    const [notice] = noticesOf(doc, doc.runs[0]!, profile);
    expect(notice).toMatchObject({ level: 'red', title: 'Trial 1 overlaps trial 2', figure: '0.375 s' });
    const mended = notice!.mend!.edit().document;
    expect(noticesOf(mended, mended.runs[0]!, profile)).toEqual([]);
  });

  it('finds the overlap of a long trial with one that does not follow it directly', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 5],
      ['chime', 7]
    ]);
    const run = doc.runs[0]!;
    const long = {
      ...doc,
      runs: [{ ...run, trials: run.trials.map((t, i) => (i ? t : { ...t, length: 4_500_000 })) }]
    };
    expect(noticesOf(long, long.runs[0]!, profile).map((n) => n.title)).toEqual([
      'Trial 1 overlaps trial 2',
      'Trial 1 overlaps trial 3'
    ]);
  });

  it('names a run that is longer than its volumes, and the volumes it needs', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [['lantern', 149]]);
    const notices = noticesOf(doc, doc.runs[0]!, profile);
    expect(notices[0]).toMatchObject({ id: 'too long', figure: '1.000 s too long' });
    const mended = notices[0]!.mend!.edit().document;
    expect(mended.runs[0]!.volumes).toBe(101);
  });

  it('asks for 12 s after the last modelled event', () => {
    const sample = sampleTask();
    const at = (onset: number) => ids(withTrials(sample, [['lantern', onset]]));
    expect(at(136)).toEqual([]);
    expect(at(136.001)).toEqual(['short tail']);
  });

  it('finds a response key that is the trigger key, responses without key and shared fingers', () => {
    const { doc } = sampleTask();
    expect(ids(doc, { ...profile, triggerKey: 'Digit1' })).toEqual(['key clash']);
    expect(ids(doc, { ...profile, responseKeys: profile.responseKeys.slice(0, 1) })[0]).toMatch(/^no key/);
    const same = {
      ...doc,
      brief: {
        ...doc.brief,
        responses: doc.brief.responses.map((r) => ({ ...r, finger: 'right-index' as const }))
      }
    };
    expect(ids(same)).toEqual([expect.stringMatching(/^shared finger/)]);
  });

  it('names a contrast that cannot be estimated and what cannot be told apart', () => {
    const { doc } = sampleTask();
    const [notice] = noticesOf(doc, doc.runs[0]!, profile, [
      { name: 'lantern − chime', estimable: false, confounded: ['follow-lantern', 'follow-chime'] }
    ]);
    expect(notice!.reason).toContain('follow-lantern, follow-chime');
  });

  it('says when a run is too large for its design numbers', () => {
    const { doc, runId } = sampleTask();
    const at = (volumes: number, highPass: number) =>
      ids({ ...doc, brief: { ...doc.brief, highPass }, runs: [{ ...doc.runs[0]!, id: runId, volumes }] });
    expect(at(1200, 128)).toEqual([]);
    expect(at(14_000, 10)).toEqual(['too large']);
  });

  it('names a picture item without a picture', () => {
    const sample = sampleTask();
    const doc = addItem(withTrials(sample, [['lantern', 3]]), sample.lantern.card, 'picture').document;
    expect(ids(doc)).toEqual([expect.stringMatching(/^no picture/)]);
  });
});
