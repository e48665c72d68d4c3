/** Before and after arming: what to type at the console, what the check said, what a key does. */
import { clockText } from '$lib/task/time';
import type { CheckItem } from '../../self-check';
import type { PulseNews } from '../../pulses';
import { button, h, keyCap } from '../dom';
import { codeOf, listen, type Entry, type Sitting } from '../session';
import { frame, heading } from './frame';

const checks = (items: readonly CheckItem[]): HTMLElement =>
  h(
    'ul',
    { class: 'list', 'aria-label': 'Self-check' },
    ...items.map((i) => h('li', { class: i.level }, i.text, h('span', {}, i.detail)))
  );

const ordinal = (n: number): string =>
  ['first', 'second', 'third', 'fourth', 'fifth', 'sixth'][n - 1] ?? `${n}th`;

/** `302 volumes, of which the first 2 are dummies with pulses, TR 1.5 s, 7:33 in all.` */
export function scanSentence(entry: Entry, trMicros: number): (Node | string)[] {
  const { pulsesBeforeZero: before, silentDummies, pulses } = entry.profile;
  const volumes = entry.run.volumes + before;
  const dummies = before
    ? `, of which the first ${before === 1 ? 'is a dummy' : `${before} are dummies`} with ${before === 1 ? 'a pulse' : 'pulses'}`
    : '';
  const silent = silentDummies ? ` (and ${silentDummies} silent before them)` : '';
  const starts =
    pulses.mode === 'once'
      ? 'The task starts by the one pulse.'
      : `The task starts with the ${ordinal(before * (pulses.mode === 'several-per-volume' ? pulses.perVolume : 1) + 1)} pulse.`;
  return [
    h('b', {}, `${volumes} volumes`),
    `${dummies}${silent}, TR ${trMicros / 1e6} s, ${clockText((volumes + silentDummies) * trMicros)} in all. ${starts}`
  ];
}

export type ReadyChoice = 'arm' | 'instructions' | 'back';

export function askReady(sitting: Sitting, entry: Entry, items: readonly CheckItem[]): Promise<ReadyChoice> {
  const { payload } = sitting;
  const isPractice = payload.kind === 'PRACTICE';
  const seen = h('p', { class: 'soft', role: 'status' }, 'Pulses before arming are not obeyed.');
  let pulses = 0;
  const off = listen('keydown', (event) => {
    if (event.repeat || codeOf(event) !== entry.profile.triggerKey) return;
    pulses += 1;
    seen.textContent = `${pulses === 1 ? 'One pulse' : `${pulses} pulses`} seen and not obeyed: the run is not armed.`;
  });
  return new Promise<ReadyChoice>((done) => {
    const arm = button(isPractice ? 'Start practice' : 'Arm the run', () => done('arm'), true);
    arm.setAttribute('data-focus', '');
    const left = h(
      'div',
      {},
      heading('Ready.', isPractice ? 'Start when the participant is.' : 'Arm when the scanner is.'),
      isPractice
        ? h('p', {}, 'No scanner is needed: time zero is the moment you start.')
        : h('p', {}, ...scanSentence(entry, payload.document.brief.tr)),
      isPractice ? null : seen,
      h(
        'div',
        { class: 'buttons' },
        arm,
        button('Instructions again', () => done('instructions')),
        button('Back', () => done('back'))
      )
    );
    sitting.show('ready', frame({ payload, entry, main: [left, checks(items)] }));
  }).finally(off);
}

export interface ArmedView {
  view: HTMLElement;
  pulse(news: PulseNews, found: number): void;
  alarm(text: string): void;
}

/** Armed and waiting. `showParticipant`: turn to the participant's page. */
export function armedView(
  sitting: Sitting,
  entry: Entry,
  items: readonly CheckItem[],
  secondWithin: number,
  showParticipant: () => void,
  disarm: () => void
): ArmedView {
  const { payload } = sitting;
  const { pulses, pulsesBeforeZero } = entry.profile;
  const many = pulses.mode === 'once' ? 1 : Math.min(24, Math.max(3, pulsesBeforeZero + 1));
  const dots = Array.from({ length: many }, () => h('i'));
  const state = h(
    'p',
    { class: 'soft', role: 'status' },
    'No pulse yet. ',
    pulses.mode === 'once'
      ? ''
      : `Pulses from a pre-scan do no harm: without a second one within ${secondWithin.toFixed(2)} s the run arms again by itself.`
  );
  const alarm = h('p', { class: 'error', role: 'alert' });
  const left = h(
    'div',
    {},
    heading('Armed.', 'Waiting for the trigger.'),
    alarm,
    h('p', {}, 'Start the scan now: ', ...scanSentence(entry, payload.document.brief.tr)),
    h('div', { class: 'pulses', 'aria-hidden': 'true' }, ...dots),
    state,
    h(
      'div',
      { class: 'buttons' },
      button('Show the participant’s page', showParticipant),
      button('Disarm', disarm)
    )
  );
  const foot = [
    h('span', {}, keyCap('Backspace'), ' disarm'),
    h('span', {}, keyCap('V'), ' participant’s page'),
    h('span', {}, keyCap('F'), ' full screen'),
    h(
      'span',
      {},
      'hold ',
      keyCap('Shift'),
      ' + ',
      keyCap('End'),
      ' one second: end the run early, kept as partial'
    )
  ];
  return {
    view: frame({ payload, entry, main: [left, checks(items)], foot }),
    alarm: (text) => (alarm.textContent = text),
    pulse(news, found) {
      dots.forEach((dot, i) => dot.classList.toggle('on', i < found));
      if (news.kind === 'pulse')
        state.textContent = `${found === 1 ? 'One pulse' : `${found} pulses`} counted.`;
      if (news.kind === 'false-start')
        state.textContent = 'One pulse came and no second: armed again, nothing is lost.';
    }
  };
}
