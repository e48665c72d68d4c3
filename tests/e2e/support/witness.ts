/**
 * A witness of what was on screen in which frame, outside the player: put into the page before any of its scripts,
 * it keeps the frame timestamps of its own `requestAnimationFrame` loop, and reads the pixels of the page's canvas
 * once the frame's callbacks are over. It knows nothing of the task; a change of picture is a change of pixels.
 */
import type { Page } from '@playwright/test';

export interface WitnessedFrame {
  /** Timestamp of the frame, ms of the page's clock. */
  at: number;
  /** Hash of the coarse picture seen at its end; null where the next frame began before it could be read. */
  seen: number | null;
  /** Whether the picture is all of one colour. */
  blank: boolean;
}
export interface WitnessedKey {
  code: string;
  /** `timeStamp` of the event, ms of the page's clock. */
  at: number;
}
export interface Testimony {
  frames: WitnessedFrame[];
  keys: WitnessedKey[];
}

/** Runs in the page. `addInitScript` takes its text, so it may use nothing from outside. */
function observe(): void {
  const frames: WitnessedFrame[] = [];
  const keys: WitnessedKey[] = [];
  const width = 192;
  const height = 108;
  const small = document.createElement('canvas');
  small.width = width;
  small.height = height;
  const pen = small.getContext('2d', { willReadFrequently: true })!;
  pen.imageSmoothingEnabled = false;
  let current = 0;
  const afterFrame = new MessageChannel();
  afterFrame.port1.onmessage = (event: MessageEvent<number>) => {
    const frame = frames[event.data];
    // Another frame has begun: what is on the canvas now may be its picture.
    if (!frame || event.data !== current - 1) return;
    const canvas = [...document.querySelectorAll('canvas')].sort(
      (a, b) => b.width * b.height - a.width * a.height
    )[0];
    if (!canvas) return;
    pen.drawImage(canvas, 0, 0, width, height);
    const pixels = new Uint32Array(pen.getImageData(0, 0, width, height).data.buffer);
    // FNV-1a over whole pixels.
    let hash = 2166136261;
    let blank = true;
    for (const pixel of pixels) {
      hash = Math.imul(hash ^ pixel, 16777619);
      if (pixel !== pixels[0]) blank = false;
    }
    frame.seen = hash >>> 0;
    frame.blank = blank;
  };
  const watch = (at: number) => {
    frames.push({ at, seen: null, blank: true });
    current = frames.length;
    afterFrame.port2.postMessage(current - 1);
    requestAnimationFrame(watch);
  };
  requestAnimationFrame(watch);
  addEventListener('keydown', (event) => keys.push({ code: event.code, at: event.timeStamp }), true);
  (window as unknown as { ebblineWitness: Testimony }).ebblineWitness = { frames, keys };
}

/** To be called before the page is opened. (`__name` is what tsx wraps functions with.) */
export const callWitness = (page: Page): Promise<unknown> =>
  page.addInitScript({ content: `{const __name=(f)=>f;(${observe.toString()})();}` });

export const hearWitness = (page: Page): Promise<Testimony> =>
  page.evaluate(() => (window as unknown as { ebblineWitness: Testimony }).ebblineWitness);

export interface SeenChange {
  /** ms of the page's clock, timestamp of the first frame with the new picture. */
  at: number;
  blank: boolean;
}

/** Frames in which the picture became another one, between two times. Throws where the witness did not see enough. */
export function seenChanges({ frames }: Testimony, from: number, to: number): SeenChange[] {
  const within = frames.filter((frame) => frame.at >= from && frame.at <= to);
  const changes: SeenChange[] = [];
  let last: WitnessedFrame | null = null;
  let unseen: WitnessedFrame | null = null;
  for (const frame of within) {
    if (frame.seen === null) {
      unseen ??= frame;
      continue;
    }
    // A change found after frames that could not be read began in the first of them at the earliest.
    if (last && frame.seen !== last.seen) changes.push({ at: unseen?.at ?? frame.at, blank: frame.blank });
    last = frame;
    unseen = null;
  }
  return changes;
}

/** Median time between frames, ms. */
export function frameInterval({ frames }: Testimony): number {
  const steps = frames.slice(1).map((frame, index) => frame.at - frames[index]!.at);
  return steps.sort((a, b) => a - b)[steps.length >> 1] ?? NaN;
}
