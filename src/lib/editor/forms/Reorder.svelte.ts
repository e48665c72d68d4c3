import { SOURCES, TRIGGERS, type DndEvent } from 'svelte-dnd-action';

/**
 * Order of a list while something in it is dragged. The document sees one change: at the drop of a pointer, or
 * when a keyboard drag is ended (each arrow press also reports a drop, which is only shown).
 */
export class Reorder<T extends { id: string }> {
  #moving: T[] | null = $state.raw(null);

  constructor(
    private readonly current: () => readonly T[],
    private readonly commit: (ids: string[]) => void
  ) {}

  get items(): T[] {
    return this.#moving ?? [...this.current()];
  }

  consider = (event: CustomEvent<DndEvent<T>>): void => {
    const { items, info } = event.detail;
    if (info.trigger === TRIGGERS.DRAG_STOPPED) this.#finish(items);
    else this.#moving = items;
  };

  finalize = (event: CustomEvent<DndEvent<T>>): void => {
    const { items, info } = event.detail;
    if (info.source === SOURCES.POINTER || info.trigger === TRIGGERS.DRAG_STOPPED) this.#finish(items);
    else this.#moving = items;
  };

  #finish(items: T[]): void {
    const ids = items.map((item) => item.id);
    const before = this.current();
    this.#moving = null;
    if (ids.length === before.length && ids.some((id, i) => id !== before[i]?.id)) this.commit(ids);
  }
}

/** The document's objects in a new order; ids that are not there are left out. */
export const inOrder = <T extends { id: string }>(things: readonly T[], ids: readonly string[]): T[] =>
  ids.flatMap((id) => things.filter((thing) => thing.id === id));
