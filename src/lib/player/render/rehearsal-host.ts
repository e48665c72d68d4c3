/** A rehearsal in real time on a page's element: the bundle's canvas and sound, the simulated scanner's pulses. */
import { Rehearsal, type RehearsalOptions, type RehearsalResult } from '../rehearse';
import type { RunState, Stage } from '../runtime';
import { buildSchedule, type Schedule } from '../schedule';
import { CanvasStage } from './canvas-stage';
import { codeOf, isTyping, listen, pageNow, pageTime } from './session';
import { Speaker } from './speaker';

export interface RehearsalHostOptions {
  /** Gives the bytes of a picture by its SHA-256; needed when the run shows pictures. */
  asset?: (sha256: string) => Promise<Blob>;
  /** Default true. Call `rehearseOnScreen` in answer to a press, or browsers keep silent. */
  sound?: boolean;
  onState?: (state: RunState) => void;
  /** Told about once a second: seconds from time zero (null before it) and the run's length. */
  onProgress?: (elapsed: number | null, length: number) => void;
}

export interface RunningRehearsal {
  /** Resolves when the run is over or was stopped; rejects with a sentence when a picture cannot be had. */
  done: Promise<RehearsalResult>;
  /** Ends early; the report says partial. */
  stop: () => void;
}

/**
 * Fills `element` with a canvas and runs there by the screen's frames. The element's size is taken at the start and
 * when it changes; the profile's visible width is fitted to its width. Shift+End or `stop()` ends it.
 */
export function rehearseOnScreen(
  element: HTMLElement,
  options: RehearsalOptions,
  host: RehearsalHostOptions = {}
): RunningRehearsal {
  let stopped = false;
  let stop = () => {
    stopped = true;
  };
  const schedule = buildSchedule(options.document, options.run, options.profile, options.plan);
  const speaker = speakerFor(schedule, options, host);
  const begin = async (): Promise<RehearsalResult> => {
    const canvas = document.createElement('canvas');
    canvas.style.cssText = 'display:block;width:100%;height:100%';
    canvas.setAttribute('role', 'img');
    canvas.setAttribute('aria-label', 'What the participant sees');
    element.replaceChildren(canvas);
    const screen = new CanvasStage(canvas, options.profile.screen, await picturesOf(schedule, host));
    screen.fit();
    await speaker?.wake();
    speaker?.prepare(schedule.items);
    const stage: Stage = {
      draw: (items) => screen.draw(items),
      sound: (item, at) => (speaker ? speaker.play(item, at) : at),
      silence: () => speaker?.silence()
    };
    const resized = new ResizeObserver(() => screen.fit());
    resized.observe(element);
    const rehearsal = new Rehearsal(options, stage, pageNow());
    const { runtime } = rehearsal;
    stop = () => runtime.abort(pageNow(), 'ended by hand');
    if (stopped) stop();
    const off = hearKeys(options, rehearsal);
    try {
      await frames(rehearsal, host);
      return rehearsal.result(pageNow());
    } finally {
      off.forEach((end) => end());
      resized.disconnect();
      speaker?.close();
    }
  };
  return { done: begin(), stop: () => stop() };
}

function speakerFor(
  schedule: Schedule,
  options: RehearsalOptions,
  host: RehearsalHostOptions
): Speaker | null {
  const isHeard = host.sound !== false && schedule.items.some((i) => i.item.kind === 'sound');
  return isHeard ? new Speaker(options.profile) : null;
}

async function picturesOf(schedule: Schedule, host: RehearsalHostOptions): Promise<Map<string, ImageBitmap>> {
  const pictures = new Map<string, ImageBitmap>();
  for (const sha256 of schedule.assets) {
    if (!host.asset) throw new Error('This run shows pictures, and the page gave no way to load them.');
    pictures.set(sha256, await createImageBitmap(await host.asset(sha256)));
  }
  return pictures;
}

/** The participant's keys, and Shift+End for an early end. The scanner is simulated: its key is left alone. */
function hearKeys(options: RehearsalOptions, { runtime }: Rehearsal): (() => void)[] {
  const { profile, answers } = options;
  const isAnswer = (event: KeyboardEvent) =>
    answers === 'keyboard' && !isTyping(event) && profile.responseKeys.some((k) => k.code === codeOf(event));
  return [
    listen('keydown', (event) => {
      if (event.shiftKey && codeOf(event) === 'End') return runtime.abort(pageNow(), 'ended by hand');
      if (!isAnswer(event) || codeOf(event) === profile.triggerKey) return;
      event.preventDefault();
      runtime.keyDown(codeOf(event), pageTime(event), event.repeat);
    }),
    listen('keyup', (event) => {
      if (isAnswer(event)) runtime.keyUp(codeOf(event), pageTime(event));
    }),
    listen('blur', () => runtime.focus('lost', pageNow())),
    listen('focus', () => runtime.focus('back', pageNow()))
  ];
}

function frames(rehearsal: Rehearsal, host: RehearsalHostOptions): Promise<void> {
  const { runtime, schedule } = rehearsal;
  let told = -Infinity;
  let state = runtime.state;
  host.onState?.(state);
  return new Promise((done) => {
    const each = (time: number) => {
      const now = time / 1000;
      rehearsal.frame(now);
      if (runtime.state !== state) host.onState?.((state = runtime.state));
      if (now - told >= 1) {
        told = now;
        host.onProgress?.(runtime.elapsed(now), schedule.end);
      }
      if (runtime.isOver) done();
      else requestAnimationFrame(each);
    };
    requestAnimationFrame(each);
  });
}
