/** A short self-check before the run: frames, screen, storage, focus, keys, and what only the operator can tell. */
import { mapResponses, keyProblems, fingerWords } from '../../fingers';
import { checkFrames, checkKeys, checkResolution, checkStorage, type CheckItem } from '../../self-check';
import { button, field, h, keyCap } from '../dom';
import { codeOf, isTyping, listen, type Entry, type Sitting } from '../session';
import type { Speaker } from '../speaker';
import { freeStorage } from '../store';
import { frame, heading } from './frame';

export interface CheckOutcome {
  items: CheckItem[];
  /** Measured frame interval, seconds. */
  frameInterval: number;
}

/** How long frames are watched, seconds. */
const WATCHED = 3;
/** Going full screen costs frames of its own, which say nothing about the run, seconds. */
const SETTLES = 0.7;

/** Null: the operator went back to the entry. */
export async function selfCheck(
  sitting: Sitting,
  entry: Entry,
  speaker: Speaker | null
): Promise<CheckOutcome | null> {
  const { payload } = sitting;
  const { profile } = entry;
  const mapped = mapResponses(payload.document, profile, entry.row);
  const wanted = [...new Set(mapped.flatMap((r) => (r.code === null ? [] : [r.code])))];
  const items = new Map<string, CheckItem>();
  const order: string[] = [];
  const list = h('ul', { class: 'list', 'aria-label': 'Self-check', 'aria-live': 'polite' });
  let skipped: string | null = null;
  let interval = 1 / profile.screen.refreshRate;

  const put = (item: CheckItem) => {
    if (!items.has(item.id)) order.push(item.id);
    items.set(item.id, item);
    paint();
  };
  const paint = () => {
    list.replaceChildren(
      ...order.map((id) => {
        const { level, text, detail } = items.get(id)!;
        return h('li', { class: level }, `${text}`, h('span', {}, detail));
      })
    );
    const isRed = [...items.values()].some((i) => i.level === 'red');
    go.disabled = isRed || !items.has('frames');
    state.textContent = !items.has('frames')
      ? 'Watching the screen for three seconds…'
      : isRed
        ? 'Something red stands between you and the run: mend it, or go back.'
        : 'The run can begin.';
  };
  const putKeys = () => put(checkKeys([...sitting.keysSeen], wanted, skipped));
  const state = h('p', { role: 'status' });
  const go = button('Go on', () => finish(true), true);
  let finish: (on: boolean) => void = () => {};

  const note = h('input', { type: 'text', maxlength: 200 });
  const skip = button('Go on without trying the keys', () => {
    skipped = note.value.trim();
    putKeys();
  });
  const asked = h('input', { type: 'checkbox', change: () => put(powerItem(asked.checked)) });
  const heard = h('input', {
    type: 'checkbox',
    change: () => put(soundItem(heard.checked, profile.soundLevel))
  });
  const sound = payload.document.cards.flatMap((c) => c.items).find((i) => i.kind === 'sound');

  const left = h(
    'div',
    {},
    heading('Self-check', 'Press each response key once.'),
    h(
      'p',
      {},
      wanted.length
        ? mapped.map((r) => `${r.name}: ${fingerWords(r.finger)}${r.code ? ` (${r.code})` : ''}`).join(' · ')
        : 'The task asks for no response.'
    ),
    state,
    wanted.length ? field('Why the keys are not tried', note) : null,
    h(
      'div',
      { class: 'buttons' },
      go,
      wanted.length ? skip : null,
      sound?.kind === 'sound' && speaker ? button('Play the test tone', () => speaker.test(sound)) : null,
      button('Back', () => finish(false))
    ),
    h('p', {}),
    sound
      ? h('p', {}, h('label', {}, heard, 'The participant hears the tone, with the protection on'))
      : null,
    h('p', {}, h('label', {}, asked, 'Power saving, screen saver and notifications are off'))
  );
  sitting.show(
    'check',
    frame({
      payload,
      entry,
      main: [left, list],
      foot: [h('span', {}, keyCap('Tab'), ' and ', keyCap('Enter'), ' reach everything')]
    })
  );

  for (const problem of keyProblems(mapped, profile))
    put({ id: `key ${problem}`, level: 'red', text: problem, detail: '' });
  putKeys();
  if (payload.kind !== 'PRACTICE')
    put(triggerItem(profile.triggerKey, sitting.keysSeen.has(profile.triggerKey)));
  if (entry.overrides.length)
    put({
      id: 'overrides',
      level: 'amber',
      text: `Changed for this sitting: ${entry.overrides.map((o) => o.what).join(', ')}`,
      detail: 'logged'
    });
  put(focusItem());
  const ratio = window.devicePixelRatio || 1;
  put(
    checkResolution(
      { width: Math.round(screen.width * ratio), height: Math.round(screen.height * ratio) },
      profile.screen.resolution
    )
  );
  put(powerItem(false));
  if (sound) put(soundItem(false, profile.soundLevel));
  void freeStorage().then((free) =>
    put(checkStorage(sitting.store !== null && sitting.store.failed === null, free))
  );
  const stop = watchFrames((frames) => {
    const { interval: measured, ...item } = checkFrames(frames, profile.screen.refreshRate);
    interval = measured;
    put(item);
    // Only where nothing else has been taken up meanwhile.
    if (!go.disabled && document.activeElement === document.body) go.focus();
  });
  const off = [
    listen('keydown', (event) => {
      const code = codeOf(event);
      if (isTyping(event) || event.repeat || !(wanted.includes(code) || code === profile.triggerKey)) return;
      event.preventDefault();
      sitting.keysSeen.add(code);
      if (code === profile.triggerKey) put(triggerItem(code, true));
      else putKeys();
    }),
    listen('blur', () => put(focusItem())),
    listen('focus', () => put(focusItem())),
    stop
  ];
  const goesOn = await new Promise<boolean>((done) => (finish = done));
  off.forEach((end) => end());
  return goesOn ? { items: order.map((id) => items.get(id)!), frameInterval: interval } : null;
}

