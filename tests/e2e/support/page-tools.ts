/** What a person does on the Page, and a task that is worth doing it on. */
import { expect, type Locator, type Page } from '@playwright/test';
import { newCard, newCondition, newContrast, newDocument, newId } from '../../../src/lib/task/create';
import type { TaskDocument } from '../../../src/lib/task/schema';
import { ready, type TaskPlace } from './app';

export const SECOND = 1_000_000;
export const NAMES = ['follow-lantern', 'follow-chime', 'follow-both'] as const;

export interface Wish {
  names?: readonly string[];
  /** Onsets in s of the first run's trials; cards take turns. */
  onsets?: readonly number[];
  volumes?: number;
}

/** Three conditions with a card of 2 s each, two contrasts, and a run with trials at the wished onsets. */
export function demoDocument({ names = NAMES, onsets = [], volumes = 120 }: Wish = {}): TaskDocument {
  const doc = newDocument({
    title: 'Chime and Lantern',
    label: 'chimeAndLantern',
    tr: 1.5 * SECOND,
    volumes
  });
  for (const name of names) doc.brief.conditions.push(newCondition(doc.brief.conditions, name));
  doc.cards.push(...doc.brief.conditions.map((c) => newCard(c.name, c.id, 2 * SECOND)));
  const [a, b] = doc.brief.conditions;
  if (a && b) {
    doc.brief.contrasts.push(newContrast('first − second', { [a.id]: 1, [b.id]: -1 }));
    doc.brief.contrasts.push(
      newContrast('all', Object.fromEntries(doc.brief.conditions.map((c) => [c.id, 1])))
    );
  }
  doc.runs[0]!.trials = onsets.map((s, i) => ({
    id: newId(),
    card: doc.cards[i % doc.cards.length]!.id,
    onset: Math.round(s * SECOND)
  }));
  return doc;
}

/** What the server holds. */
export async function stored(
  page: Page,
  task: TaskPlace
): Promise<{ saveNumber: number; document: TaskDocument }> {
  return page.evaluate(async (id) => {
    const answer = await fetch(`/api/v1/tasks/${id}/document`, { headers: { accept: 'application/json' } });
    return answer.json();
  }, task.id);
}

/** Puts a document on the server as the next save, and opens the Page on it. */
export async function openPage(page: Page, task: TaskPlace, document: TaskDocument): Promise<void> {
  const { saveNumber } = await stored(page, task);
  const status = await page.evaluate(
    async ([id, base, body]) => {
      const answer = await fetch(`/api/v1/tasks/${id}/document`, {
        method: 'PUT',
        headers: { 'content-type': 'application/json', 'if-match': `"${base}"` },
        body
      });
      return answer.status === 200 ? 'taken' : `${answer.status} ${await answer.text()}`;
    },
    [task.id, String(saveNumber), JSON.stringify({ document, words: ['made for a test'] })] as const
  );
  expect(status).toBe('taken');
  await page.goto(`${task.path}/page`);
  await ready(page);
}

export const trials = (page: Page): Locator => page.getByRole('option', { name: /^Trial \d+, / });
export const trial = (page: Page, number: number): Locator =>
  page.getByRole('option', { name: new RegExp(`^Trial ${number}, `) });
export const announcement = (page: Page): Locator => page.getByTestId('announcement');
export const card = (page: Page, name: string): Locator =>
  page.getByRole('group', { name: 'Trial cards' }).getByRole('button', { name: new RegExp(`^${name}, `) });

/** Names and onsets of all trials on screen, in order. */
export async function shown(page: Page): Promise<string[]> {
  const labels = await trials(page).evaluateAll((all) => all.map((e) => e.getAttribute('aria-label') ?? ''));
  return labels
    .map((label) => /^Trial (\d+), (.*), at (-?[\d.]+) s, /.exec(label)!)
    .sort((x, y) => Number(x[1]) - Number(y[1]))
    .map((m) => `${m[2]} ${m[3]}`);
}

/** The point of the Page at a time; lines cover 60 s. */
export async function pointAt(page: Page, seconds: number): Promise<{ x: number; y: number }> {
  const line = page.locator(`[data-line="${Math.floor(seconds / 60)}"] .ruled`);
  const box = (await line.boundingBox())!;
  return { x: box.x + ((seconds % 60) / 60) * box.width, y: box.y + 38 };
}

export async function middle(locator: Locator): Promise<{ x: number; y: number }> {
  const box = (await locator.boundingBox())!;
  return { x: box.x + box.width / 2, y: box.y + box.height / 2 };
}

/** Presses, carries in small steps as a hand does, and holds. */
export async function carry(page: Page, from: { x: number; y: number }, to: { x: number; y: number }) {
  await page.mouse.move(from.x, from.y);
  await page.mouse.down();
  await page.mouse.move(from.x + 5, from.y + 1, { steps: 3 });
  await page.waitForTimeout(60);
  await page.mouse.move(to.x, to.y, { steps: 12 });
  // The library looks where the pointer is every 20 ms.
  await page.waitForTimeout(120);
}

export async function drag(page: Page, from: { x: number; y: number }, to: { x: number; y: number }) {
  await carry(page, from, to);
  await page.mouse.up();
}

export const saved = (page: Page, number: number) =>
  expect(page.getByRole('status').getByText(`Saved, no. ${number}`, { exact: true })).toBeVisible();
export const headerSays = (page: Page, words: string | RegExp) =>
  expect(page.getByRole('banner').getByRole('status')).toHaveText(words);
