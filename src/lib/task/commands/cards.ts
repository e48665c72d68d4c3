/** Edits of trial cards, their items and response windows. */
import { freeName, newCard, newId, newItem, newWindow } from '../create';
import {
  cardSchema,
  type Card,
  type Item,
  type ItemKind,
  type ResponseWindow,
  type TaskDocument
} from '../schema';
import { cardOf, count, EditError, withCard, type Edit } from './edit';

function checked(doc: TaskDocument, card: Card): TaskDocument {
  const parsed = cardSchema.safeParse(card);
  if (!parsed.success) {
    const issue = parsed.error.issues[0]!;
    throw new EditError(`${issue.path.map(String).join('.') || 'card'}: ${issue.message}`);
  }
  return withCard(doc, card);
}

export function addCard(
  doc: TaskDocument,
  name?: string,
  condition: string | null = null
): Edit & { cardId: string } {
  const card = newCard(
    name ??
      freeName(
        'card',
        doc.cards.map((c) => c.name)
      ),
    condition
  );
  return {
    document: { ...doc, cards: [...doc.cards, card] },
    words: `added card ${card.name}`,
    cardId: card.id
  };
}

export function copyCard(doc: TaskDocument, cardId: string): Edit & { cardId: string } {
  const card = cardOf(doc, cardId);
  const copy: Card = {
    ...card,
    id: newId(),
    name: freeName(
      card.name,
      doc.cards.map((c) => c.name)
    ),
    items: card.items.map((i) => ({ ...i, id: newId() })),
    windows: card.windows.map((w) => ({ ...w, id: newId() }))
  };
  return {
    document: { ...doc, cards: [...doc.cards, copy] },
    words: `copied card ${card.name}`,
    cardId: copy.id
  };
}

/** How many trials of all runs use the card. */
export const cardUses = (doc: TaskDocument, cardId: string): number =>
  doc.runs.reduce((n, r) => n + r.trials.filter((t) => t.card === cardId).length, 0);

/** Removes a card and, with it, the trials that use it. */
export function removeCard(doc: TaskDocument, cardId: string): Edit {
  const card = cardOf(doc, cardId);
  const uses = cardUses(doc, cardId);
  return {
    document: {
      ...doc,
      cards: doc.cards.filter((c) => c.id !== cardId),
      runs: doc.runs.map((r) => ({ ...r, trials: r.trials.filter((t) => t.card !== cardId) }))
    },
    words: `removed card ${card.name}${uses ? ` and its ${count(uses, 'trial')}` : ''}`
  };
}

/** Changes name, condition or duration of a card (µs). */
export function editCard(
  doc: TaskDocument,
  cardId: string,
  change: Partial<Pick<Card, 'name' | 'condition' | 'duration'>>
): Edit {
  const card = cardOf(doc, cardId);
  return {
    document: checked(doc, { ...card, ...change }),
    words: `changed ${Object.keys(change).join(' and ')} of card ${change.name ?? card.name}`
  };
}

export function addItem(doc: TaskDocument, cardId: string, kind: ItemKind): Edit & { itemId: string } {
  const card = cardOf(doc, cardId);
  const made = newItem(kind, card.duration);
  const names = card.items.map((i) => i.name);
  const item = names.includes(made.name) ? { ...made, name: freeName(kind, names) } : made;
  // One modelled item gives the plain condition as trial type: only the first is modelled unless asked.
  const modelled = item.modelled && !card.items.some((i) => i.modelled);
  return {
    document: checked(doc, { ...card, items: [...card.items, { ...item, modelled }] }),
    words: `added ${item.name} to card ${card.name}`,
    itemId: item.id
  };
}

export function editItem(doc: TaskDocument, cardId: string, itemId: string, change: Partial<Item>): Edit {
  const card = cardOf(doc, cardId);
  const now = card.items.find((i) => i.id === itemId);
  if (!now) throw new EditError('This item is no longer on the card.');
  const items = card.items.map((i) =>
    i.id === itemId ? ({ ...i, ...change, id: i.id, kind: i.kind } as Item) : i
  );
  return {
    document: checked(doc, { ...card, items }),
    words: `changed ${Object.keys(change).join(' and ')} of ${now.name} on card ${card.name}`
  };
}

export function removeItem(doc: TaskDocument, cardId: string, itemId: string): Edit {
  const card = cardOf(doc, cardId);
  const now = card.items.find((i) => i.id === itemId);
  return {
    document: withCard(doc, { ...card, items: card.items.filter((i) => i.id !== itemId) }),
    words: `removed ${now?.name ?? 'an item'} from card ${card.name}`
  };
}

export function addWindow(doc: TaskDocument, cardId: string): Edit & { windowId: string } {
  const card = cardOf(doc, cardId);
  const window = newWindow(card.duration);
  return {
    document: checked(doc, { ...card, windows: [...card.windows, window] }),
    words: `added a response window to card ${card.name}`,
    windowId: window.id
  };
}

export function editWindow(
  doc: TaskDocument,
  cardId: string,
  windowId: string,
  change: Partial<Omit<ResponseWindow, 'id'>>
): Edit {
  const card = cardOf(doc, cardId);
  const windows = card.windows.map((w) => (w.id === windowId ? { ...w, ...change } : w));
  const next = windows.find((w) => w.id === windowId);
  if (!next) throw new EditError('This response window is no longer on the card.');
  if (next.correct !== null && next.allowed.length > 0 && !next.allowed.includes(next.correct))
    throw new EditError('The correct response must be among the responses that count in this window.');
  return {
    document: checked(doc, { ...card, windows }),
    words: `changed ${Object.keys(change).join(' and ')} of window ${next.name} on card ${card.name}`
  };
}

export function removeWindow(doc: TaskDocument, cardId: string, windowId: string): Edit {
  const card = cardOf(doc, cardId);
  return {
    document: withCard(doc, { ...card, windows: card.windows.filter((w) => w.id !== windowId) }),
    words: `removed a response window from card ${card.name}`
  };
}
