/**
 * One tab stop among the blocks of a zone. Stands after `use:dndzone`, which sets the tab index of every child to -1 at
 * each update; both run on the same items, in the order they are written.
 */
export interface Roving {
  /** Changes whenever the zone's list does. */
  items: readonly unknown[];
  /** `data-trial` of the tab stop, or null where another zone has it. */
  stop: string | null;
}

export function roving(node: HTMLElement, { stop }: Roving): { update(next: Roving): void } {
  const set = (id: string | null): void => {
    for (const child of node.children)
      if (child instanceof HTMLElement) child.tabIndex = child.dataset.trial === id ? 0 : -1;
  };
  set(stop);
  return { update: (next) => set(next.stop) };
}
