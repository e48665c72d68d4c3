/**
 * A drag on the Page or from the Tray, as svelte-dnd-action reports it. The library picks up, carries and drops; where
 * the trial goes is arithmetic on the pointer (`placing`), shown by caret and curve, and becomes one command at the end.
 *
 * While a drag lasts only the lists of the lines it touches change. They hold the library's placeholder and are for
 * drawing only: what is committed never comes from them.
 */
import type { DndEvent } from 'svelte-dnd-action';
import { SHADOW_ITEM_MARKER_PROPERTY_NAME, TRIGGERS } from 'svelte-dnd-action';
import {
  EditError,
  insertTrial,
  moveTrialAfter,
  moveTrials,
  placeTrial,
  type Edit
} from '$lib/task/commands';
import type { TaskEditor } from '../task-editor.svelte';
import { beginGesture, type Gesture } from './gesture';
import { idSet, mapOf, withEntry } from '../plain';
import { keepsOrder, placingOf, usualGap, type Placing } from './placing';

export interface ZoneItem {
  id: string;
  [SHADOW_ITEM_MARKER_PROPERTY_NAME]?: boolean;
}

/** A point of the Page: µs under the pointer and µs where a dragged block's onset would be. */
export interface PagePoint {
  pointer: number;
  onset: number;
}

interface Dragged {
  /** Trials that are moved, the one under the pointer first; or the card that is placed. */
  what: { kind: 'trials'; ids: string[] } | { kind: 'card'; cardId: string };
  gesture: Gesture<PagePoint>;
}

export class PageDrag {
  /** Lists of the lines touched by the drag, by line number. */
  lists = $state.raw(mapOf<number, ZoneItem[]>());
  /** Where a drop would put it now; null while it is beside the Page. */
  placing = $state.raw<Placing | null>(null);
  /** Ids of the carried trials in the preview. */
  carried = $state.raw(idSet());
  #dragged = $state.raw<Dragged | null>(null);
  #isCancelled = false;
  #isOverPage = false;
  #refusal: string | null = null;
  #stopListening: (() => void) | null = null;

  constructor(
    readonly editor: TaskEditor,
    /** Where a point of the window lies on the Page, or null beside it; `grab` px are taken off for the onset. */
    readonly locate: (x: number, y: number, grab: number) => PagePoint | null,
    /** Called when a drag has ended, with the trial that was under the pointer: it gets the focus back. */
    readonly onDropped: (trialId: string) => void
  ) {}

  get isActive(): boolean {
    return this.#dragged !== null;
  }
  /** Number of trials that are carried, for the badge. */
  get count(): number {
    const what = this.#dragged?.what;
    return !what ? 0 : what.kind === 'trials' ? what.ids.length : 1;
  }

  beginTrial(trialId: string, grab: number): void {
    const { selection } = this.editor;
    const others = selection.has(trialId) ? [...selection].filter((id) => id !== trialId) : [];
    const here = this.editor.settled.trials.find((t) => t.trial.id === trialId);
    this.#begin({ kind: 'trials', ids: [trialId, ...others] }, grab, here?.length ?? 0);
  }

  beginCard(cardId: string): void {
    const card = this.editor.document.cards.find((c) => c.id === cardId);
    if (card) this.#begin({ kind: 'card', cardId }, 0, card.duration);
  }

  /** `consider` of a line's zone. */
  consider(line: number, event: CustomEvent<DndEvent<ZoneItem>>, grabOf: (id: string) => number): void {
    const { items, info } = event.detail;
    if (info.trigger === TRIGGERS.DRAG_STARTED) this.beginTrial(info.id, grabOf(info.id));
    this.lists = withEntry(this.lists, line, items);
  }

  /** `finalize` of a line's zone. */
  finalize(event: CustomEvent<DndEvent<ZoneItem>>): void {
    const { trigger } = event.detail.info;
    // The zone that a trial left also says so; the zone that got it speaks for the drop.
    this.#end(trigger === TRIGGERS.DROPPED_INTO_ZONE && this.#isOverPage);
  }

