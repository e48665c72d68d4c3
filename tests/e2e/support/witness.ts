/**
 * A witness of what was on screen in which frame, outside the player: put into the page before any of its scripts,
 * it runs first in every frame and reads the pixels of the page's canvas, which are then still those of the frame
 * before. It knows nothing of the task; a change of picture is a change of pixels.
 */
import type { Page } from '@playwright/test';

export interface WitnessedFrame {
  /** Timestamp of the frame, ms of the page's clock. */
  at: number;
  /** Hash of the picture that stood in the middle of the screen at its end; 0 while the canvas lies under something else. */
  seen: number;
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

/** Runs in the page. The browser gets its text, so it may use nothing from outside. */
function observe(): void {
  const frames: WitnessedFrame[] = [];
  const keys: WitnessedKey[] = [];
  // The middle of the screen, coarsely: more pixels a frame would make the browser clear memory within a run.
  const width = 64;
  const height = 36;
  const small = document.createElement('canvas');
  small.width = width;
  small.height = height;
  const pen = small.getContext('2d', { willReadFrequently: true })!;
  pen.imageSmoothingEnabled = false;
  const look = (frame: WitnessedFrame) => {
    const canvas = document.querySelector('canvas');
    if (!canvas || document.elementFromPoint(innerWidth / 2, innerHeight / 2) !== canvas) return;
    const { width: w, height: h } = canvas;
    pen.drawImage(canvas, w / 4, h / 4, w / 2, h / 2, 0, 0, width, height);
    const pixels = new Uint32Array(pen.getImageData(0, 0, width, height).data.buffer);
    // FNV-1a over whole pixels.
    let hash = 2166136261;
    frame.blank = true;
    for (const pixel of pixels) {
      hash = Math.imul(hash ^ pixel, 16777619);
      if (pixel !== pixels[0]) frame.blank = false;
    }
    frame.seen = hash >>> 0;
  };
  const watch = (at: number) => {
    // First, before any other callback of this frame has drawn.
    requestAnimationFrame(watch);
    const last = frames.at(-1);
    if (last) look(last);
    frames.push({ at, seen: 0, blank: true });
  };
  requestAnimationFrame(watch);
  window.addEventListener('keydown', (event) => keys.push({ code: event.code, at: event.timeStamp }), true);
  (window as unknown as { ebblineWitness: Testimony }).ebblineWitness = { frames, keys };
}

/** To be called before the page is opened. (`__name` is what tsx wraps functions with.) */
export const callWitness = (page: Page): Promise<unknown> =>
  page.addInitScript({ content: `{const __name=(f)=>f;(${observe.toString()})();}` });

export const hearWitness = (page: Page): Promise<Testimony> =>
  page.evaluate(() => (window as unknown as { ebblineWitness: Testimony }).ebblineWitness);

/** Median time between frames, ms. */
export function frameInterval({ frames }: Testimony): number {
  const steps = frames.slice(1).map((frame, index) => frame.at - frames[index]!.at);
  return steps.sort((a, b) => a - b)[steps.length >> 1] ?? NaN;
}
