/** After the run: what was found, where it goes, and only then what is next. */
import { countLines, standing } from '../../log';
import { button, h } from '../dom';
import { attemptFiles, type AttemptRecord } from '../files';
import { canSaveToFolder, download, saveToFolder } from '../save';
import { listen, type Entry, type Sitting } from '../session';
import { frame, heading } from './frame';

/** `key`: of the attempt in the store, or null where nothing could be kept. */
export function showEnd(
  sitting: Sitting,
  entry: Entry,
  record: AttemptRecord,
  key: string | null
): Promise<void> {
  const { payload, store } = sitting;
  const files = attemptFiles(payload, record);
  const saved = new Set<string>();
  const isComplete = record.ending.state === 'complete';
  const status = h('p', { role: 'status' }, 'Not saved yet.');
  const title = heading(
    isComplete ? 'Run complete.' : 'Ended early.',
    isComplete ? 'Save it now.' : 'Kept as partial: save it now.',
    !isComplete
  );
  const lost = key === null || store === null || store.failed !== null;

  return new Promise((done) => {
    const safe = button(
      'The files are safe',
      () =>
        void (async () => {
          // A store that broke keeps nothing anyway: the operator, who has the files, must not be kept here by it.
          if (key !== null) await store?.markSafe(key).catch(() => {});
          off();
          status.textContent = 'Safe to close: this window may be closed, or the next run begun.';
          title.replaceWith(heading(isComplete ? 'Run complete.' : 'Ended early.', 'Safe to close.'));
          next.disabled = false;
          safe.disabled = true;
          next.focus();
        })()
    );
    safe.disabled = true;
    const next = button(
      'Next run',
      () => {
        off();
        done();
      },
      false
    );
    next.disabled = payload.kind !== 'PRACTICE';
    const note = (what: string) => {
      saved.add(what);
      const whole = saved.has('log') && saved.has('events');
      status.textContent = whole
        ? 'Saved. Look that both files are where they belong, then say so.'
        : `Saved: ${saved.has('log') ? 'the log' : 'the event table'}. ${saved.has('log') ? 'The event table' : 'The log'} is still to be saved.`;
      safe.disabled = !whole;
    };
    const save = (what: 'log' | 'events' | 'sidecar') => () => {
      download(files[what]);
      if (what !== 'sidecar') note(what);
    };
    const first = button('Save log', save('log'), true);
    first.setAttribute('data-focus', '');
    const toFolder = async () => {
      if (!(await saveToFolder([files.log, files.events, files.sidecar]))) return;
      note('log');
      note('events');
    };
    const off = listen('beforeunload', (event) => event.preventDefault());
    const left = h(
      'div',
      {},
      title,
      isComplete ? null : h('p', {}, `Why: ${record.ending.reason}.`),
      lost
        ? h(
            'p',
            { class: 'error', role: 'alert' },
            `The browser could not keep this run${store?.failed ? ` (${store.failed})` : ''}: save both files before anything else.`
          )
        : null,
      status,
      h(
        'div',
        { class: 'buttons' },
        first,
        button('Save event table', save('events'), true),
        button('Save sidecar', save('sidecar')),
        canSaveToFolder()
          ? button(
              'Save all to a folder',
              () =>
                void toFolder().catch(
                  (e: unknown) =>
                    (status.textContent = `Not saved: ${e instanceof Error ? e.message : String(e)}. Choose another folder, or use the other buttons.`)
                )
            )
          : null
      ),
      h('div', { class: 'buttons' }, safe, next)
    );
    sitting.show('end', frame({ payload, entry, main: [left, facts(record)] }));
  });
}

function facts({ entries, header }: AttemptRecord): HTMLElement {
  const kept = standing(entries);
  const counts = countLines(kept);
  const answers = kept.flatMap((e) => (e.type === 'response' && e.state !== 'press' ? [e.state] : []));
  const of = (s: string) => answers.filter((a) => a === s).length;
  const per = header.pulses.mode === 'several-per-volume' ? header.pulses.perVolume : 1;
  const expected = header.pulses.mode === 'once' ? 1 : (header.volumes + header.pulses.beforeZero) * per;
  const focus = kept.filter((e) => e.type === 'focus' && (e.state === 'lost' || e.state === 'hidden')).length;
  const interval = kept.find((e) => e.type === 'note' && e.what === 'interval');
  const row = (level: string, text: string, detail: string) =>
    h('li', { class: level }, text, h('span', {}, detail));
  const rows = [
    row(
      counts.itemsNotShown ? 'amber' : 'green',
      `${counts.itemsShown} items shown`,
      counts.itemsNotShown ? `${counts.itemsNotShown} not shown` : 'all of them'
    ),
    header.kind === 'PRACTICE'
      ? null
      : row(
          counts.pulsesCounted === expected ? 'green' : 'amber',
          `${counts.pulsesCounted} of ${expected} pulses`,
          `${counts.pulsesMissed} missed`
        ),
    interval?.type === 'note'
      ? row(/another TR/.test(interval.text) ? 'red' : 'green', `TR: ${interval.text}`, '')
      : null,
    row(counts.framesDropped ? 'amber' : 'green', `${counts.framesDropped} frames dropped`, ''),
    answers.length
      ? row(
          'green',
          `${of('correct')} correct, ${of('wrong')} wrong, ${of('missing')} missing`,
          `${answers.length} windows`
        )
      : null,
    row(
      focus ? 'red' : 'green',
      focus ? `The window lost the keys ${focus} times` : 'The window kept the keys',
      ''
    )
  ];
  return h('ul', { class: 'list', 'aria-label': 'What was found' }, ...rows);
}
