/**
 * The first `most` UTF-16 units of a text, never ending in half a character: a lone surrogate is no Unicode text, and
 * neither the database nor canonical JSON takes it.
 */
export const cut = (text: string, most: number): string =>
  text.slice(0, most).replace(/[\uD800-\uDBFF]$/, '');
