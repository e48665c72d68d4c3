import { describe, expect, it } from 'vitest';
import { checkContrast, contrastName, refuseWeight } from '../../../../src/lib/editor/brief/contrasts';
import { fillInstructions, unknownPlaces } from '../../../../src/lib/editor/brief/instructions';
import { hedTrouble, refuseName } from '../../../../src/lib/editor/brief/names';
import { cardUse, conditionUse, responseUse } from '../../../../src/lib/editor/brief/usage';
import { fillInstructions as playerFills, mapResponses } from '../../../../src/lib/player/fingers';
import {
  addCard,
  addCondition,
  addContrast,
  addResponse,
  addWindow,
  editWindow,
  placeTrial
} from '../../../../src/lib/task/commands';
import { newDocument } from '../../../../src/lib/task/create';
import { defaultProfile } from '../../../../src/lib/task/profile';
import type { Contrast } from '../../../../src/lib/task/schema';

const plain = () => newDocument({ title: 'Chime and Lantern', label: 'chimes', tr: 1_500_000, volumes: 300 });
const three = () => {
  let document = plain();
  for (const name of ['follow-lantern', 'follow-chime', 'follow-both'])
    ({ document } = addCondition(document, name));
  return document;
};
const contrast = (weights: number[], document = three()): Contrast => ({
  id: 'contrast1',
  name: 'a contrast',
  weights: Object.fromEntries(document.brief.conditions.map((c, i) => [c.id, weights[i] ?? 0]))
});

describe('contrasts', () => {
  const document = three();
  const { conditions } = document.brief;
  const check = (weights: number[]) => checkContrast(contrast(weights, document), conditions);

  it('sums to zero where it claims a difference', () => {
    expect(check([1, -1, 0])).toEqual({ level: 'good', words: 'A difference; sums to zero.' });
    expect(check([-0.5, -0.5, 1]).level).toBe('good');
    expect(check([0.333333, 0.333333, -0.666667]).level).toBe('good');
    expect(check([1, -0.5, 0])).toMatchObject({
      level: 'amber',
      words: expect.stringContaining('sum to 0.5, not 0')
    });
    expect(check([1, 1, 1])).toEqual({ level: 'good', words: 'Against rest.' });
  });

  it('refuses to become empty and says how to mend it', () => {
    const only = contrast([1, 0, 0], document);
    const [first, second] = conditions;
    expect(refuseWeight(only, conditions, first!.id, 0)).toContain('all weights of ‘a contrast’ would be 0');
    expect(refuseWeight(only, conditions, second!.id, 0)).toBeNull();
    expect(refuseWeight(only, conditions, first!.id, 2)).toBeNull();
    expect(check([0, 0, 0]).level).toBe('red');
  });

  it('names a contrast by its weights', () => {
    const ids = conditions.map((c) => c.id);
    expect(contrastName({ [ids[0]!]: 1, [ids[1]!]: -1 }, conditions)).toBe('follow-lantern − follow-chime');
    expect(contrastName({ [ids[2]!]: 1 }, conditions)).toBe('follow-both − rest');
  });
});

describe('instructions', () => {
  const responses = [
    { id: 'same01', name: 'same', finger: 'right-index' as const },
    { id: 'other1', name: 'different', finger: 'right-thumb' as const }
  ];

  it('fill in the fingers exactly as the player does', () => {
    const document = plain();
    document.brief.responses = responses;
    for (const text of [
      'Press the {same} for a repeat.\nElse the { Different }.',
      '{same}{different}',
      'no place',
      '',
      'an {unknown} one, and {} and {a\nb}'
    ]) {
      const shown = fillInstructions(text, responses)
        .map((s) => s.text)
        .join('');
      expect(shown).toBe(playerFills(text, mapResponses(document, defaultProfile())));
    }
  });

  it('point at what names no response', () => {
    const segments = fillInstructions('Use the {same} or the {left one}.', responses);
    expect(segments.map((s) => s.kind)).toEqual(['plain', 'filled', 'plain', 'unknown', 'plain']);
    expect(unknownPlaces(segments, responses)).toBe(
      '{left one} names no response. The responses are {same}, {different}.'
    );
    expect(unknownPlaces(fillInstructions('{same}', responses), responses)).toBeNull();
  });
});

describe('names and tags', () => {
  it('refuses what an event table cannot hold or tell apart', () => {
    expect(refuseName('a', ['a', 'b'], 'condition')).toContain('already the name of another condition');
    expect(refuseName('a\tb', [], 'condition')).toContain('tab');
    expect(refuseName('n/a', [], 'condition')).toContain('no value');
    expect(refuseName('"quoted" 🏮', ['a'], 'condition')).toBeNull();
  });

  it('sees brackets and commas that do not fit', () => {
    expect(hedTrouble('Sensory-event, (Visual-presentation, Red)')).toBeNull();
    expect(hedTrouble('')).toBeNull();
    expect(hedTrouble('(Red')).toContain('not closed');
    expect(hedTrouble('Red)')).toContain('no opening');
    expect(hedTrouble('Red,, Blue')).toContain('comma');
    expect(hedTrouble('Red,')).toContain('comma');
  });
});

describe('where something is used', () => {
  it('counts cards, trials, contrasts and windows', () => {
    let document = three();
    const [first, second] = document.brief.conditions;
    const made = addCard(document, 'lantern', first!.id);
    document = made.document;
    const run = document.runs[0]!.id;
    ({ document } = placeTrial(document, run, made.cardId, 0));
    ({ document } = placeTrial(document, run, made.cardId, 9_000_000));
    ({ document } = addContrast(document, 'difference', { [first!.id]: 1, [second!.id]: -1 }));
    expect(conditionUse(document, first!.id)).toBe('1 card (2 trials on the runs) and 1 contrast');
    expect(conditionUse(document, second!.id)).toBe('1 contrast');
    expect(conditionUse(document, document.brief.conditions[2]!.id)).toBeNull();
    expect(cardUse(document, made.cardId)).toBe('2 trials on Run 1');

    const response = addResponse(document, 'same');
    const window = addWindow(response.document, made.cardId);
    expect(responseUse(window.document, response.responseId)).toBeNull();
    ({ document } = editWindow(window.document, made.cardId, window.windowId, {
      correct: response.responseId
    }));
    expect(responseUse(document, response.responseId)).toBe('response windows of 1 card');
  });
});
