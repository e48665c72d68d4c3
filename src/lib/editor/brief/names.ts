import type { CONDITION_COLOURS, CONDITION_PATTERNS } from '$lib/task/schema';

export const COLOUR_NAMES: Record<(typeof CONDITION_COLOURS)[number], string> = {
  c1: 'brick',
  c2: 'harbour',
  c3: 'olive',
  c4: 'heather',
  c5: 'fern',
  c6: 'thrift',
  c7: 'sky',
  c8: 'sand'
};
export const PATTERN_NAMES: Record<(typeof CONDITION_PATTERNS)[number], string> = {
  diagonal: 'rising lines',
  level: 'level lines',
  dots: 'dots',
  upright: 'upright lines',
  lattice: 'lattice',
  'back-diagonal': 'falling lines',
  waves: 'waves',
  plain: 'plain'
};

/** A sentence when a name is taken among its neighbours, or holds what an event table cannot; else null. */
export function refuseName(name: string, taken: readonly string[], what: string): string | null {
  if (/[\t\r\n]/.test(name)) {
    return `The name holds a tab or a line break, which would split the event table; use spaces.`;
  }
  if (name.trim().toLowerCase() === 'n/a') {
    return `‘${name}’ means ‘no value’ in an event table; choose another name.`;
  }
  if (taken.includes(name)) {
    return `‘${name}’ is already the name of another ${what}; choose a name of its own.`;
  }
  return null;
}

/** A first look at a HED string, or null; the full check against the schema is made on export. */
export function hedTrouble(hed: string): string | null {
  let depth = 0;
  for (const c of hed) {
    if (c === '(') depth++;
    if (c === ')') depth--;
    if (depth < 0) return 'A closing bracket has no opening one before it; remove it or open the group.';
  }
  if (depth > 0)
    return `${depth === 1 ? 'A bracket is' : `${depth} brackets are`} not closed; add ‘)’ where the group ends.`;
  if (/,\s*(,|\)|$)|\(\s*,|^\s*,/.test(hed.trim()))
    return 'A comma has no tag beside it; remove it or add the tag.';
  return null;
}
