import { describe, expect, it } from 'vitest';
import * as c from '../../../src/lib/task/commands';
import { compileRun, factorsOf, contrastRow } from '../../../src/lib/task/compile';
import {
  conditionTsvs,
  eventsTsv,
  performedEvents,
  plannedEvents,
  textCell
} from '../../../src/lib/task/events';
import { defaultProfile } from '../../../src/lib/task/profile';
import { eventsSidecar } from '../../../src/lib/task/sidecar';
import { sampleTask, withTrials } from './sample';

describe('event tables', () => {
  it('writes the planned table in order of onset with n/a where nothing is known', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['chime', 9.375],
      ['lantern', 3]
    ]);
    expect(eventsTsv(plannedEvents(doc, doc.runs[0]!))).toBe(
      [
        'onset\tduration\ttrial_type\tresponse_time\tstim_file\titem\ttrial\tresponse\tcorrect\tplanned_onset',
        '3.000\t2.000\tfollow-lantern\tn/a\tn/a\ttext\t1\tn/a\tn/a\t3.000',
        '9.375\t2.000\tfollow-chime\tn/a\tn/a\ttext\t2\tn/a\tn/a\t9.375',
        ''
      ].join('\n')
    );
  });

  it('puts the answer on the modelled row, counted from that row’s onset', () => {
    const sample = sampleTask();
    const w = c.addWindow(sample.doc, sample.lantern.card);
    const doc = c.placeTrial(w.document, sample.runId, sample.lantern.card, 3_000_000).document;
    const run = doc.runs[0]!;
    const trial = run.trials[0]!.id;
    const item = doc.cards[0]!.items[0]!.id;
    const same = doc.brief.responses[0]!.id;
    const [row] = performedEvents(
      doc,
      run,
      [{ trialId: trial, itemId: item, onset: 3.004, duration: 2 }],
      [{ trialId: trial, windowId: w.windowId, response: same, time: 3.6125, correct: 'correct' }]
    );
    expect(row).toMatchObject({ onset: 3.004, planned_onset: 3, response: 'same', correct: 'correct' });
    expect(row!.response_time).toBeCloseTo(0.6085, 12);
    const early = performedEvents(
      doc,
      run,
      [{ trialId: trial, itemId: item, onset: 3.004, duration: 2 }],
      [{ trialId: trial, windowId: w.windowId, response: same, time: 2.9, correct: 'correct' }]
    );
    expect(early[0]!.response_time!).toBeLessThan(0);
    const missed = performedEvents(
      doc,
      run,
      [{ trialId: trial, itemId: item, onset: 3.004, duration: 2 }],
      [{ trialId: trial, windowId: w.windowId, response: null, time: null, correct: 'missing' }]
    );
    expect(eventsTsv(missed).split('\n')[1]).toBe(
      '3.004\t2.000\tfollow-lantern\tn/a\tn/a\ttext\t1\tn/a\tmissing\t3.000'
    );
  });

  it('names condition/item where a card models more than one item, and shares contrast weights', () => {
    const sample = sampleTask();
    const added = c.addItem(sample.doc, sample.lantern.card, 'shape');
    const two = c.editItem(added.document, sample.lantern.card, added.itemId, {
      modelled: true,
      onset: 500_000
    });
    const doc = c.placeTrial(two.document, sample.runId, sample.lantern.card, 0).document;
    expect(compileRun(doc, doc.runs[0]!).events.map((e) => e.trialType)).toEqual([
      'follow-lantern/text',
      'follow-lantern/shape'
    ]);
    const factors = factorsOf(doc);
    expect(factors.map((f) => f.name)).toEqual([
      'follow-lantern/text',
      'follow-lantern/shape',
      'follow-chime'
    ]);
    expect(contrastRow(doc.brief.contrasts[0]!, factors)).toEqual([0.5, 0.5, -1]);
  });

  it('keeps the table whole whatever a name holds', () => {
    expect(textCell('a\tb\nc\r\u0085d')).toBe('a b c d');
    expect(textCell('  ')).toBe('n/a');
    const { doc, runId, chime } = sampleTask();
    const odd = c.editCondition(doc, chime.condition, { name: 'tab\there "quoted" 🏮' }).document;
    const tsv = eventsTsv(
      plannedEvents(
        c.placeTrial(odd, runId, chime.card, 0).document,
        c.placeTrial(odd, runId, chime.card, 0).document.runs[0]!
      )
    );
    expect(
      new Set(
        tsv
          .trimEnd()
          .split('\n')
          .map((l) => l.split('\t').length)
      )
    ).toEqual(new Set([10]));
  });

  it('stretches an item that lasts to the card’s end with a trial’s own length', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [['lantern', 3]]);
    const run = doc.runs[0]!;
    const longer = c.withRun(doc, { ...run, trials: [{ ...run.trials[0]!, length: 5_000_000 }] });
    expect(compileRun(longer, longer.runs[0]!).events[0]!.duration).toBe(5_000_000);
    expect(conditionTsvs(longer, longer.runs[0]!)).toEqual([
      { trialType: 'follow-lantern', text: 'onset\tduration\tamplitude\n3.000\t5.000\t1\n' }
    ]);
  });

  it('describes every column, with levels for each trial type and the content hash', () => {
    const { doc } = sampleTask();
    const sidecar = eventsSidecar(doc, {
      profile: defaultProfile(),
      revision: 'ab'.repeat(32),
      softwareVersion: '0.1.0'
    });
    expect(Object.keys(sidecar)).toEqual([
      'onset',
      'duration',
      'trial_type',
      'response_time',
      'stim_file',
      'item',
      'trial',
      'response',
      'correct',
      'planned_onset',
      'StimulusPresentation'
    ]);
    expect(sidecar.trial_type).toMatchObject({ Levels: { 'follow-lantern': expect.any(String) } });
    expect(sidecar.StimulusPresentation).toMatchObject({
      Code: `urn:sha256:${'ab'.repeat(32)}`,
      ScreenDistance: 1.2
    });
  });
});
