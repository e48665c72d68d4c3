/**
 * The figures of the run on screen: predicted curves, efficiency, VIF, correlations, Notices. Everything is derived
 * from the document or from the preview of a gesture, so it moves while something is dragged.
 */
import { designReport, type DesignReport } from '$lib/engine/design/report';
import { contrastRow, runLength, type CompiledRun, type Factor } from '$lib/task/compile';
import { eventsByFactor, isReckonable, RESPONSE, runTimes } from '$lib/task/model';
import { noticesOf, type Notice } from '$lib/task/notices';
import type { Profile } from '$lib/task/profile';
import type { Condition, Run, TaskDocument } from '$lib/task/schema';
import { MICROS, toSeconds } from '$lib/task/time';
import { idSet, mapOf } from '../plain';
import { LiveSignal } from './live-signal';

export interface DesignHost {
  readonly shown: TaskDocument;
  readonly run: Run;
  readonly compiled: CompiledRun;
  readonly factors: Factor[];
  readonly profile: Profile;
}

/** Points at which curves are drawn: `from + i · step`, seconds. */
export interface DrawGrid {
  from: number;
  step: number;
  count: number;
}

export interface PredictedCurve {
  factor: Factor;
  condition: Condition | undefined;
  /** On the draw grid; 1 is the peak of one isolated trial. */
  values: Float64Array;
}

/** A live signal that is made anew only when what it stands on changes. */
class Remembered {
  #key = '';
  #signal: LiveSignal | null = null;
  get(key: string, make: () => LiveSignal): LiveSignal {
    if (!this.#signal || key !== this.#key) {
      this.#signal = make();
      this.#key = key;
    }
    return this.#signal;
  }
}

const MINUTE = 60 * MICROS;
/** Seconds between drawn points; each divides every line length. Coarser only where a run is very long. */
const STEPS = [0.25, 0.5, 1, 2.5, 5] as const;
const MOST_POINTS = 16_000;

export class DesignView {
  readonly #host: DesignHost;
  readonly #drawn = new Remembered();
  readonly #sampled = new Remembered();

  constructor(host: DesignHost) {
    this.#host = host;
  }

  /** Whole minutes around the run, so that a drag seldom changes the grid. */
  readonly drawGrid: DrawGrid = $derived.by(() => {
    const { shown, run, compiled } = this.#host;
    const first = Math.min(0, compiled.trials[0]?.onset ?? 0);
    const last = compiled.trials.reduce((end, t) => Math.max(end, t.end), runLength(shown, run));
    const from = Math.floor(first / MINUTE) * 60;
    const to = (Math.ceil(last / MINUTE) + 2) * 60;
    const step = STEPS.find((s) => (to - from) / s <= MOST_POINTS) ?? 5;
    return { from, step, count: Math.round((to - from) / step) + 1 };
  });

  readonly #scales = $derived.by(() => {
    const { shown, compiled, factors } = this.#host;
    return mapOf(
      eventsByFactor(shown, compiled, factors).map(({ factor, scale }) => [factor.key, scale] as const)
    );
  });

  /** Factors that have an event on this run. */
  readonly present: Factor[] = $derived.by(() => {
    const { compiled, factors } = this.#host;
    const keys = idSet(compiled.events.map((e) => e.factor));
    return factors.filter((f) => keys.has(f.key));
  });

  readonly curves: PredictedCurve[] = $derived.by(() => {
    const { compiled, shown } = this.#host;
    const scales = this.#scales;
    const grid = this.drawGrid;
    const even = { from: grid.from * MICROS, step: grid.step * MICROS, count: grid.count };
    const signal = this.#drawn.get(
      JSON.stringify([[...scales], grid]),
      () => new LiveSignal(RESPONSE, even, scales)
    );
    signal.update(compiled.events);
    // A condition without trials on this run has nothing to draw.
    return this.present.map((factor) => ({
      factor,
      condition: shown.brief.conditions.find((c) => c.id === factor.conditionId),
      values: signal.values(factor.key)
    }));
  });

  readonly report: DesignReport | null = $derived.by(() => {
    const { shown, run, compiled, factors, profile } = this.#host;
    if (factors.length === 0 || !isReckonable(shown, run)) return null;
    const scales = this.#scales;
    const { tr, highPass, noise, contrasts } = shown.brief;
    const sampling = [profile.acquisitionTime, profile.acquisitionStart, profile.sliceReference];
    const signal = this.#sampled.get(JSON.stringify([[...scales], tr, run.volumes, sampling]), () => {
      const from = (runTimes(shown, run, profile)[0] ?? 0) * MICROS;
      return new LiveSignal(RESPONSE, { from, step: tr, count: run.volumes }, scales);
    });
    signal.update(compiled.events);
    return designReport({
      tr: toSeconds(tr),
      // The profile's times are even, so the setting of drift and noise can be remembered from frame to frame.
      volumes: run.volumes,
      columns: factors.map((f) => ({ name: f.name, values: signal.values(f.key) })),
      contrasts: contrasts.map((c) => ({ name: c.name, weights: contrastRow(c, factors) })),
      highPass,
      noise
    });
  });

  readonly notices: Notice[] = $derived.by(() => {
    const { shown, run, compiled, profile } = this.#host;
    return noticesOf(shown, run, profile, this.report?.contrasts ?? [], compiled);
  });

  /** Predicted value of a curve at a time (µs), between two drawn points by a straight line; 0 outside. */
  valueAt(curve: PredictedCurve, micros: number): number {
    const { from, step } = this.drawGrid;
    const at = (toSeconds(micros) - from) / step;
    const i = Math.floor(at);
    const here = curve.values[i] ?? 0;
    return here + ((curve.values[i + 1] ?? 0) - here) * (at - i);
  }
}
