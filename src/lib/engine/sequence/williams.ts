import { EngineError, requireWhole } from '../errors';

/**
 * Williams's balanced Latin square: orders of n treatments (0 … n − 1) in which each stands once in every place (twice
 * for odd n) and every ordered pair of neighbours occurs equally often: once for even n (n rows), twice for odd n
 * (2n rows).
 *
 * First row 0, 1, n−1, 2, n−2, …; each next row adds 1 modulo n; for odd n the reversed rows follow.
 * Domain: 2 ≤ n ≤ 200. Source: Williams EJ (1949) Aust J Sci Res A 2:149–168; printed tables matched.
 * @example williamsSquare(4)[0] // [0, 1, 3, 2]
 */
export function williamsSquare(n: number): number[][] {
  requireWhole('number of treatments', n, 2, 'A square needs at least two.');
  if (n > 200) throw new EngineError('number of treatments', n, 'at most 200', 'Use fewer.');
  const first = Array.from({ length: n }, (_, i) => (i % 2 === 1 ? (i + 1) / 2 : (n - i / 2) % n));
  const rows = Array.from({ length: n }, (_, shift) => first.map((value) => (value + shift) % n));
  return n % 2 === 0 ? rows : [...rows, ...rows.map((row) => row.slice().reverse())];
}
