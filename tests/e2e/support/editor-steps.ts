/** What an experimenter does on a task's screens, found by labels: Brief, cards, timing search, rehearsal, Pack. */
import { expect, type Page } from '@playwright/test';
import { readFileSync } from 'node:fs';
import { ready, type TaskPlace } from './app';

/** Types into a field and leaves it, which is when it is taken. */
export async function fillIn(page: Page, label: string, value: string | number): Promise<void> {
  const field = page.getByLabel(label, { exact: true });
  await field.fill(String(value));
  await field.blur();
}

export const openScreen = async (page: Page, task: TaskPlace, screen: string): Promise<void> => {
  await page.goto(`${task.path}/${screen}`);
  await ready(page);
};

/** Adds conditions, a contrast of the first two, and responses, on the Brief. */
export async function fillBrief(
  page: Page,
  brief: { question: string; instructions: string; conditions: string[]; responses: string[] }
): Promise<void> {
  await fillIn(page, 'Question', brief.question);
  for (const name of brief.conditions) {
    await page.getByRole('button', { name: 'Add a condition' }).click();
    const fresh = page.getByRole('list', { name: 'Conditions' }).getByRole('listitem').last();
    const field = fresh.getByLabel(/^Name of condition/);
    await field.fill(name);
    await field.blur();
    await expect(page.getByLabel(`Name of condition ${name}`, { exact: true })).toHaveValue(name);
  }
  for (const name of brief.responses) {
    await page.getByRole('button', { name: 'Add a response' }).click();
    const fresh = page.getByRole('list', { name: 'Responses' }).getByRole('listitem').last();
    const field = fresh.getByLabel(/^Name of response/);
    await field.fill(name);
    await field.blur();
    await expect(page.getByLabel(`Name of response ${name}`, { exact: true })).toHaveValue(name);
  }
  await fillIn(page, 'Instructions to the participant', brief.instructions);
  await page.getByRole('button', { name: 'Add a contrast' }).click();
}

export interface CardWish {
  name: string;
  condition: string;
  /** Name of the item's kind as its button has it. */
  kind: 'Text' | 'Tone' | 'Shape' | 'Picture';
  /** Label → value of the item's own fields. */
  fields?: Record<string, string | number>;
  picture?: string;
  /** Seconds. */
  length: number;
  duration: number;
  correct: string;
}

/** Adds a card with one modelled item and one response window. */
export async function addCard(page: Page, wish: CardWish): Promise<void> {
  await page.getByRole('button', { name: 'Add a card' }).click();
  await fillIn(page, 'Card’s name', wish.name);
  await page.getByLabel('Condition', { exact: true }).selectOption({ label: wish.condition });
  await fillIn(page, 'Trial length', wish.length);
  const items = page.getByRole('list', { name: 'Items' });
  // A new card shows a word; another kind takes its place.
  await items.getByRole('button').first().click();
  if (wish.kind !== 'Text') {
    await page.getByRole('button', { name: 'Remove this item' }).click();
    await page.getByRole('button', { name: `+ ${wish.kind}` }).click();
  }
  const form = page.getByRole('region', { name: new RegExp(`^${wish.kind} `) });
  await expect(form).toBeVisible();
  const name = form.getByLabel('Name', { exact: true });
  await name.fill(wish.name);
  await name.blur();
  const duration = form.getByLabel('Duration', { exact: true });
  await duration.fill(String(wish.duration));
  await duration.blur();
  for (const [label, value] of Object.entries(wish.fields ?? {})) {
    const field = form.getByLabel(label, { exact: true });
    if (await field.evaluate((element) => element.tagName === 'SELECT'))
      await field.selectOption(String(value));
    else await field.fill(String(value));
    await field.blur();
  }
  if (wish.picture) {
    const [chooser] = await Promise.all([
      page.waitForEvent('filechooser'),
      form.getByRole('button', { name: 'Choose a picture' }).click()
    ]);
    await chooser.setFiles(wish.picture);
    await expect(form.getByRole('img', { name: /^Picture / })).toBeVisible();
  }
  await expect(form.getByLabel('Modelled as an event')).toBeChecked();
  await page.getByRole('button', { name: '+ Response window' }).click();
  await page.getByLabel('Correct response', { exact: true }).selectOption({ label: wish.correct });
}

export interface SearchWish {
  /** Trials of each kind, by the name the rules show. */
  counts: Record<string, number>;
  gap: { least: number; mean: number; most: number };
  leadOut: number;
  seed: string;
}

/** Searches for five seconds and adopts the best into the run. */
export async function searchAndAdopt(page: Page, wish: SearchWish): Promise<void> {
  for (const [kind, count] of Object.entries(wish.counts)) await fillIn(page, `Trials of ${kind}`, count);
  for (const [label, value] of Object.entries(wish.gap)) await fillIn(page, label, value);
  await fillIn(page, 'Lead-out', wish.leadOut);
  await page.getByLabel('Search for').selectOption({ label: '5 seconds' });
  await fillIn(page, 'Seed', wish.seed);
  await page.getByRole('button', { name: 'Search', exact: true }).click();
  await expect(page.getByRole('progressbar', { name: 'Search' })).toBeVisible();
  await expect(page.getByText(/^Done after/)).toBeVisible({ timeout: 60_000 });
  await page.getByRole('button', { name: /^Adopt into/ }).click();
  await expect(page.getByText('This candidate is the run now.')).toBeVisible();
}

/** Rehearses with automatic answers as fast as possible, and waits until the report is kept. */
export async function rehearseAtOnce(page: Page): Promise<void> {
  await page.getByLabel('Speed', { exact: true }).selectOption({ label: 'as fast as possible' });
  await page.getByRole('button', { name: 'Rehearse', exact: true }).click();
  await expect(page.getByRole('status').filter({ hasText: /^Kept with save no\. \d+/ })).toBeVisible({
    timeout: 30_000
  });
}

/** Packs and answers the zip with its name. */
export async function packAndDownload(
  page: Page,
  kind: 'PROOF' | 'PRACTICE'
): Promise<{ name: string; zip: Uint8Array }> {
  await page.getByRole('radio', { name: kind }).check();
  const [download] = await Promise.all([
    page.waitForEvent('download', { timeout: 60_000 }),
    page.getByRole('button', { name: `Pack and download (${kind})` }).click()
  ]);
  return { name: download.suggestedFilename(), zip: new Uint8Array(readFileSync(await download.path())) };
}
