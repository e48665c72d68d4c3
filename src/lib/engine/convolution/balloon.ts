import { pow } from '../elementary';
import { EngineError, requireFinite, requirePositive } from '../errors';
import type { Seconds } from '../units';
import { requireEvent, type DesignEvent } from './event';
import { requireTimes } from './times';

/** Parameters of the balloon model. Rates per second, times in seconds. */
export interface BalloonParameters {
  /** How strongly stimulation drives the flow-inducing signal. */
  efficacy: number;
  /** Decay of that signal. */
  decay: number;
  /** Feedback of flow on it. */
  feedback: number;
  /** Mean transit time through the venous balloon. */
  transit: Seconds;
  /** Grubb's exponent: volume = flow^stiffness at rest. */
  stiffness: number;
  /** Resting oxygen extraction. */
  extraction: number;
  /** Resting blood volume fraction. */
  volume: number;
}

export const BALLOON: Readonly<BalloonParameters> = {
  efficacy: 0.54,
  decay: 0.65,
  feedback: 0.41,
  transit: 0.98,
  stiffness: 0.33,
  extraction: 0.34,
  volume: 0.02
};

/** Longest Runge–Kutta step: halving it changes the signal by less than 1e-7 of its peak (tested). */
const STEP: Seconds = 0.02;
/** Flow is kept above this share of rest; only stimulation far beyond the model's domain gets near it. */
const LEAST_FLOW = 0.01;

/** Signal, flow, volume, deoxyhaemoglobin; rest is 0, 1, 1, 1. */
type State = [signal: number, flow: number, volume: number, deoxy: number];

/**
 * Predicted signal change with mild saturation, an option for preview only: close events sum to less than the sum of
 * their responses. No design number uses it.
 *
 * s′ = ε·u − κ·s − γ(f − 1), f′ = s, τv′ = f − v^(1/α), τq′ = f·E(f)/E₀ − v^(1/α)·q/v, E(f) = 1 − (1 − E₀)^(1/f);
 * signal V₀[7E₀(1 − q) + 2(1 − q/v) + (2E₀ − 0.2)(1 − v)], a fraction of rest (0.01 is one percent).
 * A brief event (duration 0, area 1 s) is a jump of s by ε. Fourth-order Runge–Kutta between all edges.
 *
 * @param times seconds, rising; before the first event the model is at rest
 * @returns one value per time
 * Errors: `EngineError` for malformed events, negative heights (the model knows no negative stimulation), parameters
 * not above 0.
 * Source: Friston KJ, Mechelli A, Turner R, Price CJ (2000) Nonlinear responses in fMRI: the balloon model, Volterra
 * kernels, and other hemodynamics. NeuroImage 12:466–477 (from memory; values checked against SciPy's integrator).
 */
export function balloonSignal(
  events: readonly DesignEvent[],
  times: ArrayLike<Seconds>,
  parameters: Partial<BalloonParameters> = {}
): Float64Array {
  requireTimes(times);
  const all = { ...BALLOON, ...parameters };
  for (const [name, value] of Object.entries(all))
    requirePositive(`balloon parameter “${name}”`, value, 'Use the published value.');
  const changes = changesOf(events);
  const out = new Float64Array(times.length);
  let state: State = [0, 1, 1, 1];
  let drive = 0;
  let now = Math.min(times[0]!, changes[0]?.at ?? times[0]!);
  let next = 0;
  for (let n = 0; n < times.length; n += 1) {
    for (; next < changes.length && changes[next]!.at <= times[n]!; next += 1) {
      const change = changes[next]!;
      state = advance(state, drive, change.at - now, all);
      now = change.at;
      state[0] += all.efficacy * change.jump;
      drive += change.drive;
    }
    state = advance(state, drive, times[n]! - now, all);
    now = times[n]!;
    out[n] = signalOf(state, all);
  }
  return out;
}

interface Change {
  at: Seconds;
  jump: number;
  drive: number;
}

function changesOf(events: readonly DesignEvent[]): Change[] {
  return events
    .flatMap((event) => {
      const { onset, duration, height = 1 } = requireEvent(event);
      requireFinite('event height', height, 'Give the modulator a number.');
      if (height < 0)
        throw new EngineError(
          'event height',
          height,
          'a number not below 0',
          'Preview it with the linear response.'
        );
      if (duration === 0) return [{ at: onset, jump: height, drive: 0 }];
      return [
        { at: onset, jump: 0, drive: height },
        { at: onset + duration, jump: 0, drive: -height }
      ];
    })
    .sort((a, b) => a.at - b.at);
}

function advance(start: State, drive: number, length: Seconds, p: BalloonParameters): State {
  const count = Math.ceil(length / STEP);
  const h = length / Math.max(1, count);
  let state: State = [...start];
  for (let i = 0; i < count; i += 1) {
    const a = rates(state, drive, p);
    const b = rates(moved(state, a, h / 2), drive, p);
    const c = rates(moved(state, b, h / 2), drive, p);
    const d = rates(moved(state, c, h), drive, p);
    state = state.map((value, k) => value + (h / 6) * (a[k]! + 2 * b[k]! + 2 * c[k]! + d[k]!)) as State;
  }
  return state;
}

function rates([s, flow, v, q]: State, drive: number, p: BalloonParameters): State {
  const f = Math.max(flow, LEAST_FLOW);
  const outflow = pow(v, 1 / p.stiffness);
  const extraction = 1 - pow(1 - p.extraction, 1 / f);
  return [
    p.efficacy * drive - p.decay * s - p.feedback * (flow - 1),
    s,
    (f - outflow) / p.transit,
    ((f * extraction) / p.extraction - (outflow * q) / v) / p.transit
  ];
}

function moved([s, f, v, q]: State, [ds, df, dv, dq]: State, h: number): State {
  return [s + h * ds, f + h * df, v + h * dv, q + h * dq];
}

function signalOf([, , v, q]: State, p: BalloonParameters): number {
  return p.volume * (7 * p.extraction * (1 - q) + 2 * (1 - q / v) + (2 * p.extraction - 0.2) * (1 - v));
}
