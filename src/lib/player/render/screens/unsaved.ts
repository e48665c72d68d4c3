/** Runs kept here whose files nobody has called safe: after a crash, a power cut or a closed window. */
import { button, h } from '../dom';
import { attemptFiles, recoveredEnding } from '../files';
import { download } from '../save';
import type { Sitting } from '../session';
import type { StoredAttempt } from '../store';

/** A list with a way to save each and to say that it is safe; null when there is none. */
export async function unsavedRuns(sitting: Sitting): Promise<HTMLElement | null> {
  const { store } = sitting;
  const waiting = ((await store?.attempts()) ?? []).filter((attempt) => !attempt.safe);
  if (!store || !waiting.length) return null;
  const rows = waiting.map((attempt) => {
    const files = async () => {
      const entries = await store.entries(attempt.key);
      const ending = attempt.ending ?? recoveredEnding(entries);
      return attemptFiles(sitting.payload, { header: attempt.header, entries, ending });
    };
    const name = nameOf(attempt);
    const save = (which: 'log' | 'events') => () => void files().then((all) => download(all[which]));
    const row: HTMLElement = h(
      'li',
      { class: attempt.ending ? 'amber' : 'red' },
      h(
        'div',
        {},
        name,
        h('small', {}, stateOf(attempt)),
        h(
          'div',
          { class: 'buttons' },
          named(button('Save log', save('log')), `Save log of ${name}`),
          named(button('Save event table', save('events')), `Save event table of ${name}`),
          named(
            button('Files are safe', () => void store.markSafe(attempt.key).then(() => row.remove())),
            `Files of ${name} are safe`
          )
        )
      )
    );
    return row;
  });
  return h(
    'section',
    { 'aria-label': 'Unsaved runs' },
    h('h2', {}, 'Unsaved runs'),
    h('ul', { class: 'list' }, ...rows)
  );
}

const named = (element: HTMLElement, name: string): HTMLElement => {
  element.setAttribute('aria-label', name);
  return element;
};
const nameOf = ({ header }: StoredAttempt): string =>
  `sub-${header.participant}${header.session ? ` ses-${header.session}` : ''} run ${header.run.index}, attempt ${header.attempt}`;
const stateOf = ({ ending, header }: StoredAttempt): string =>
  `${ending ? `${ending.state}: ${ending.reason}` : 'did not come to its end'} · begun ${header.started.utc.replace('T', ' ').slice(0, 16)} UTC`;
