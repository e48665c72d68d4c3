/** What a check before the run found, in words that stand on the operator's screen and in the log's header. */
export interface CheckItem {
  id: string;
  level: 'green' | 'amber' | 'red';
  text: string;
  /** Short figure or remark beside it. */
  detail: string;
}

/** Median frame interval, its spread and dropped frames against the profile's refresh rate. `frames`: seconds. */
export function checkFrames(frames: readonly number[], planned: number): CheckItem & { interval: number } {
  const gaps = frames.slice(1).map((t, i) => t - frames[i]!);
  if (gaps.length < 20)
    return {
      id: 'frames',
      level: 'red',
      text: 'The screen gives no frames: is the window hidden?',
      detail: `${gaps.length} frames`,
      interval: 1 / planned
    };
  const sorted = [...gaps].sort((a, b) => a - b);
  const interval = sorted[sorted.length >> 1]!;
  const rate = 1 / interval;
  const dropped = gaps.reduce((n, g) => n + Math.max(0, Math.round(g / interval) - 1), 0);
  const asPlanned = Math.abs(rate - planned) <= 0.02 * planned;
  const none =
    dropped === 0 ? `none of ${gaps.length} frames dropped` : `${dropped} of ${gaps.length} frames dropped`;
  return {
    id: 'frames',
    level: asPlanned && dropped === 0 ? 'green' : 'amber',
    text: `Screen ${rate.toFixed(1)} Hz, ${none}`,
    detail: asPlanned ? 'as planned' : `planned ${planned} Hz`,
    interval
  };
}

/** Size of the window's screen in device pixels against the profile's. */
export function checkResolution(
  actual: { width: number; height: number },
  planned: { width: number; height: number }
): CheckItem {
  const same = actual.width === planned.width && actual.height === planned.height;
  return {
    id: 'resolution',
    level: same ? 'green' : 'amber',
    text: `Resolution ${actual.width} × ${actual.height}`,
    detail: same
      ? 'as planned'
      : `planned ${planned.width} × ${planned.height}; sizes follow the visible width`
  };
}

const ENOUGH = 50e6;
/** Room for the log and whether it can be kept at all. `free`: bytes, or null where the browser does not say. */
export function checkStorage(works: boolean, free: number | null): CheckItem {
  if (!works)
    return {
      id: 'storage',
      level: 'red',
      text: 'The browser keeps nothing: a crash would lose the run',
      detail: 'leave private mode, or allow storage'
    };
  const detail =
    free === null
      ? 'size not told'
      : free >= 1e9
        ? `${(free / 1e9).toFixed(1)} GB`
        : `${(free / 1e6).toFixed(0)} MB`;
  return {
    id: 'storage',
    level: free !== null && free < ENOUGH ? 'red' : 'green',
    text: 'Free storage',
    detail
  };
}

/** Which response keys were pressed, or that the operator went on without. */
export function checkKeys(
  seen: readonly string[],
  wanted: readonly string[],
  skipped: string | null
): CheckItem {
  const missing = wanted.filter((code) => !seen.includes(code));
  if (!wanted.length)
    return { id: 'keys', level: 'green', text: 'The task asks for no response', detail: '' };
  if (!missing.length)
    return {
      id: 'keys',
      level: 'green',
      text: `${wanted.length === 1 ? 'The response key' : `${wanted.length} response keys`} seen`,
      detail: wanted.join(', ')
    };
  if (skipped === null)
    return { id: 'keys', level: 'red', text: 'Response keys not pressed yet', detail: missing.join(', ') };
  return {
    id: 'keys',
    level: 'amber',
    text: `Not tried: ${missing.join(', ')}`,
    detail: skipped || 'no reason given'
  };
}
