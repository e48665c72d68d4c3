/** A small builder for elements, so that screens read like what they show. Sets no style attribute, parses no HTML. */
type Child = Node | string | null | false | undefined;
type Attributes = Record<string, string | number | boolean | null | undefined | ((event: Event) => void)>;

export function h<K extends keyof HTMLElementTagNameMap>(
  tag: K,
  attributes: Attributes = {},
  ...children: Child[]
): HTMLElementTagNameMap[K] {
  const element = document.createElement(tag);
  for (const [name, value] of Object.entries(attributes)) {
    if (value === null || value === undefined || value === false) continue;
    if (typeof value === 'function') element.addEventListener(name, value);
    else if (value === true) element.setAttribute(name, '');
    else element.setAttribute(name, String(value));
  }
  for (const child of children)
    if (child !== null && child !== false && child !== undefined) element.append(child);
  return element;
}

/** A labelled field; `hint` stands under it and is read with it. */
export function field(label: string, input: HTMLElement, hint = ''): HTMLElement {
  const id = input.id || `f-${label.toLowerCase().replace(/[^a-z0-9]+/g, '-')}`;
  input.id = id;
  const note = hint ? h('small', { id: `${id}-hint` }, hint) : null;
  if (note) input.setAttribute('aria-describedby', note.id);
  return h('p', { class: 'field' }, h('label', { for: id }, label), input, note);
}

export const button = (label: string, act: () => void, main = false): HTMLButtonElement =>
  h('button', { type: 'button', class: main ? 'main' : null, click: act }, label);

export const keyCap = (text: string): HTMLElement => h('kbd', {}, text);
