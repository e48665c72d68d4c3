/**
 * Preview of mild saturation: the sum of the responses beside the balloon model, both as percent of their own largest
 * isolated response. No design number uses it.
 */
import { balloonSignal } from '$lib/engine/convolution/balloon';
import { regressor } from '$lib/engine/convolution/regressor';
import { singleEventPeak } from '$lib/engine/convolution/peak-scale';
import { compileRun } from '$lib/task/compile';
import { RESPONSE } from '$lib/task/model';
import type { Run, TaskDocument } from '$lib/task/schema';
import { toSeconds } from '$lib/task/time';

export interface SaturationPreview {
  /** Seconds. */
  times: Float64Array;
  /** Both scaled so that one isolated event of the first event's duration peaks at 1. */
  added: Float64Array;
  saturated: Float64Array;
}

const STEP = 0.5;

/** The signal of all modelled events of a run together, every half second. Null without events. */
export function saturationPreview(doc: TaskDocument, run: Run): SaturationPreview | null {
  const events = compileRun(doc, run).events.map((e) => ({
    onset: toSeconds(e.onset),
    duration: toSeconds(e.duration)
  }));
  const first = events[0];
  if (!first) return null;
  const end = run.volumes * toSeconds(doc.brief.tr);
  const times = Float64Array.from({ length: Math.floor(end / STEP) + 1 }, (_, i) => i * STEP);
  const alone = { onset: 0, duration: first.duration };
  const lone = Float64Array.from({ length: 120 }, (_, i) => i * STEP);
  const peak = Math.max(...balloonSignal([alone], lone));
  return {
    times,
    added: regressor(events, RESPONSE, times, 1 / singleEventPeak(RESPONSE, first.duration).value),
    saturated: balloonSignal(events, times).map((v) => v / peak)
  };
}
