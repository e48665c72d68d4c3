/** What every screen of one sitting shares: the payload, the page's parts and where runs are kept. */
import type { Profile } from '$lib/task/profile';
import type { Run } from '$lib/task/schema';
import type { OverrideLine, Timing } from '../log-lines';
import type { PlanRow, PlayerPayload } from '../payload';
import { h } from './dom';
import type { RunStore } from './store';

/** Where the player stands; readable from outside as `data-state` of the `.player` element. */
export type ViewState =
  | 'refused'
  | 'entry'
  | 'check'
  | 'instructions'
  | 'ready'
  | 'armed'
  | 'starting-soon'
  | 'running'
  | 'over'
  | 'end';

export type Override = Pick<OverrideLine, 'what' | 'from' | 'to'>;

/** What the operator chose to run. */
export interface Entry {
  participant: string;
  session: string | null;
  run: Run;
  /** 1-based. */
  runIndex: number;
  runCount: number;
  row: PlanRow | null;
  attempt: number;
  operator: string;
  timing: Timing;
  /** The bundle's profile with the operator's overrides in it. */
  profile: Profile;
  overrides: Override[];
}

export class Sitting {
  readonly payload: PlayerPayload;
  readonly store: RunStore | null;
  readonly root: HTMLElement;
  readonly canvas: HTMLCanvasElement = h('canvas', { 'aria-hidden': 'true' });
  /** Response keys that were pressed in a check: once a sitting is enough. */
  readonly keysSeen = new Set<string>();
  #view: HTMLElement | null = null;

  constructor(payload: PlayerPayload, store: RunStore | null, host: HTMLElement) {
    this.payload = payload;
    this.store = store;
    this.root = h('div', { class: 'player' }, this.canvas);
    host.replaceChildren(this.root);
  }

  /** Puts a screen over the canvas, or, with null, leaves the canvas alone to be seen. */
  show(state: ViewState, view: HTMLElement | null): void {
    this.root.dataset.state = state;
    this.root.classList.toggle('running', view === null);
    this.#view?.remove();
    this.#view = view;
    if (!view) return;
    this.root.append(view);
    view.querySelector<HTMLElement>('[data-focus]')?.focus();
  }
}

/** Listens until the returned function is called. */
export function listen<K extends keyof WindowEventMap>(
  type: K,
  act: (event: WindowEventMap[K]) => void,
  capture = false
): () => void {
  window.addEventListener(type, act, { capture });
  return () => window.removeEventListener(type, act, { capture });
}

/** Page seconds now, and of an event: key events are stamped on the same clock. */
export const pageNow = (): number => performance.now() / 1000;
export const pageTime = (event: Event): number => event.timeStamp / 1000;
/** A key's physical place; what the key says where a device sends none. */
export const codeOf = (event: KeyboardEvent): string => event.code || event.key;
export const isTyping = (event: Event): boolean =>
  event.target instanceof HTMLInputElement || event.target instanceof HTMLSelectElement;
