/** Pictures and tables leave the page as files: SVG that stands alone, tab-separated text. */

/** Replaces every `var(--token)` by its present value, so that the picture needs no style sheet of the page. */
export function resolveVariables(text: string, valueOf: (name: string) => string): string {
  return text.replace(/var\((--[a-z0-9-]+)\)/g, (whole, name: string) => valueOf(name).trim() || whole);
}

/** The picture as a file of its own: name space, size, ground, colours resolved. */
export function svgText(svg: SVGSVGElement): string {
  const copy = svg.cloneNode(true) as SVGSVGElement;
  copy.setAttribute('xmlns', 'http://www.w3.org/2000/svg');
  const { width, height } = svg.viewBox.baseVal;
  copy.setAttribute('width', String(width));
  copy.setAttribute('height', String(height));
  copy.setAttribute('font-family', 'Atkinson Hyperlegible, sans-serif');
  copy.removeAttribute('class');
  const ground = document.createElementNS('http://www.w3.org/2000/svg', 'rect');
  for (const [name, value] of Object.entries({ width, height, fill: 'var(--sheet)' }))
    ground.setAttribute(name, String(value));
  copy.insertBefore(ground, copy.firstChild);
  const style = getComputedStyle(document.documentElement);
  return resolveVariables(new XMLSerializer().serializeToString(copy), (name) =>
    style.getPropertyValue(name)
  );
}

export type Cell = string | number | null;

/** Rows as tab-separated text: numbers with all their digits, white space that would break the table as a space. */
export function tsvText(header: readonly string[], rows: readonly (readonly Cell[])[]): string {
  const cell = (value: Cell): string =>
    value === null || (typeof value === 'number' && !Number.isFinite(value))
      ? 'n/a'
      : String(value)
          .replace(/[\p{Cc}\u2028\u2029]+/gu, ' ')
          .trim() || 'n/a';
  return [header, ...rows].map((row) => row.map(cell).join('\t')).join('\n') + '\n';
}

/** Offers text as a file. */
export function downloadText(name: string, text: string, type: string): void {
  const link = document.createElement('a');
  link.href = URL.createObjectURL(new Blob([text], { type }));
  link.download = name;
  link.click();
  setTimeout(() => URL.revokeObjectURL(link.href), 10_000);
}
