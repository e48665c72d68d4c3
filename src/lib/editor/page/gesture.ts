/**
 * A gesture is an object: it begins, previews as often as the pointer moves, and then commits once or is cancelled.
 * It never touches the document itself, so that one gesture is one undo and a cancel restores exactly.
 */
import type { Edit } from '$lib/task/commands';

export interface GestureHost {
  /** Show the outcome of an edit that is not made yet; null shows the document as it is. */
  preview(edit: Edit | null): void;
  /** Make the edit. */
  commit(edit: Edit): void;
}

export interface Gesture<Input> {
  readonly active: boolean;
  preview(input: Input): void;
  commit(): void;
  cancel(): void;
}

/**
 * `outcome` says what the edit would be for an input, or null where it would change nothing. Previews are drawn at
 * most once per frame by `schedule`, which runs its argument later and returns a function that stops it.
 */
export function beginGesture<Input>(
  host: GestureHost,
  outcome: (input: Input) => Edit | null,
  schedule: (draw: () => void) => () => void = eachFrame
): Gesture<Input> {
  let active = true;
  let latest: { input: Input } | null = null;
  let stop: (() => void) | null = null;

  const finish = (): void => {
    active = false;
    stop?.();
    stop = null;
  };
  return {
    get active() {
      return active;
    },
    preview(input) {
      if (!active) return;
      latest = { input };
      stop ??= schedule(() => {
        stop = null;
        if (active && latest) host.preview(outcome(latest.input));
      });
    },
    commit() {
      if (!active) return;
      finish();
      const edit = latest && outcome(latest.input);
      host.preview(null);
      if (edit) host.commit(edit);
    },
    cancel() {
      if (!active) return;
      finish();
      host.preview(null);
    }
  };
}

export function eachFrame(draw: () => void): () => void {
  const id = requestAnimationFrame(draw);
  return () => cancelAnimationFrame(id);
}
