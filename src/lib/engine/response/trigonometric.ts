import { cos, sin } from '../elementary';
import type { Seconds } from '../units';
import { maximise } from './peak';
import type { Response } from './response';

/** weight · sin or cos(2π · cycles · t / T). */
export interface Wave {
  kind: 'sin' | 'cos';
  cycles: number;
  weight: number;
}

/**
 * A finite sum of waves on 0 ≤ t ≤ T, 0 outside, with slope and integral term by term.
 * @param window T in seconds
 */
export function trigonometricSum(name: string, waves: readonly Wave[], window: Seconds): Response {
  const omega = (2 * Math.PI) / window;
  const inside = (t: Seconds) => t >= 0 && t <= window;
  const sum = (term: (wave: Wave) => number) =>
    waves.reduce((total, wave) => total + wave.weight * term(wave), 0);

  const value = (t: Seconds) =>
    inside(t) ? sum(({ kind, cycles }) => (kind === 'sin' ? sin : cos)(cycles * omega * t)) : 0;
  const slope = (t: Seconds) =>
    inside(t)
      ? sum(({ kind, cycles }) => {
          const rate = cycles * omega;
          return kind === 'sin' ? rate * cos(rate * t) : -rate * sin(rate * t);
        })
      : 0;
  const integral = (t: Seconds) => {
    if (t <= 0) return 0;
    const end = Math.min(t, window);
    return sum(({ kind, cycles }) => {
      if (cycles === 0) return kind === 'cos' ? end : 0;
      const rate = cycles * omega;
      // 1 − cos x as 2 sin²(x/2) keeps its digits near 0.
      const half = sin((rate * end) / 2);
      return kind === 'sin' ? (2 * half * half) / rate : sin(rate * end) / rate;
    });
  };
  return { name, length: window, value, slope, integral, peak: maximise(value, slope, 0, window) };
}
