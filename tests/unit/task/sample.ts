/** A small task of the demo lab's scenario, made with the room's own commands. */
import * as c from '../../../src/lib/task/commands';
import { newDocument } from '../../../src/lib/task/create';
import type { TaskDocument } from '../../../src/lib/task/schema';

export interface Sample {
  doc: TaskDocument;
  runId: string;
  lantern: { condition: string; card: string };
  chime: { condition: string; card: string };
}

/** Two conditions, a card each (2 s), one contrast, two responses, an empty run of 100 volumes at TR 1.5 s. */
export function sampleTask(): Sample {
  let doc = newDocument({ title: 'Chime and Lantern', label: 'chimelantern', tr: 1_500_000, volumes: 100 });
  const lantern = c.addCondition(doc, 'follow-lantern');
  const chime = c.addCondition(lantern.document, 'follow-chime');
  const a = c.addCard(chime.document, 'lantern card', lantern.conditionId);
  const b = c.addCard(a.document, 'chime card', chime.conditionId);
  const contrast = c.addContrast(b.document, 'lantern − chime', {
    [lantern.conditionId]: 1,
    [chime.conditionId]: -1
  });
  const same = c.addResponse(contrast.document, 'same', 'right-index');
  doc = c.addResponse(same.document, 'different', 'right-middle').document;
  return {
    doc,
    runId: doc.runs[0]!.id,
    lantern: { condition: lantern.conditionId, card: a.cardId },
    chime: { condition: chime.conditionId, card: b.cardId }
  };
}

/** Places cards at onsets in seconds. */
export function withTrials(
  sample: Sample,
  trials: [card: 'lantern' | 'chime', onset: number][]
): TaskDocument {
  return trials.reduce(
    (doc, [card, onset]) =>
      c.placeTrial(doc, sample.runId, sample[card].card, Math.round(onset * 1e6)).document,
    sample.doc
  );
}
