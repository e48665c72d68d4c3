/**
 * Document → events → columns. Everything that must know when something happens in a run starts here.
 * Times are integer µs from time zero (the first stored volume).
 */
import type { Card, Contrast, Item, Run, TaskDocument, Trial } from './schema';

export interface CompiledTrial {
  trial: Trial;
  card: Card;
  /** Place in the order of onsets, from 1. */
  index: number;
  onset: number;
  length: number;
  end: number;
}

export interface ModelledEvent {
  trialId: string;
  itemId: string;
  conditionId: string;
  /** The condition, or `condition/item` where the card models more than one item. */
  trialType: string;
  /** Key of the factor (column) that the event belongs to. */
  factor: string;
  onset: number;
  duration: number;
}

export interface Factor {
  /** `conditionId` or `conditionId/item name`. */
  key: string;
  /** As `trial_type` writes it. */
  name: string;
  conditionId: string;
  /** Item name, where the condition has more than one modelled item on a card. */
  item: string | null;
}

export interface CompiledRun {
  /** Sorted by onset, then by place in the document. */
  trials: CompiledTrial[];
  /** Sorted by onset. */
  events: ModelledEvent[];
}

export const cardsById = (doc: TaskDocument): Map<string, Card> => new Map(doc.cards.map((c) => [c.id, c]));

export const modelledItems = (card: Card): Item[] => card.items.filter((i) => i.modelled);

/** Length of a trial, µs: its own, else its card's. */
export const trialLength = (trial: Trial, card: Card): number => trial.length ?? card.duration;

/**
 * Duration of an item within a trial, µs. Where a trial has a length of its own, an item that lasts to the card's
 * end lasts to the trial's end; other items keep their duration.
 */
export function itemDuration(item: Item, card: Card, trial: Trial): number {
  if (trial.length === undefined || item.onset + item.duration !== card.duration) return item.duration;
  return Math.max(0, trial.length - item.onset);
}

/** The columns of the design, by condition in the brief's order, then by item in the order of cards. */
export function factorsOf(doc: TaskDocument): Factor[] {
  return doc.brief.conditions.flatMap((condition): Factor[] => {
    const cards = doc.cards.filter((c) => c.condition === condition.id);
    const several = cards.filter((c) => modelledItems(c).length > 1);
    const single = cards.some((c) => modelledItems(c).length === 1) || several.length === 0;
    const names = [...new Set(several.flatMap((c) => modelledItems(c).map((i) => i.name)))];
    const own: Factor[] = single
      ? [{ key: condition.id, name: condition.name, conditionId: condition.id, item: null }]
      : [];
    return own.concat(
      names.map((item) => ({
        key: `${condition.id}/${item}`,
        name: `${condition.name}/${item}`,
        conditionId: condition.id,
        item
      }))
    );
  });
}

/**
 * Weights of a contrast over the factors. A condition's weight is shared equally among its columns, so that a
 * contrast of conditions keeps its meaning when a card models more than one item.
 */
export function contrastRow(contrast: Contrast, factors: readonly Factor[]): number[] {
  return factors.map((f) => {
    const weight = Object.hasOwn(contrast.weights, f.conditionId) ? contrast.weights[f.conditionId]! : 0;
    return weight / factors.filter((g) => g.conditionId === f.conditionId).length;
  });
}

/** Trials in order of onset with their lengths, and the events that the design models. */
export function compileRun(doc: TaskDocument, run: Run): CompiledRun {
  const cards = cardsById(doc);
  const conditionName = new Map(doc.brief.conditions.map((c) => [c.id, c.name]));
  const trials = run.trials
    .map((trial, place) => ({ trial, place, card: cards.get(trial.card)! }))
    .filter((t) => t.card !== undefined)
    .sort((a, b) => a.trial.onset - b.trial.onset || a.place - b.place)
    .map(({ trial, card }, i): CompiledTrial => {
      const length = trialLength(trial, card);
      return { trial, card, index: i + 1, onset: trial.onset, length, end: trial.onset + length };
    });
  const events = trials.flatMap(({ trial, card }): ModelledEvent[] => {
    const condition = card.condition;
    if (condition === null) return [];
    const items = modelledItems(card);
    const name = conditionName.get(condition) ?? '';
    return items.map((item) => ({
      trialId: trial.id,
      itemId: item.id,
      conditionId: condition,
      trialType: items.length > 1 ? `${name}/${item.name}` : name,
      factor: items.length > 1 ? `${condition}/${item.name}` : condition,
      onset: trial.onset + item.onset,
      duration: itemDuration(item, card, trial)
    }));
  });
  events.sort((a, b) => a.onset - b.onset);
  return { trials, events };
}

/** Gap from the end of each trial to the onset of the next, µs; negative where they overlap. */
export const gapsOf = (trials: readonly CompiledTrial[]): number[] =>
  trials.slice(1).map((t, i) => t.onset - trials[i]!.end);

/** Length of a run's scan from time zero, µs. */
export const runLength = (doc: TaskDocument, run: Run): number => run.volumes * doc.brief.tr;
