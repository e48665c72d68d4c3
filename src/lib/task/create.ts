/** New documents and their parts, with the defaults a newcomer would want. */
import {
  CONDITION_COLOURS,
  CONDITION_PATTERNS,
  FORMAT,
  type Card,
  type Condition,
  type Contrast,
  type Item,
  type ItemKind,
  type ResponseName,
  type ResponseWindow,
  type Run,
  type TaskDocument
} from './schema';

const ALPHABET = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789';

/** A random id of 14 characters (83 bits), made where the edit is made. */
export function newId(): string {
  const bytes = crypto.getRandomValues(new Uint32Array(14));
  return Array.from(bytes, (b) => ALPHABET[b % ALPHABET.length]).join('');
}

/** A BIDS task label suggested from a title: letters and digits only, each word after the first begun large. */
export function suggestLabel(title: string): string {
  const words =
    title
      .normalize('NFKD')
      .replace(/\p{M}/gu, '')
      .match(/[A-Za-z0-9]+/g) ?? [];
  const joined = words
    .map((word, i) => (i === 0 ? word[0]!.toLowerCase() : word[0]!.toUpperCase()) + word.slice(1))
    .join('');
  return joined.slice(0, 40) || 'task';
}

export interface NewTask {
  title: string;
  label: string;
  /** µs */
  tr: number;
  volumes: number;
  profile?: string | null;
}

/** An empty task with one empty run. */
export function newDocument({ title, label, tr, volumes, profile = null }: NewTask): TaskDocument {
  return {
    format: FORMAT,
    brief: {
      title,
      label,
      question: '',
      instructions: '',
      tr,
      volumes,
      highPass: 128,
      noise: { kind: 'ar1', rho: 0.3, rhoTr: 2 },
      profile,
      conditions: [],
      contrasts: [],
      responses: []
    },
    cards: [],
    lists: [],
    runs: [newRun(volumes, 1)]
  };
}

export const newRun = (volumes: number, number: number): Run => ({
  id: newId(),
  name: `Run ${number}`,
  volumes,
  trials: []
});

/** A condition with the first colour and pattern that no other condition has. */
export function newCondition(existing: readonly Condition[], name?: string): Condition {
  const taken = new Set(existing.map((c) => c.colour));
  const free = CONDITION_COLOURS.findIndex((c) => !taken.has(c));
  const k = free >= 0 ? free : existing.length % CONDITION_COLOURS.length;
  // Past eight conditions colours repeat; the pattern moves on, so that the pair stays different.
  const shift = Math.floor(existing.length / CONDITION_COLOURS.length);
  return {
    id: newId(),
    name:
      name ??
      freeName(
        'condition',
        existing.map((c) => c.name)
      ),
    description: '',
    hed: '',
    colour: CONDITION_COLOURS[k]!,
    pattern: CONDITION_PATTERNS[(k + (free >= 0 ? 0 : shift)) % CONDITION_PATTERNS.length]!
  };
}

export const newContrast = (name: string, weights: Record<string, number> = {}): Contrast => ({
  id: newId(),
  name,
  weights
});

export const newResponse = (name: string, finger: ResponseName['finger'] = 'right-index'): ResponseName => ({
  id: newId(),
  name,
  finger
});

/** `stem 1`, `stem 2`, … : the first that is free. */
export function freeName(stem: string, taken: readonly string[]): string {
  for (let n = taken.length + 1; ; n++) if (!taken.includes(`${stem} ${n}`)) return `${stem} ${n}`;
}

export function newItem(kind: ItemKind, duration = 1_000_000): Item {
  const base = { id: newId(), name: kind, onset: 0, duration, modelled: kind !== 'fixation' };
  const placed = { x: 0, y: 0 };
  switch (kind) {
    case 'text':
      return { ...base, ...placed, kind, text: 'word', size: 1, colour: '#ffffff' };
    case 'picture':
      return { ...base, ...placed, kind, asset: null, file: '', width: 6, height: 4.5 };
    case 'shape':
      return { ...base, ...placed, kind, shape: 'lantern', size: 3, colour: '#e0b35a' };
    case 'sound':
      return { ...base, kind, frequency: 440, level: -30, ear: 'both', ramp: 10_000 };
    case 'fixation':
      return { ...base, ...placed, kind, size: 0.6, colour: '#ffffff' };
  }
}

export const newWindow = (duration: number, correct: string | null = null): ResponseWindow => ({
  id: newId(),
  name: 'answer',
  onset: 0,
  duration,
  allowed: [],
  correct,
  take: 'first'
});

/** A card of 2 s showing one word; `condition` is a condition id or null. */
export function newCard(name: string, condition: string | null, duration = 2_000_000): Card {
  return { id: newId(), name, condition, duration, items: [newItem('text', duration)], windows: [] };
}
