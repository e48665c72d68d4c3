/** The frame of every operator's screen: mark, what is being run, one heading, keys and caution at the foot. */
import type { PlayerPayload } from '../../payload';
import { h } from '../dom';
import type { Entry } from '../session';

type Child = Node | string | null;

export const CAUTION = 'Stopping the task does not stop the scanner.';

export const markWords = (kind: PlayerPayload['kind']): string =>
  kind === 'PROOF'
    ? 'PROOF, not for collection'
    : kind === 'PRACTICE'
      ? 'PRACTICE, never counts as a run'
      : 'COLLECTION';

/** Stripes that mark what must not be mistaken for collection. */
export const markStripe = (kind: PlayerPayload['kind']): HTMLElement =>
  h('div', { class: kind === 'COLLECTION' ? 'mark none' : 'mark', 'aria-hidden': 'true' });

export interface FrameParts {
  payload: PlayerPayload;
  entry?: Entry | null;
  main: Child[];
  /** One column instead of two. */
  single?: boolean;
  foot?: Child[];
}

export function frame({ payload, entry, main, single = false, foot = [] }: FrameParts): HTMLElement {
  const what = (name: string, value: string | number) => h('span', {}, name, h('b', {}, String(value)));
  const { brief } = payload.document;
  return h(
    'div',
    { class: 'screen' },
    markStripe(payload.kind),
    h(
      'header',
      {},
      entry ? what('sub-', entry.participant) : null,
      entry?.session ? what('ses-', entry.session) : null,
      what('task-', brief.label),
      entry ? what('run ', `${entry.runIndex} of ${entry.runCount}`) : null,
      entry ? what('attempt ', entry.attempt) : null,
      h(
        'span',
        { class: 'kind' },
        `${markWords(payload.kind)} · revision ${payload.revision.slice(0, 4)} · profile ${payload.profile.name} ${payload.profileHash.slice(0, 4)}`
      )
    ),
    h('main', { class: single ? 'one' : null }, ...main),
    h('footer', {}, ...foot, h('span', { class: 'last' }, CAUTION))
  );
}

/** A heading of two lines, the second in the signal's colour (or the alarm's). */
export const heading = (first: string, second = '', alarm = false): HTMLElement =>
  h('h1', { class: alarm ? 'alarm' : null }, `${first} `, second ? h('i', {}, second) : null);
