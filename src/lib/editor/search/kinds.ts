/**
 * What the timing search calls a kind of trial. Cards of one condition that last equally long and model the same
 * things at the same times are one kind: the search need not tell them apart, and they share its places evenly.
 */
import { contrastRow, modelledItems, type Factor } from '$lib/task/compile';
import type { ModelledPart } from '$lib/engine/search';
import type { Card, Contrast, Run, TaskDocument } from '$lib/task/schema';
import { toSeconds } from '$lib/task/time';

export interface Kind {
  name: string;
  conditionId: string | null;
  cards: Card[];
  /** Seconds. */
  duration: number;
  parts: ModelledPart[];
}

function partsOf(card: Card, factors: readonly Factor[]): ModelledPart[] {
  const items = modelledItems(card);
  if (card.condition === null) return [];
  return items.map((item) => {
    const key = items.length > 1 ? `${card.condition}/${item.name}` : card.condition;
    return {
      offset: toSeconds(item.onset),
      duration: toSeconds(item.duration),
      column: factors.findIndex((f) => f.key === key)
    };
  });
}

/** Kinds in the order of conditions, cards without a condition last; every card belongs to exactly one. */
export function kindsOf(document: TaskDocument, factors: readonly Factor[]): Kind[] {
  const place = (card: Card) => {
    const at = document.brief.conditions.findIndex((c) => c.id === card.condition);
    return at < 0 ? Infinity : at;
  };
  const kinds = new Map<string, Kind>();
  for (const card of [...document.cards].sort((a, b) => place(a) - place(b) || 0)) {
    const parts = partsOf(card, factors);
    // Cards without a condition have nothing in common but that: each stays a kind of its own.
    const key = JSON.stringify([card.condition ?? card.id, card.duration, parts]);
    const known = kinds.get(key);
    if (known) known.cards.push(card);
    else
      kinds.set(key, {
        name: '',
        conditionId: card.condition,
        cards: [card],
        duration: toSeconds(card.duration),
        parts
      });
  }
  const all = [...kinds.values()];
  for (const kind of all) {
    const condition = document.brief.conditions.find((c) => c.id === kind.conditionId);
    const isOnly = condition && all.filter((k) => k.conditionId === kind.conditionId).length === 1;
    kind.name = isOnly ? condition.name : kind.cards.map((c) => c.name).join(', ');
  }
  return all;
}

/** How many trials of each kind a run has now. */
export const countsOf = (kinds: readonly Kind[], run: Run): number[] =>
  kinds.map((kind) => {
    const ids = new Set(kind.cards.map((c) => c.id));
    return run.trials.filter((t) => ids.has(t.card)).length;
  });

/** Contrasts that say something about the columns: those with a weight other than 0. */
export const usableContrasts = (document: TaskDocument, factors: readonly Factor[]): Contrast[] =>
  document.brief.contrasts.filter((c) => contrastRow(c, factors).some((w) => w !== 0));
