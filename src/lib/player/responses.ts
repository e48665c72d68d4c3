/**
 * Key presses → answers of response windows.
 *
 * A press belongs to the window opened latest among those open that allow the response. Outside every window it is
 * late for the last closed one (within a limit), else early for the coming one of the trial that has begun, else
 * unassigned: one of them, never two.
 */
import type { MappedResponse } from './fingers';
import type { ScheduledWindow } from './schedule';

/** Seconds after a window's end within which a press is called late for it. */
export const LATE_WITHIN = 1;

export type Place = 'in' | 'late' | 'early' | 'unassigned';
export interface Press {
  place: Place;
  response: MappedResponse;
  /** Seconds from time zero, corrected by the device's delay. */
  time: number;
  window: ScheduledWindow | null;
}
export type Verdict = 'correct' | 'wrong' | 'missing' | 'answered';
export interface Answer {
  window: ScheduledWindow;
  verdict: Verdict;
  /** The presses taken by the card's rule, in order. */
  taken: Press[];
  /** All presses in the window. */
  presses: number;
}

interface Open {
  window: ScheduledWindow;
  presses: Press[];
}

export class ResponseReader {
  readonly #windows: readonly ScheduledWindow[];
  readonly #byCode = new Map<string, MappedResponse>();
  #next = 0;
  #open: Open[] = [];
  #lastClosed: ScheduledWindow | null = null;

  constructor(windows: readonly ScheduledWindow[], responses: readonly MappedResponse[]) {
    this.#windows = windows;
    for (const r of responses) if (r.code !== null) this.#byCode.set(r.code, r);
  }

  /** The response a key stands for; undefined for other keys. */
  responseOf(code: string): MappedResponse | undefined {
    return this.#byCode.get(code);
  }

  /** Opens and closes windows up to `time`, seconds from zero; answers of the windows that closed, in order. */
  advance(time: number): Answer[] {
    if (this.#next >= this.#windows.length && this.#open.length === 0) return NONE;
    while (this.#next < this.#windows.length && this.#windows[this.#next]!.onset <= time)
      this.#open.push({ window: this.#windows[this.#next++]!, presses: [] });
    if (!this.#open.some((o) => o.window.end <= time)) return NONE;
    const closed = this.#open.filter((o) => o.window.end <= time).sort((a, b) => a.window.end - b.window.end);
    this.#open = this.#open.filter((o) => o.window.end > time);
    this.#lastClosed = closed.at(-1)!.window;
    return closed.map(judge);
  }

  /**
   * A press of a response key at `time`. Windows must have been advanced no further than the press, or it may be
   * called late for a window that it was in time for: hold back `advance` by the input's own lag.
   */
  press(response: MappedResponse, time: number): Press {
    const open = this.#open.findLast((o) => o.window.allowed.has(response.id) && time >= o.window.onset);
    const press: Press = { place: 'in', response, time, window: open?.window ?? null };
    if (open) {
      open.presses.push(press);
      return press;
    }
    const last = this.#lastClosed;
    if (last && last.allowed.has(response.id) && time - last.end <= LATE_WITHIN)
      return { ...press, place: 'late', window: last };
    const coming = this.#windows[this.#next];
    if (coming && coming.allowed.has(response.id) && time >= coming.trialOnset && time < coming.onset)
      return { ...press, place: 'early', window: coming };
    return { ...press, place: 'unassigned' };
  }

  /** Closes whatever is open, and opens no more: the run is over. */
  finish(): Answer[] {
    const rest = this.#open;
    this.#open = [];
    this.#next = this.#windows.length;
    return rest.map(judge);
  }
}

const NONE: Answer[] = [];

function judge({ window, presses }: Open): Answer {
  const { take, correct } = window.window;
  const taken = take === 'all' ? presses : take === 'last' ? presses.slice(-1) : presses.slice(0, 1);
  const verdict: Verdict = !taken.length
    ? 'missing'
    : correct === null
      ? 'answered'
      : taken.every((p) => p.response.id === correct)
        ? 'correct'
        : 'wrong';
  return { window, verdict, taken, presses: presses.length };
}
