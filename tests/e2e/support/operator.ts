/** The operator's way through an opened bundle, found by what the screens say. */
import { expect, type Download, type Page } from '@playwright/test';
import { readFileSync } from 'node:fs';

export interface RunChoice {
  participant: string;
  /** Label of the run in the list, such as `1: Run 1`; the first where it is not given. */
  run?: string;
  timing?: 'free-run' | 'pulse-locked';
  /** Response keys to try in the self-check. */
  keys: string[];
}

export const playerIn = (page: Page, state: string) => page.locator(`.player[data-state="${state}"]`);

/** From the entry to the armed run. */
export async function armRun(page: Page, choice: RunChoice): Promise<void> {
  await getReady(page, choice);
  await page.getByRole('button', { name: 'Arm the run' }).click();
  await expect(playerIn(page, 'armed')).toBeVisible();
}

/** From the entry to the screen that offers to arm. */
export async function getReady(page: Page, choice: RunChoice): Promise<void> {
  await page.getByLabel('Participant code').fill(choice.participant);
  if (choice.run) await page.getByLabel('Run', { exact: true }).selectOption({ label: choice.run });
  await page.getByLabel('Operator code').fill('op1');
  if (choice.timing) await page.getByLabel('Onsets follow').selectOption(choice.timing);
  await page.getByRole('button', { name: 'Continue' }).click();
  await expect(playerIn(page, 'check')).toBeVisible();
  for (const key of choice.keys) await page.keyboard.press(key);
  await page.getByRole('button', { name: 'Go on', exact: true }).click({ timeout: 15_000 });
  await readOn(page);
}

/** Past the participant's instructions, however many pages they have. */
async function readOn(page: Page): Promise<void> {
  for (;;) {
    await expect(page.locator('.player:is([data-state="instructions"],[data-state="ready"])')).toBeVisible();
    if (await playerIn(page, 'ready').isVisible()) return;
    await page.keyboard.press('Enter');
  }
}

export interface SavedRun {
  log: SavedFile;
  events: SavedFile;
  sidecar: SavedFile;
}
export interface SavedFile {
  name: string;
  text: string;
}

/** The file that a button offers. */
export async function savedBy(page: Page, button: string): Promise<SavedFile> {
  const [download] = await Promise.all([
    page.waitForEvent('download'),
    page.getByRole('button', { name: button, exact: true }).click()
  ]);
  return {
    name: (download as Download).suggestedFilename(),
    text: readFileSync(await download.path(), 'utf8')
  };
}

/** From the last volume to the saved files. */
export async function saveRun(page: Page): Promise<SavedRun> {
  await expect(playerIn(page, 'over')).toBeVisible({ timeout: 30_000 });
  await page.keyboard.press('Enter');
  const log = await savedBy(page, 'Save log');
  const events = await savedBy(page, 'Save event table');
  const sidecar = await savedBy(page, 'Save sidecar');
  await page.getByRole('button', { name: 'The files are safe' }).click();
  await expect(page.getByRole('status').filter({ hasText: 'Safe to close' })).toBeVisible();
  return { log, events, sidecar };
}

/** A tab-separated table as rows by column name. */
export function tableOf(text: string): Record<string, string>[] {
  const [head = '', ...lines] = text.trimEnd().split('\n');
  const columns = head.split('\t');
  return lines.map((line) =>
    Object.fromEntries(line.split('\t').map((cell, place) => [columns[place]!, cell]))
  );
}

export type LogLine = { type: string; page: number; time: number | null } & Record<string, unknown>;
export const logLines = (text: string): LogLine[] =>
  text
    .trimEnd()
    .split('\n')
    .map((line) => JSON.parse(line) as LogLine);
