/** What stands on each line of the Page, from the compiled run. Pure. */
import type { CompiledTrial } from '$lib/task/compile';
import { lineOf, stretches, xOn, type PageGeometry, type Stretch } from './page-geometry';

/** A block that begins on the line and can be taken hold of. */
export interface Block {
  trial: CompiledTrial;
  x: number;
  /** px on this line; the rest of a broken block is a tail on the next. */
  width: number;
  ends: boolean;
}

export interface Tail {
  trial: CompiledTrial;
  stretch: Stretch;
}

/** The blank after a trial, where its grip stands. */
export interface GapMark {
  trial: CompiledTrial;
  next: CompiledTrial;
  /** µs; negative where the two overlap. */
  gap: number;
  /** px of the grip's middle. */
  x: number;
  /** px of the grip. */
  width: number;
}

export interface LineModel {
  blocks: Block[];
  tails: Tail[];
  gaps: GapMark[];
  /** The blocks as the drag library lists them. */
  items: { id: string }[];
}

/** A grip is never wider than its blank, nor too thin to be seen. */
const GRIP = { least: 7, most: 24 };

export function lineModels(g: PageGeometry, trials: readonly CompiledTrial[]): Map<number, LineModel> {
  const lines = new Map<number, LineModel>();
  const on = (line: number): LineModel => {
    let model = lines.get(line);
    if (!model) lines.set(line, (model = { blocks: [], tails: [], gaps: [], items: [] }));
    return model;
  };
  trials.forEach((trial, i) => {
    for (const stretch of stretches(g, trial.onset, trial.end))
      if (stretch.begins) {
        const model = on(stretch.line);
        model.items.push({ id: trial.trial.id });
        model.blocks.push({
          trial,
          x: stretch.x,
          width: Math.max(2, stretch.width),
          ends: stretch.ends
        });
      } else on(stretch.line).tails.push({ trial, stretch });
    const next = trials[i + 1];
    if (next) {
      const mark = gapMark(g, trial, next);
      on(mark.line).gaps.push(mark);
    }
  });
  return lines;
}

/**
 * Keeps the models of lines on which nothing has changed, so that what is drawn from them is not drawn again: in a drag
 * most lines stay as they are.
 */
export class LineMemory {
  #lines = new Map<number, { key: string; model: LineModel }>();
  #cards: unknown = null;

  /** `cards` is what else blocks are drawn from; another one drops everything. */
  keep(g: PageGeometry, models: Map<number, LineModel>, cards: unknown): Map<number, LineModel> {
    const known = cards === this.#cards ? this.#lines : new Map<number, { key: string; model: LineModel }>();
    this.#cards = cards;
    this.#lines = new Map();
    for (const [line, model] of models) {
      const key = `${g.width} ${g.lineLength} ${signature(model)}`;
      const before = known.get(line);
      if (before?.key === key) models.set(line, before.model);
      // Moved blocks are the same list to the drag library, which need not go through them again.
      else if (before && sameItems(before.model.items, model.items)) model.items = before.model.items;
      this.#lines.set(line, { key, model: models.get(line) ?? model });
    }
    return models;
  }
}

const sameItems = (a: { id: string }[], b: { id: string }[]): boolean =>
  a.length === b.length && a.every((item, i) => item.id === b[i]?.id);
const mark = (t: CompiledTrial): string =>
  `${t.trial.id},${t.onset},${t.length},${t.index},${t.card.id},${t.trial.locked ?? ''}`;
const signature = (model: LineModel): string =>
  [
    model.blocks.map((b) => mark(b.trial)).join(';'),
    model.tails.map((t) => mark(t.trial)).join(';'),
    model.gaps.map((m) => `${m.trial.trial.id},${m.gap}`).join(';')
  ].join('|');

/** The grip stands on the line where the trial ends, in the middle of what is blank there. */
function gapMark(g: PageGeometry, trial: CompiledTrial, next: CompiledTrial): GapMark & { line: number } {
  const gap = next.onset - trial.end;
  // A trial that ends exactly at a line's end belongs to that line.
  const line = trial.end > trial.onset ? lineOf(g, trial.end - 1) : lineOf(g, trial.onset);
  const from = xOn(g, line, trial.end);
  const until = gap > 0 ? Math.min(g.width, xOn(g, line, next.onset)) : from;
  const blank = until - from;
  const width = Math.min(GRIP.most, Math.max(GRIP.least, blank));
  // In a wide blank the grip keeps to the trial it belongs to.
  const middle = blank > 2 * GRIP.most ? from + GRIP.most / 2 + 2 : from + blank / 2;
  return { line, trial, next, gap, x: Math.min(g.width - width / 2, middle), width };
}

/** The trial nearest in time on the line above (-1) or below (1), or undefined. */
export function neighbourOnLine(
  g: PageGeometry,
  trials: readonly CompiledTrial[],
  from: CompiledTrial,
  way: -1 | 1
): CompiledTrial | undefined {
  const here = lineOf(g, from.onset);
  const aim = from.onset + way * g.lineLength;
  const candidates = trials.filter((t) => (way < 0 ? lineOf(g, t.onset) < here : lineOf(g, t.onset) > here));
  const line = way < 0 ? candidates.at(-1) : candidates[0];
  if (!line) return undefined;
  const nearest = lineOf(g, line.onset);
  return candidates
    .filter((t) => lineOf(g, t.onset) === nearest)
    .reduce((best, t) => (Math.abs(t.onset - aim) < Math.abs(best.onset - aim) ? t : best));
}
