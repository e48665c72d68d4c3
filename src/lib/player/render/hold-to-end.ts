/**
 * Shift and End, held together for a second, end a run. Only these two keys let go of the hold: a scanner's pulses
 * and the participant's presses come and go meanwhile, and must not keep the operator from stopping.
 */

/** ms */
export const HOLD = 1000;

const isShift = (code: string): boolean => code === 'ShiftLeft' || code === 'ShiftRight' || code === 'Shift';

export class HoldToEnd {
  readonly #end: () => void;
  #holding: ReturnType<typeof setTimeout> | undefined;

  constructor(end: () => void) {
    this.#end = end;
  }

  /** A key went down, auto-repeat left out. `withShift`: Shift is down too. */
  down(code: string, withShift: boolean): void {
    if (code !== 'End' || !withShift) return;
    this.letGo();
    this.#holding = setTimeout(this.#end, HOLD);
  }
  up(code: string): void {
    if (code === 'End' || isShift(code)) this.letGo();
  }
  /** The keys were lost with the window, or the run is over. */
  letGo(): void {
    clearTimeout(this.#holding);
  }
}
