/** How a person likes to see the Page; remembered on this machine, never part of the document. */
import { isGrid, type Grid } from './page/grid';

export const LINE_SECONDS = [20, 30, 45, 60, 90, 120] as const;
export type PageView = 'lines' | 'table';

const KEY = 'ebbline-page-view';

export class ViewMemory {
  #lineSeconds = $state<number>(60);
  #grid = $state<Grid>('TR/4');
  #page = $state<PageView>('lines');

  /** Read in the browser, after the first drawing, so that it equals what the server drew. */
  recall(): void {
    try {
      const kept = JSON.parse(localStorage.getItem(KEY) ?? '{}') as Record<string, unknown>;
      if (LINE_SECONDS.includes(kept.lineSeconds as 60)) this.#lineSeconds = kept.lineSeconds as number;
      if (isGrid(kept.grid)) this.#grid = kept.grid;
      if (kept.page === 'lines' || kept.page === 'table') this.#page = kept.page;
    } catch {
      // Unreadable or forbidden storage: the defaults stay.
    }
  }

  get lineSeconds(): number {
    return this.#lineSeconds;
  }
  set lineSeconds(value: number) {
    this.#lineSeconds = value;
    this.#remember();
  }
  get grid(): Grid {
    return this.#grid;
  }
  set grid(value: Grid) {
    this.#grid = value;
    this.#remember();
  }
  get page(): PageView {
    return this.#page;
  }
  set page(value: PageView) {
    this.#page = value;
    this.#remember();
  }

  #remember(): void {
    try {
      localStorage.setItem(
        KEY,
        JSON.stringify({ lineSeconds: this.#lineSeconds, grid: this.#grid, page: this.#page })
      );
    } catch {
      // Not remembered then; the view itself has changed.
    }
  }
}
