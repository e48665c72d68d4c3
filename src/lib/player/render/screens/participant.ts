/** What the participant reads: instructions with the mapped fingers, 'starting soon', the end. */
import { fillInstructions, mapResponses } from '../../fingers';
import { button, h } from '../dom';
import { codeOf, listen, type Entry, type Sitting, type ViewState } from '../session';

/** A line of dashes parts pages; blank lines part paragraphs. */
export const pagesOf = (text: string): string[][] =>
  text
    .split(/^\s*-{3,}\s*$/m)
    .map((page) =>
      page
        .split(/\n\s*\n/)
        .map((p) => p.trim())
        .filter(Boolean)
    )
    .filter((page) => page.length > 0);

function page(entry: Entry, ...children: (Node | null)[]): HTMLElement {
  const { flipX, flipY } = entry.profile.screen;
  const classes = ['page', flipX ? 'flip-x' : '', flipY ? 'flip-y' : ''].filter(Boolean).join(' ');
  return h('div', { class: classes }, ...children);
}

/** Shows a page until a response key, Enter, Space or the button; answers −1 for a step back. */
function until(
  sitting: Sitting,
  state: ViewState,
  view: HTMLElement,
  keys: readonly string[]
): Promise<1 | -1> {
  sitting.show(state, view);
  return new Promise((done) => {
    const leave = (step: 1 | -1) => {
      off();
      done(step);
    };
    const off = listen('keydown', (event) => {
      const code = codeOf(event);
      if (event.repeat) return;
      const on = ['Enter', 'NumpadEnter', 'Space', 'ArrowRight', ...keys].includes(code);
      const back = ['ArrowLeft', 'Backspace'].includes(code);
      if (!on && !back) return;
      event.preventDefault();
      leave(on ? 1 : -1);
    });
    view.append(
      h(
        'p',
        { class: 'soft' },
        button('Go on', () => leave(1))
      )
    );
  });
}

/** Pages through the instructions; at once over when there are none. */
export async function showInstructions(sitting: Sitting, entry: Entry): Promise<void> {
  const mapped = mapResponses(sitting.payload.document, entry.profile, entry.row);
  const keys = mapped.flatMap((r) => (r.code === null ? [] : [r.code]));
  const pages = pagesOf(fillInstructions(sitting.payload.document.brief.instructions, mapped));
  for (let i = 0; i < pages.length;) {
    const view = page(entry, ...pages[i]!.map((text) => h('p', {}, text)));
    i = Math.max(0, i + (await until(sitting, 'instructions', view, keys)));
  }
}

export const startingSoon = (entry: Entry): HTMLElement =>
  page(entry, h('p', {}, 'Starting soon.'), h('p', { class: 'soft' }, 'Please keep still.'));

/** The end, until the operator presses Enter: a response key does not leave it. */
export async function showOver(sitting: Sitting, entry: Entry): Promise<void> {
  const view = page(
    entry,
    h('p', {}, 'This part is over.'),
    h('p', { class: 'soft' }, 'Please keep still. You will be spoken to.')
  );
  await until(sitting, 'over', view, []);
}