function watchFrames(done: (frames: number[]) => void): () => void {
  const frames: number[] = [];
  let handle = 0;
  let ended = false;
  const end = () => {
    if (ended) return;
    ended = true;
    cancelAnimationFrame(handle);
    done(frames);
  };
  let begun = NaN;
  const each = (time: number) => {
    const now = time / 1000;
    if (Number.isNaN(begun)) begun = now;
    if (now - begun >= SETTLES) frames.push(now);
    if (now - begun >= SETTLES + WATCHED) end();
    else handle = requestAnimationFrame(each);
  };
  handle = requestAnimationFrame(each);
  // A hidden window gets no frames at all, and must say so too.
  const timer = setTimeout(end, (SETTLES + WATCHED + 2) * 1000);
  return () => {
    ended = true;
    clearTimeout(timer);
    cancelAnimationFrame(handle);
  };
}

const triggerItem = (code: string, seen: boolean): CheckItem => ({
  id: 'trigger',
  level: 'green',
  text: `Trigger key is ${code}`,
  detail: seen ? 'seen' : 'by the profile'
});
const focusItem = (): CheckItem =>
  document.hasFocus()
    ? { id: 'focus', level: 'green', text: 'This window receives the keys', detail: 'in focus' }
    : { id: 'focus', level: 'red', text: 'Another window receives the keys', detail: 'click into this one' };
const powerItem = (isOff: boolean): CheckItem => ({
  id: 'power',
  level: isOff ? 'green' : 'amber',
  text: 'Power saving could not be read',
  detail: isOff ? 'asked, confirmed off' : 'asked, not confirmed'
});
const soundItem = (isHeard: boolean, level: number): CheckItem => ({
  id: 'sound',
  level: isHeard ? 'green' : 'amber',
  text: isHeard ? 'Sound audible to the participant' : 'Sound not confirmed by the participant',
  detail: `at most ${String(level).replace('-', '−')} dB FS`
});
