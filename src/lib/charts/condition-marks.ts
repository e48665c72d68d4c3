/**
 * How a condition is told apart without colour: a pattern on its blocks, a line style of its curve. Both follow from
 * the pattern that the document names, so block, curve, key and table always agree.
 */
import type { Condition } from '$lib/task/schema';

export type Pattern = Condition['pattern'];

/** SVG `stroke-dasharray` of each pattern's curve; an empty string is an unbroken line. */
export const DASHES: Record<Pattern, string> = {
  diagonal: '',
  level: '7 2.5',
  dots: '2 2.2',
  upright: '10 3 2 3',
  lattice: '4 3',
  'back-diagonal': '14 4',
  waves: '6 2 2 2 2 2',
  plain: '1 4'
};

export const patternId = (pattern: Pattern): string => `pattern-${pattern}`;
export const colourOf = (condition: Pick<Condition, 'colour'> | undefined): string =>
  condition ? `var(--${condition.colour})` : 'var(--rule-strong)';

/** A small picture of the pattern as CSS background layers, for keys and lists outside an SVG. */
const wash = 'color-mix(in srgb, var(--sheet) 55%, transparent)';
export const PATTERN_BACKGROUNDS: Record<Pattern, string> = {
  diagonal: `repeating-linear-gradient(45deg, ${wash} 0 2px, transparent 2px 6px)`,
  level: `repeating-linear-gradient(0deg, transparent 0 2.5px, ${wash} 2.5px 4.5px)`,
  dots: `radial-gradient(circle at 3px 3px, ${wash} 1.2px, transparent 1.7px) 0 0 / 6px 6px`,
  upright: `repeating-linear-gradient(90deg, ${wash} 0 2px, transparent 2px 6px)`,
  lattice: `repeating-linear-gradient(45deg, ${wash} 0 1.4px, transparent 1.4px 6px), repeating-linear-gradient(-45deg, ${wash} 0 1.4px, transparent 1.4px 6px)`,
  'back-diagonal': `repeating-linear-gradient(-45deg, ${wash} 0 2px, transparent 2px 6px)`,
  waves: `radial-gradient(circle at 4px 7px, transparent 3px, ${wash} 3.3px 4.6px, transparent 5px) 0 0 / 8px 7px`,
  plain: 'none'
};

/** `style` of a swatch or block: colour below, pattern above it. */
export function markStyle(condition: Pick<Condition, 'colour' | 'pattern'> | undefined): string {
  const ground = `background-color:${colourOf(condition)}`;
  if (!condition || condition.pattern === 'plain') return ground;
  // `background` would reset the colour: images, positions and sizes are set one by one.
  const layer = PATTERN_BACKGROUNDS[condition.pattern];
  const sized = /^(.*?) 0 0 \/ (.*)$/.exec(layer);
  return sized
    ? `${ground};background-image:${sized[1]};background-size:${sized[2]}`
    : `${ground};background-image:${layer}`;
}
