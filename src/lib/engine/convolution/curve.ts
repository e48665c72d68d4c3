import { EngineError, requireFinite, requirePositive } from '../errors';
import type { Response } from '../response/response';
import type { Seconds } from '../units';
import type { DesignEvent } from './event';
import { regressor } from './regressor';

/**
 * The drawing grid from, from + step … up to and including `to`. Length floor((to − from)/step) + 1, each point
 * from its own index.
 */
export function curveTimes(from: Seconds, to: Seconds, step: Seconds): Float64Array {
  requireFinite('start of the curve', from, 'Give it in seconds.');
  requireFinite('end of the curve', to, 'Give it in seconds.');
  requirePositive('step of the curve', step, 'Use 0.1 s for a smooth line.');
  if (to < from)
    throw new EngineError('end of the curve', to, `a time not before ${from} s`, 'Swap the two ends.');
  const count = Math.floor((to - from) / step + 1e-9) + 1;
  return Float64Array.from({ length: count }, (_, i) => from + i * step);
}

/**
 * The predicted signal on a fine grid, for drawing. Same closed form as the regressor, at points `curveTimes(from,
 * to, step)`.
 * @example responseCurve([{ onset: 0, duration: 0 }], doubleGamma(), 0, 32, 0.1) // 321 values
 */
export function responseCurve(
  events: readonly DesignEvent[],
  response: Response,
  from: Seconds,
  to: Seconds,
  step: Seconds,
  scale = 1
): Float64Array {
  return regressor(events, response, curveTimes(from, to, step), scale);
}
