import { readFile } from 'node:fs/promises';
import { expect, test, type Page } from '@playwright/test';
import { chooseTheme, expectAccessible, newcomerWithTask } from './support/app';
import { lanterns, openScreen, openWith } from './support/forms-tools';
import { stored } from './support/page-tools';

const saved = async (page: Page, name: string): Promise<{ file: string; text: string }> => {
  const waiting = page.waitForEvent('download');
  await page.getByRole('button', { name }).click();
  const download = await waiting;
  return { file: download.suggestedFilename(), text: await readFile((await download.path())!, 'utf8') };
};

test('an empty task says what is missing', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openScreen(page, task, 'spectrum');
  await expect(page.getByText('There is nothing to look at yet')).toBeVisible();
  await expectAccessible(page);
});

test('spectrum, matrix, correlations and power, each as picture, table, TSV and SVG', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'spectrum', lanterns());
  for (const name of [/^Power by participants/, /^Spectrum of /, /^Design matrix: /, /^Correlation grid of /])
    await expect(page.getByRole('img', { name })).toBeVisible();
  await expect(page.getByRole('region', { name: 'Spectrum', exact: true })).toContainText(
    'survives the high-pass at 128 s'
  );
  await expect(page.getByRole('region', { name: 'Power', exact: true })).toContainText(
    'participants are needed for 80.0 %'
  );

  const { document } = await stored(page, task);
  const matrix = await saved(page, 'Design matrix: save the numbers as TSV');
  expect(matrix.file).toMatch(/_run-1_design\.tsv$/);
  const lines = matrix.text.trimEnd().split('\n');
  expect(lines).toHaveLength(document.runs[0]!.volumes + 1);
  expect(lines[0]!.split('\t').slice(0, 3)).toEqual([
    'volume',
    ...document.brief.conditions.map((c) => c.name)
  ]);

  const picture = await saved(page, 'Spectrum: save the picture as SVG');
  expect(picture.text).toContain('xmlns="http://www.w3.org/2000/svg"');
  expect(picture.text).not.toContain('var(--');
  await page.getByRole('checkbox', { name: /^Preview mild saturation/ }).check();
  await expect(page.getByRole('img', { name: /responses added, and with mild saturation$/ })).toBeVisible();

  await page.getByText('The numbers as a table').first().click();
  await expect(page.getByRole('region', { name: 'Power: table' })).toBeVisible();
  await expectAccessible(page);
  await chooseTheme(page, 'dim');
  await expectAccessible(page);
});

test('expected effect and noise are kept with the task, refused when impossible, undone by Undo', async ({
  page
}) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'spectrum', lanterns());
  await expect(page.getByText('A first guess, from no study.')).toBeVisible();
  const effect = page.getByRole('textbox', { name: 'Effect of one trial' });
  await effect.fill('0');
  await effect.blur();
  await expect(page.getByRole('alert')).toContainText('Effect of one trial');
  await effect.fill('0.8');
  await effect.blur();
  await expect
    .poll(async () => (await stored(page, task)).document.brief.expected?.effect, { timeout: 15_000 })
    .toBe(0.8);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(page.getByText('A first guess, from no study.')).toBeVisible();
});
