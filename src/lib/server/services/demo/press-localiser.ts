/** *Press localiser*: words to press at, and words only to read. */
import {
  addCard,
  addCondition,
  addContrast,
  addResponse,
  addWindow,
  editBrief,
  editCard,
  editCondition,
  editItem,
  editWindow
} from '$lib/task/commands';
import type { Profile } from '$lib/task/profile';
import type { TaskDocument } from '$lib/task/schema';
import { toMicros } from '$lib/task/time';
import { Draft } from './draft';
import { fillRun } from './timing';

const s = toMicros;

export function pressLocaliser(
  profileId: string,
  profile: Profile
): { document: TaskDocument; words: string[] } {
  const draft = Draft.of({
    title: 'Press localiser',
    label: 'presslocaliser',
    tr: s(profile.tr),
    volumes: 120,
    profile: profileId
  });
  draft.take((d) =>
    editBrief(d, {
      question: 'Which voxels answer to the press itself?',
      instructions: 'Press once with {press} when you see PRESS. Do nothing when you see LOOK.'
    })
  );
  const { responseId } = draft.take((d) => addResponse(d, 'press', 'right-index'));
  const conditions = (['press', 'look'] as const).map((name) => {
    const { conditionId } = draft.take((d) => addCondition(d, name));
    const description = name === 'press' ? 'A word to press at' : 'A word only to read';
    draft.take((d) => editCondition(d, conditionId, { description }));
    const { cardId } = draft.take((d) => addCard(d, name, conditionId));
    draft.take((d) => editCard(d, cardId, { duration: s(1.5) }));
    const word = draft.document.cards.at(-1)!.items[0]!;
    draft.take((d) =>
      editItem(d, cardId, word.id, { name: 'word', text: name.toUpperCase(), duration: s(1) })
    );
    if (name === 'press') {
      const { windowId } = draft.take((d) => addWindow(d, cardId));
      draft.take((d) =>
        editWindow(d, cardId, windowId, { name: 'press', allowed: [responseId], correct: responseId })
      );
    }
    return conditionId;
  });
  draft.take((d) => addContrast(d, 'press over look', { [conditions[0]!]: 1, [conditions[1]!]: -1 }));
  draft.take((d) =>
    fillRun(
      d,
      d.runs[0]!.id,
      profile,
      { counts: [12, 12], gapMin: 3, gapMean: 5, gapMax: 12, leadIn: 6, leadOut: 15 },
      'marram localiser'
    )
  );
  return draft;
}
