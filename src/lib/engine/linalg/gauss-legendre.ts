import { cos } from '../elementary';

/** Nodes in (−1, 1), rising, and weights that sum to 2. */
export interface Quadrature {
  nodes: number[];
  weights: number[];
}

/**
 * The Gauss–Legendre rule of a given order, exact for polynomials up to degree 2·order − 1: roots of the Legendre
 * polynomial by Newton from Chebyshev-like starts, weights 2/((1 − x²) P′(x)²).
 *
 * Source: Abramowitz & Stegun 25.4.29 (from memory; exactness on polynomials is tested).
 */
export function gaussLegendre(order: number): Quadrature {
  const nodes: number[] = [];
  const weights: number[] = [];
  for (let k = order; k >= 1; k -= 1) {
    let x = cos((Math.PI * (k - 0.25)) / (order + 0.5));
    for (let step = 0; step < 20; step += 1) {
      const { value, derivative } = legendreAt(order, x);
      x -= value / derivative;
      if (Math.abs(value / derivative) < 1e-16) break;
    }
    const { derivative } = legendreAt(order, x);
    nodes.push(x);
    weights.push(2 / ((1 - x * x) * derivative * derivative));
  }
  return { nodes, weights };
}

/** Pₙ(x) and P′ₙ(x) by the three-term recurrence, |x| < 1. */
function legendreAt(order: number, x: number): { value: number; derivative: number } {
  let previous = 1;
  let value = x;
  for (let n = 2; n <= order; n += 1) {
    const next = ((2 * n - 1) * x * value - (n - 1) * previous) / n;
    previous = value;
    value = next;
  }
  return { value, derivative: (order * (x * value - previous)) / (x * x - 1) };
}
