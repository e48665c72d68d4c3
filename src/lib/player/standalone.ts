/**
 * The whole player of a bundle: reads the payload that stands in its page and leads from entry to saved files.
 * Compiled to one classic script by `?bundle=iife`; it asks for nothing from anywhere.
 */
import { config } from 'zod';
import { sha256Hex } from '$lib/task/canonical';
import { readPayload } from './payload';
import { runAttempt } from './render/attempt';
import { h } from './render/dom';
import { selfCheck } from './render/screens/check';
import { showEnd } from './render/screens/end';
import { askEntry } from './render/screens/entry';
import { showInstructions, showOver } from './render/screens/participant';
import { askReady } from './render/screens/ready';
import { codeOf, listen, Sitting, type Entry } from './render/session';
import { Speaker } from './render/speaker';
import { RunStore } from './render/store';

// The page's policy forbids making code from text, and must not even be asked.
config({ jitless: true });

/** `value`: the payload as parsed; `bundle`: hash of its text, which runs are kept under. */
export async function startStandalone(value: unknown, root: HTMLElement, bundle: string): Promise<void> {
  const read = readPayload(value);
  if (!read.ok) return refuse(root, read.problems);
  const { payload } = read;
  const store = await RunStore.open(`${payload.study.label} ${bundle}`).catch(() => null);
  const sitting = new Sitting(payload, store, root);
  let last: Entry | null = null;
  for (;;) {
    const entry: Entry = await askEntry(sitting, last);
    await goFullScreen();
    if (await sitThrough(sitting, entry)) last = entry;
  }
}

/** From self-check to saved files. False: the operator went back to the entry. */
async function sitThrough(sitting: Sitting, entry: Entry): Promise<boolean> {
  const hasSound = sitting.payload.document.cards.some((c) => c.items.some((i) => i.kind === 'sound'));
  const speaker = hasSound ? new Speaker(entry.profile) : null;
  const off = leaveButtonsAlone(entry);
  try {
    await speaker?.wake();
    const check = await selfCheck(sitting, entry, speaker);
    if (!check) return false;
    await showInstructions(sitting, entry);
    for (;;) {
      const choice = await askReady(sitting, entry, check.items);
      if (choice === 'back') return false;
      if (choice === 'instructions') {
        await showInstructions(sitting, entry);
        continue;
      }
      await goFullScreen();
      const outcome = await runAttempt(sitting, entry, check, speaker);
      if (!outcome) continue;
      await showOver(sitting, entry);
      await showEnd(sitting, entry, outcome.record, outcome.key);
      return true;
    }
  } catch (problem) {
    refuse(sitting.root, [problem instanceof Error ? problem.message : String(problem)]);
    return new Promise(() => {});
  } finally {
    off.forEach((end) => end());
    speaker?.close();
  }
}

/** Keys of scanner and response device never press a button, whichever key they send. */
function leaveButtonsAlone({ profile }: Entry): (() => void)[] {
  const keep = (event: KeyboardEvent) => {
    const code = codeOf(event);
    const isDevice = code === profile.triggerKey || profile.responseKeys.some((k) => k.code === code);
    if (isDevice && event.target instanceof HTMLButtonElement) event.preventDefault();
  };
  return [listen('keydown', keep, true), listen('keyup', keep, true)];
}

/** Asked in answer to a press; a browser that refuses leaves the window as it is, which the log's screen facts show. */
async function goFullScreen(): Promise<void> {
  if (!document.fullscreenElement) await document.documentElement.requestFullscreen?.().catch(() => {});
}

function refuse(root: HTMLElement, problems: readonly string[]): void {
  root.replaceChildren(
    h(
      'div',
      { class: 'player', 'data-state': 'refused' },
      h(
        'div',
        { class: 'screen' },
        h('div'),
        h('div'),
        h(
          'main',
          { class: 'one', role: 'alert' },
          h('h1', {}, 'This bundle cannot be run.'),
          h('p', {}, 'Unpack it again from its zip; if that does not help, pack it again.'),
          h('ul', { class: 'list' }, ...problems.map((p) => h('li', { class: 'red' }, p)))
        )
      )
    )
  );
}

/** Starts by itself where a page holds a payload. */
function startFromPage(): void {
  const element = document.getElementById('payload');
  const root = document.getElementById('root');
  if (!element || !root) return;
  const text = element.textContent ?? '';
  const bundle = sha256Hex(text);
  const expected = element.dataset.sha256;
  if (expected !== undefined && expected !== bundle)
    return refuse(root, ['The task in this page is not the one that was packed: its checksum differs.']);
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch {
    return refuse(root, ['The task in this page is damaged: it cannot be read.']);
  }
  void startStandalone(value, root, bundle);
}

if (typeof document !== 'undefined') startFromPage();
