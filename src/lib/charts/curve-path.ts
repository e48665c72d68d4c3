/** SVG path of samples taken at equal steps. Pure; the caller says where a value stands. */

export interface CurveFrame {
  /** px of sample `from`. */
  x0: number;
  /** px between two samples. */
  step: number;
  /** px of value 0. */
  zero: number;
  /** px for a value of 1; up is smaller y. */
  unit: number;
  /** Limits of y, px. */
  top: number;
  bottom: number;
}

const px = (v: number): string => String(Math.round(v * 10) / 10);

/**
 * Path through `values[from … to]` (both ends included, clipped to the array). Points that lie on a straight
 * horizontal stretch are left out: rest is most of a run.
 */
export function curvePath(values: ArrayLike<number>, from: number, to: number, frame: CurveFrame): string {
  const first = Math.max(0, from);
  const last = Math.min(values.length - 1, to);
  if (last < first) return '';
  const y = (i: number): string =>
    px(Math.min(frame.bottom, Math.max(frame.top, frame.zero - (values[i] ?? 0) * frame.unit)));
  const x = (i: number): string => px(frame.x0 + (i - from) * frame.step);
  let path = `M${x(first)} ${y(first)}`;
  let here = y(first);
  for (let i = first + 1; i <= last; i++) {
    const next = y(i);
    if (i < last && next === here && y(i + 1) === here) continue;
    path += `L${x(i)} ${next}`;
    here = next;
  }
  return path;
}

/** Smallest and largest of several series, with 0 always inside. */
export function extent(series: readonly ArrayLike<number>[]): { low: number; high: number } {
  let low = 0;
  let high = 0;
  for (const values of series)
    for (let i = 0; i < values.length; i++) {
      const v = values[i] ?? 0;
      if (v < low) low = v;
      if (v > high) high = v;
    }
  return { low, high };
}
