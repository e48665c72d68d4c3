import { asImpulses } from '../convolution/modulate';
import type { DesignEvent } from '../convolution/event';
import { peakScale } from '../convolution/peak-scale';
import { regressor } from '../convolution/regressor';
import { finiteImpulseResponse, type ResponseBasis } from '../response/bases';
import type { Response } from '../response/response';
import type { Seconds } from '../units';
import type { Column } from './setting';

/** A condition and its events in one run. */
export interface ConditionEvents {
  name: string;
  events: readonly DesignEvent[];
  /** Length of its usual trial in seconds: what the peak scale refers to; 0 for brief events. */
  trialDuration?: Seconds;
}

/**
 * Detection columns: one per condition, scaled so that one isolated trial has peak 1.
 * @returns as many columns as conditions, one value per volume time
 */
export function detectionColumns(
  conditions: readonly ConditionEvents[],
  response: Response,
  times: ArrayLike<Seconds>
): Column[] {
  return conditions.map(({ name, events, trialDuration = 0 }) => ({
    name,
    values: regressor(events, response, times, peakScale(response, trialDuration))
  }));
}

/** Every member of a basis for every condition, condition by condition, in the scale of the formula. */
export function basisColumns(
  conditions: readonly ConditionEvents[],
  basis: ResponseBasis,
  times: ArrayLike<Seconds>
): Column[] {
  return conditions.flatMap(({ name, events }) =>
    basis.map((response) => ({
      name: `${name}, ${response.name.toLowerCase()}`,
      values: regressor(events, response, times)
    }))
  );
}

/**
 * Estimation columns: `lags` finite impulse response columns of `width` seconds per condition, events as impulses.
 */
export function estimationColumns(
  conditions: readonly ConditionEvents[],
  lags: number,
  width: Seconds,
  times: ArrayLike<Seconds>
): Column[] {
  const brief = conditions.map((condition) => ({ ...condition, events: asImpulses(condition.events) }));
  return basisColumns(brief, finiteImpulseResponse(lags, width), times);
}