  /** Ends a drag that was dropped back on the Tray or beside everything. */
  abandon(): void {
    this.#end(false);
  }

  /** Escape: the library knows no cancel, so it is told that the button was let go, and its answer is ignored. */
  cancel(): void {
    if (!this.#dragged) return;
    const { what } = this.#dragged;
    this.#isCancelled = true;
    window.dispatchEvent(new MouseEvent('mouseup'));
    this.#end(false);
    this.editor.announce('Move cancelled; everything is where it was.');
    if (what.kind === 'trials' && what.ids[0]) this.onDropped(what.ids[0]);
  }

  #begin(what: Dragged['what'], grab: number, length: number): void {
    if (this.#dragged) return;
    this.#isCancelled = false;
    this.#isOverPage = false;
    this.#refusal = null;
    const gesture = beginGesture<PagePoint>(this.editor, (point) => this.#outcome(what, length, point));
    this.#dragged = { what, gesture };
    const move = (e: MouseEvent | TouchEvent): void => {
      const at = 'touches' in e ? e.touches[0] : e;
      if (!at || this.#isCancelled) return;
      const point = this.locate(at.clientX, at.clientY, grab);
      this.#isOverPage = point !== null;
      if (point) return gesture.preview(point);
      this.placing = null;
      this.editor.preview(null);
    };
    const key = (e: KeyboardEvent): void => {
      if (e.key !== 'Escape') return;
      e.preventDefault();
      e.stopPropagation();
      this.cancel();
    };
    window.addEventListener('mousemove', move);
    window.addEventListener('touchmove', move);
    window.addEventListener('keydown', key, true);
    this.#stopListening = () => {
      window.removeEventListener('mousemove', move);
      window.removeEventListener('touchmove', move);
      window.removeEventListener('keydown', key, true);
    };
  }

  #end(isDropped: boolean): void {
    const dragged = this.#dragged;
    if (!dragged) return;
    this.#dragged = null;
    this.#stopListening?.();
    this.#stopListening = null;
    if (isDropped && !this.#isCancelled) {
      dragged.gesture.commit();
      if (this.#refusal) this.editor.problem = this.#refusal;
      else this.editor.select(this.carried);
      const [first] = this.carried;
      if (first) this.onDropped(first);
    } else dragged.gesture.cancel();
    this.lists = mapOf();
    this.placing = null;
    this.carried = idSet();
  }

  /** The edit that a drop at this point would be; null where it would change nothing or is refused. */
  #outcome(what: Dragged['what'], length: number, point: PagePoint): Edit | null {
    const { document, runId, settled, view } = this.editor;
    const { trials } = settled;
    const { tr } = document.brief;
    const moving = idSet(what.kind === 'trials' ? what.ids : []);
    const others = trials.filter((t) => !moving.has(t.trial.id));
    const placing = placingOf({ others, ...point, length, grid: view.grid, tr });
    this.placing = placing;
    this.carried = moving;
    this.#refusal = null;
    try {
      if (what.kind === 'card') {
        const made =
          placing.kind === 'at'
            ? placeTrial(document, runId, what.cardId, placing.onset)
            : insertTrial(document, runId, what.cardId, placing.after, usualGap(trials, view.grid, tr));
        this.carried = idSet([made.trialId]);
        return made;
      }
      if (placing.kind === 'after')
        return keepsOrder(trials, moving, placing.after)
          ? null
          : moveTrialAfter(document, runId, what.ids, placing.after);
      const here = trials.find((t) => t.trial.id === what.ids[0]);
      const delta = placing.onset - (here?.onset ?? placing.onset);
      return delta === 0 ? null : moveTrials(document, runId, what.ids, delta);
    } catch (error) {
      if (!(error instanceof EditError)) throw error;
      this.#refusal = error.message;
      return null;
    }
  }
}
