/**
 * A trial card cut into stages: one for each change of what is on screen, as the card's strip shows it.
 * Times are µs from the trial's onset.
 */
import type { Card, Item, ResponseWindow } from '$lib/task/schema';

export type VisibleItem = Exclude<Item, { kind: 'sound' }>;
export type SoundItem = Extract<Item, { kind: 'sound' }>;

export interface Stage {
  from: number;
  to: number;
  /** Drawn in this order: a later item lies over an earlier one. */
  visible: VisibleItem[];
  /** Sounds that begin within the stage. */
  sounds: SoundItem[];
  /** Sounds that go on from an earlier stage. */
  sounding: SoundItem[];
  /** Response windows open for some part of the stage. */
  windows: ResponseWindow[];
  /** The stage lies after the card's end: an item lasts longer than the trial. */
  beyond: boolean;
}

export const isVisible = (item: Item): item is VisibleItem => item.kind !== 'sound';
const isSound = (item: Item): item is SoundItem => item.kind === 'sound';
const end = (span: { onset: number; duration: number }) => span.onset + span.duration;
const meets = (span: { onset: number; duration: number }, from: number, to: number) =>
  span.onset < to && end(span) > from;

export const visibleAt = (card: Card, time: number): VisibleItem[] =>
  card.items.filter(isVisible).filter((i) => i.onset <= time && time < end(i));

/** Stages of a card in order; never empty, and never one of no length unless the card itself has none. */
export function stagesOf(card: Card): Stage[] {
  const visible = card.items.filter(isVisible).filter((i) => i.duration > 0);
  const last = Math.max(card.duration, ...visible.map(end));
  const cuts = new Set([0, card.duration, last]);
  for (const item of visible) {
    cuts.add(item.onset);
    cuts.add(end(item));
  }
  const times = [...cuts].filter((t) => t >= 0 && t <= last).sort((a, b) => a - b);
  if (times.length === 1) times.push(times[0]!);
  const sounds = card.items.filter(isSound);
  return times.slice(1).map((to, i) => {
    const from = times[i]!;
    return {
      from,
      to,
      visible: visible.filter((item) => meets(item, from, to)),
      sounds: sounds.filter((s) => s.onset >= from && (s.onset < to || (to === last && s.onset >= to))),
      sounding: sounds.filter((s) => s.onset < from && end(s) > from),
      windows: card.windows.filter((w) => meets(w, from, to)),
      beyond: from >= card.duration && card.duration < last
    };
  });
}

/** A response window's course over the strip, in stages: 0 is the strip's start, n its end. */
export function alongStrip(stages: readonly Stage[], time: number): number {
  const index = stages.findIndex((s) => time < s.to);
  if (index < 0) return stages.length;
  const stage = stages[index]!;
  return index + Math.max(0, time - stage.from) / (stage.to - stage.from);
}
