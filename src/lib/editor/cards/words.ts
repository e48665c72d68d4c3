import type { Item, ItemKind } from '$lib/task/schema';
import { toSeconds } from '$lib/task/time';

export const KIND_NAMES: Record<ItemKind, string> = {
  text: 'Text',
  picture: 'Picture',
  shape: 'Shape',
  sound: 'Tone',
  fixation: 'Fixation'
};

/** '0.5' for 500 000 µs; exact to the microsecond, no trailing zeros. */
export const shortSeconds = (micros: number): string => String(Number(toSeconds(micros).toFixed(6)));

export const spanWords = (span: { onset: number; duration: number }): string =>
  `${shortSeconds(span.onset)}–${shortSeconds(span.onset + span.duration)} s`;

/** What an item shows or sounds, in a few words. */
export function itemWords(item: Item): string {
  switch (item.kind) {
    case 'text':
      return item.text.trim() ? `‘${item.text.trim().slice(0, 40)}’` : 'no text yet';
    case 'picture':
      return item.file || 'no picture chosen yet';
    case 'shape':
      return item.shape === item.name ? `${item.size}°` : item.shape;
    case 'sound':
      return `${item.frequency} Hz, ${item.ear === 'both' ? 'both ears' : `${item.ear} ear`}`;
    case 'fixation':
      return `${item.size}°`;
  }
}
