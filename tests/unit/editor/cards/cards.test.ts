import { describe, expect, it } from 'vitest';
import { itemExtent, outsideScreen, screenDegrees } from '../../../../src/lib/editor/cards/screen';
import { alongStrip, stagesOf, visibleAt } from '../../../../src/lib/editor/cards/stages';
import { newCard, newItem, newWindow } from '../../../../src/lib/task/create';
import { defaultProfile } from '../../../../src/lib/task/profile';
import type { Card, Item, ItemKind } from '../../../../src/lib/task/schema';

const at = (kind: ItemKind, name: string, onset: number, duration: number): Item => ({
  ...newItem(kind, duration),
  name,
  onset
});
const card = (duration: number, items: Item[]): Card => ({ ...newCard('lantern', null, duration), items });
const shape = (c: Card) => stagesOf(c).map((s) => [s.from, s.to, s.visible.map((v) => v.name).join('+')]);

describe('stages of a card', () => {
  it('are one for each change of what is on screen', () => {
    const c = card(2_250_000, [
      at('text', 'word', 0, 500_000),
      at('shape', 'lantern', 500_000, 750_000),
      at('fixation', 'cross', 500_000, 1_750_000)
    ]);
    expect(shape(c)).toEqual([
      [0, 500_000, 'word'],
      [500_000, 1_250_000, 'lantern+cross'],
      [1_250_000, 2_250_000, 'cross']
    ]);
  });

  it('has blank stages where nothing is shown, and one for an empty card', () => {
    expect(shape(card(2_000_000, []))).toEqual([[0, 2_000_000, '']]);
    expect(shape(card(2_000_000, [at('text', 'word', 500_000, 500_000)]))).toEqual([
      [0, 500_000, ''],
      [500_000, 1_000_000, 'word'],
      [1_000_000, 2_000_000, '']
    ]);
  });

  it('does not cut at sounds, but says which begin and which go on', () => {
    const c = card(1_000_000, [at('text', 'word', 0, 400_000), at('sound', 'chime', 300_000, 300_000)]);
    const stages = stagesOf(c);
    expect(stages.map((s) => [s.from, s.to])).toEqual([
      [0, 400_000],
      [400_000, 1_000_000]
    ]);
    expect(stages[0]!.sounds.map((s) => s.name)).toEqual(['chime']);
    expect(stages[1]!.sounds).toEqual([]);
    expect(stages[1]!.sounding.map((s) => s.name)).toEqual(['chime']);
  });

  it('marks what lasts beyond the trial', () => {
    const c = card(1_000_000, [at('text', 'word', 0, 1_500_000)]);
    expect(stagesOf(c).map((s) => [s.from, s.to, s.beyond])).toEqual([
      [0, 1_000_000, false],
      [1_000_000, 1_500_000, true]
    ]);
  });

  it('survives a card of no length and items of no length', () => {
    expect(stagesOf(card(0, []))).toHaveLength(1);
    expect(shape(card(1_000_000, [at('sound', 'click', 1_000_000, 0)]))).toEqual([[0, 1_000_000, '']]);
    expect(stagesOf(card(1_000_000, [at('sound', 'click', 1_000_000, 0)]))[0]!.sounds).toHaveLength(1);
  });

  it('agrees with what is visible at any time', () => {
    const c = card(3_000_000, [
      at('text', 'a', 0, 1_000_000),
      at('shape', 'b', 700_000, 1_100_000),
      at('picture', 'c', 1_000_000, 2_000_000)
    ]);
    for (let t = 0; t < 3_000_000; t += 50_000) {
      const stage = stagesOf(c).find((s) => s.from <= t && t < s.to)!;
      expect(stage.visible.map((v) => v.name)).toEqual(visibleAt(c, t).map((v) => v.name));
    }
  });

  it('places a time along the strip by stage, not by seconds', () => {
    const stages = stagesOf(card(2_000_000, [at('text', 'word', 0, 500_000)]));
    expect(alongStrip(stages, 0)).toBe(0);
    expect(alongStrip(stages, 250_000)).toBe(0.5);
    expect(alongStrip(stages, 1_250_000)).toBe(1.5);
    expect(alongStrip(stages, 9_000_000)).toBe(2);
    const window = newWindow(1_500_000);
    expect(alongStrip(stages, window.onset + window.duration)).toBeCloseTo(1 + 2 / 3, 12);
  });
});

describe('the screen in degrees', () => {
  const { screen } = defaultProfile();

  it('follows from size and distance', () => {
    // 2·atan(0.3/1.2) and 2·atan(0.16875/1.2), worked by hand.
    expect(screenDegrees(screen).width).toBeCloseTo(28.072, 3);
    expect(screenDegrees(screen).height).toBeCloseTo(16.0095, 3);
  });

  it('says what reaches over the edge', () => {
    const inside = { ...newItem('shape'), x: 5 } as Extract<Item, { kind: 'shape' }>;
    expect(outsideScreen(inside, screen)).toBeNull();
    expect(itemExtent(inside)).toEqual({ width: 3, height: 3 });
    expect(outsideScreen({ ...inside, x: 13 }, screen)).toContain('Reaches 14.5° sideways');
    expect(outsideScreen({ ...inside, y: -8 }, screen)).toContain('up or down');
  });
});
