/**
 * The Page wraps a run like lines of text: every line covers the same stretch of the scan. All arithmetic between
 * time (integer µs), line number and x (px from the line's start) is here, so that hit-testing needs no DOM.
 */

export interface PageGeometry {
  /** µs that one line covers. */
  lineLength: number;
  /** px of one line's ruled stretch. */
  width: number;
  /** Number of the first line; below 0 where a trial starts before time zero. */
  first: number;
  /** How many lines there are, at least 1. */
  count: number;
}

export interface Stretch {
  line: number;
  /** px */
  x: number;
  /** px */
  width: number;
  /** Whether the block begins, ends on this line. */
  begins: boolean;
  ends: boolean;
}

/** Lines that hold everything from `from` to `to`, µs; always the line of time zero. */
export function makeGeometry(lineLength: number, width: number, from: number, to: number): PageGeometry {
  const first = Math.min(0, Math.floor(from / lineLength));
  // Something that ends exactly where a line ends needs no further line.
  const last = Math.max(0, Math.ceil(to / lineLength) - 1);
  return { lineLength, width, first, count: last - first + 1 };
}

export const lineOf = (g: PageGeometry, t: number): number => Math.floor(t / g.lineLength);
export const lineStart = (g: PageGeometry, line: number): number => line * g.lineLength;
/** px from the start of `line`; outside 0…width where `t` lies on another line. */
export const xOn = (g: PageGeometry, line: number, t: number): number =>
  ((t - lineStart(g, line)) / g.lineLength) * g.width;
/** µs at `x` px of a line, not yet snapped. */
export const timeAt = (g: PageGeometry, line: number, x: number): number =>
  g.width <= 0 ? lineStart(g, line) : lineStart(g, line) + Math.round((x / g.width) * g.lineLength);
export const widthOf = (g: PageGeometry, micros: number): number => (micros / g.lineLength) * g.width;

export const lineNumbers = (g: PageGeometry): number[] =>
  Array.from({ length: g.count }, (_, i) => g.first + i);

/** The stretches of a block from `onset` to `end` (µs) on the lines it touches; a momentary block has one of 0 px. */
export function stretches(g: PageGeometry, onset: number, end: number): Stretch[] {
  const from = lineOf(g, onset);
  const to = end > onset ? Math.ceil(end / g.lineLength) - 1 : from;
  return Array.from({ length: to - from + 1 }, (_, i) => {
    const line = from + i;
    const start = Math.max(onset, lineStart(g, line));
    const stop = Math.min(end, lineStart(g, line + 1));
    return {
      line,
      x: xOn(g, line, start),
      width: widthOf(g, stop - start),
      begins: i === 0,
      ends: line === to
    };
  });
}

export interface VolumeTick {
  x: number;
  /** Volume number, from 1. */
  volume: number;
  major: boolean;
}

/** Ruling of one line: a tick where each stored volume begins, a major one at every tenth (1, 11, 21, …). */
export function volumeTicks(g: PageGeometry, line: number, tr: number, volumes: number): VolumeTick[] {
  const from = Math.max(0, Math.ceil(lineStart(g, line) / tr));
  const to = Math.min(volumes, Math.ceil(lineStart(g, line + 1) / tr));
  const ticks: VolumeTick[] = [];
  // Closer than 3 px the ruling would be a grey wash: then only every fifth or tenth volume is drawn.
  const spacing = widthOf(g, tr);
  const every = spacing >= 3 ? 1 : spacing * 5 >= 3 ? 5 : 10;
  for (let v = Math.ceil(from / every) * every; v < to; v += every)
    ticks.push({ x: xOn(g, line, v * tr), volume: v + 1, major: v % 10 === 0 });
  return ticks;
}

/** Volume (from 1) that is being acquired at `t`, or null outside the scan. */
export function volumeAt(t: number, tr: number, volumes: number): number | null {
  const v = Math.floor(t / tr) + 1;
  return v >= 1 && v <= volumes ? v : null;
}

/** `m:ss`, with as many decimals as the time needs: 62250000 → `1:02.25`. */
export function pageClock(t: number): string {
  const size = Math.abs(t);
  const whole = Math.floor(size / 1_000_000);
  const part = String(size % 1_000_000)
    .padStart(6, '0')
    .replace(/0+$/, '');
  const text = `${Math.floor(whole / 60)}:${String(whole % 60).padStart(2, '0')}${part && `.${part}`}`;
  return t < 0 ? `−${text}` : text;
}
