import { cos, sin } from '../elementary';
import { EngineError, requireFinite } from '../errors';
import { gaussLegendre } from '../linalg/gauss-legendre';
import type { Hertz } from '../units';
import type { Complex, Response } from './response';

const RULE = gaussLegendre(16);

/**
 * H(f) = ∫ h(t) e^(−2πift) dt: how a response passes a frequency on. |H(0)| is its area.
 *
 * Closed form where the shape has one (untruncated gamma mixtures); otherwise sixteen-point Gauss–Legendre on panels
 * of at most half a second and a quarter of a turn.
 * @param f Hz, any sign
 * Errors: `EngineError` for an endless shape without a closed form.
 */
export function transferOf(response: Response, f: Hertz): Complex {
  requireFinite('frequency', f, 'Give it in Hz.');
  if (response.transfer) return response.transfer(f);
  if (!Number.isFinite(response.length))
    throw new EngineError(
      'response length',
      response.length,
      'a finite support',
      'Cut the response at 32 s.'
    );
  const panel = Math.min(0.5, 0.25 / Math.max(Math.abs(f), 1e-9));
  const count = Math.ceil(response.length / panel);
  const half = response.length / count / 2;
  const omega = -2 * Math.PI * f;
  let [re, im] = [0, 0];
  for (let i = 0; i < count; i += 1)
    for (let k = 0; k < RULE.nodes.length; k += 1) {
      const t = (2 * i + 1 + RULE.nodes[k]!) * half;
      const height = RULE.weights[k]! * half * response.value(t);
      re += height * cos(omega * t);
      im += height * sin(omega * t);
    }
  return { re, im };
}

/**
 * |H(f)|.
 * @example gainOf(doubleGamma({ length: Infinity }), 0) // 5 / 6
 */
export function gainOf(response: Response, f: Hertz): number {
  const { re, im } = transferOf(response, f);
  return Math.sqrt(re * re + im * im);
}
