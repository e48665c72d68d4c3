/**
 * *Chime and Lantern*, the demo lab's task. A word tells what to follow; then two pairs of a lantern (left or right)
 * and a chime (high or low) come, and the participant presses when what is followed repeats.
 */
import {
  addCard,
  addCondition,
  addContrast,
  addResponse,
  addRun,
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
const LEFT = -5;
const RIGHT = 5;
const HIGH = 880;
const LOW = 440;

interface Pair {
  x: number;
  frequency: number;
}
/** What the second pair repeats of the first. */
const cards: { condition: string; name: string; word: string; pairs: [Pair, Pair]; repeats: boolean }[] = [
  ...follow('follow-lantern', 'LANTERN', { x: LEFT, frequency: LOW }, { x: RIGHT, frequency: LOW }),
  ...follow('follow-chime', 'CHIME', { x: RIGHT, frequency: HIGH }, { x: LEFT, frequency: LOW }),
  ...follow('follow-both', 'BOTH', { x: LEFT, frequency: HIGH }, { x: RIGHT, frequency: HIGH })
];

function follow(condition: string, word: string, repeat: Pair, change: Pair) {
  const first: Pair = { x: LEFT, frequency: HIGH };
  return [
    { condition, word, name: `${condition}, repeat`, pairs: [first, repeat] as [Pair, Pair], repeats: true },
    { condition, word, name: `${condition}, change`, pairs: [first, change] as [Pair, Pair], repeats: false }
  ];
}

export function chimeAndLantern(
  profileId: string,
  profile: Profile
): { document: TaskDocument; words: string[] } {
  const draft = Draft.of({
    title: 'Chime and Lantern',
    label: 'chimelantern',
    tr: s(profile.tr),
    volumes: 300,
    profile: profileId
  });
  draft.take((d) =>
    editBrief(d, {
      question: 'Where does the signal differ when attention follows what is seen, what is heard, or both?',
      instructions:
        'A word tells you what to follow: LANTERN, CHIME or BOTH. Then two lanterns appear, each with a chime. ' +
        'Press with {repeat} when what you follow is the same the second time: the side of the lantern, the pitch of the chime, or both. ' +
        'Otherwise do nothing. Keep your eyes on the cross. You may stop at any time.'
    })
  );
  const conditions = new Map<string, string>();
  for (const [name, description] of [
    ['follow-lantern', 'Attend the side of the lantern, ignore the chime'],
    ['follow-chime', 'Attend the pitch of the chime, ignore the lantern'],
    ['follow-both', 'Attend side and pitch together']
  ] as const) {
    const { conditionId } = draft.take((d) => addCondition(d, name));
    draft.take((d) => editCondition(d, conditionId, { description }));
    conditions.set(name, conditionId);
  }
  const id = (name: string) => conditions.get(name)!;
  draft.take((d) =>
    addContrast(d, 'lantern over chime', { [id('follow-lantern')]: 1, [id('follow-chime')]: -1 })
  );
  draft.take((d) =>
    addContrast(d, 'both over one', {
      [id('follow-both')]: 1,
      [id('follow-lantern')]: -0.5,
      [id('follow-chime')]: -0.5
    })
  );
  const { responseId } = draft.take((d) => addResponse(d, 'repeat', 'right-index'));
  for (const card of cards) addTrialCard(draft, card, id(card.condition), responseId);

  draft.take(addRun);
  draft.document.runs.forEach(({ id: run }, k) =>
    draft.take((d) =>
      fillRun(
        d,
        run,
        profile,
        { counts: cards.map(() => 10), gapMin: 1.5, gapMean: 3.9, gapMax: 12, leadIn: 6, leadOut: 15 },
        `marram run ${k + 1}`
      )
    )
  );
  return draft;
}

function addTrialCard(draft: Draft, card: (typeof cards)[number], condition: string, repeat: string): void {
  const { cardId } = draft.take((d) => addCard(d, card.name, condition));
  draft.take((d) => editCard(d, cardId, { duration: s(3) }));
  const word = draft.document.cards.at(-1)!.items[0]!;
  draft.take((d) =>
    editItem(d, cardId, word.id, {
      name: 'word',
      text: card.word,
      duration: s(0.5),
      size: 1.2,
      modelled: false
    })
  );
  // The cross stands while the pairs come: its time is what the design models.
  draft.item(cardId, 'fixation', { name: 'pairs', onset: s(0.6), duration: s(1.9), modelled: true });
  card.pairs.forEach(({ x, frequency }, k) => {
    const onset = s(0.6 + k);
    draft.item(cardId, 'shape', {
      name: `lantern ${k + 1}`,
      onset,
      duration: s(0.5),
      x,
      y: 0,
      size: 3,
      shape: 'lantern'
    });
    draft.item(cardId, 'sound', { name: `chime ${k + 1}`, onset, duration: s(0.3), frequency, level: -30 });
  });
  const { windowId } = draft.take((d) => addWindow(d, cardId));
  draft.take((d) =>
    editWindow(d, cardId, windowId, {
      name: 'repeat?',
      onset: s(1.6),
      duration: s(1.4),
      allowed: [repeat],
      correct: card.repeats ? repeat : null
    })
  );
}
