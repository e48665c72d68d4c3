/**
 * Elementary functions that give the same bits on every machine.
 *
 * `Math.exp`, `Math.pow`, `Math.sin`, `Math.cos` and `Math.log` may differ in the last bit between engines, so
 * wherever a result decides something (acceptance, ranking, hashes, exported order) the engine uses these. They are
 * built from + − × ÷, comparisons and bit work only; the square root of the language is correctly rounded in every
 * engine that follows IEEE 754 and is used as it is. All errors: below 1 unit in the last place, `expm1` and `log1p`
 * below 2.
 */
export { exp, expm1 } from './elementary/exponential';
export { log, log1p } from './elementary/logarithm';
export { pow } from './elementary/power';
export { cos, sin } from './elementary/trigonometry';
export { exponentOf, powerOfTwo, scaleByPowerOfTwo } from './elementary/bits';
