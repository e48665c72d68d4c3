import { expect, test, type Page } from '@playwright/test';
import { chooseTheme, expectAccessible, newcomerWithTask } from './support/app';
import { lanterns, openScreen, openWith } from './support/forms-tools';
import { stored } from './support/page-tools';

// Two people or a long piece of work in one test: more than the usual minute on a busy machine.
test.slow();

const type = async (page: Page, name: string, text: string) => {
  const field = page.getByRole('textbox', { name, exact: true });
  await field.fill(text);
  await field.blur();
};
const search = (page: Page) => page.getByRole('button', { name: 'Search', exact: true });
/** Efficiency of all contrasts together: of this run, of the best found. */
const figures = async (page: Page) => {
  const cells = await page
    .getByRole('row', { name: /^all together/ })
    .getByRole('cell')
    .allTextContents();
  return cells.slice(0, 2).map(Number);
};

test('rules that clash are named before the start', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openScreen(page, task, 'search');
  await expect(page.getByText('There is no trial card yet; make one for each condition')).toBeVisible();
  await expect(search(page)).toBeDisabled();
  await openWith(page, task, 'search', lanterns());
  await expect(search(page)).toBeEnabled();
  await type(page, 'Trials of follow-chime', '200');
  await expect(page.getByText(/the run has 180 s\. Possible: /)).toBeVisible();
  await expect(search(page)).toBeDisabled();
  await type(page, 'Trials of follow-chime', '12');
  await type(page, 'least', '20');
  await expect(page.getByText(/The smallest gap \(20 s\) is above the largest gap/)).toBeVisible();
  await type(page, 'least', 'short');
  await expect(page.getByRole('main').getByRole('alert')).toContainText('‘short’ is not a number');
  await type(page, 'least', '1.5');
  await expect(search(page)).toBeEnabled();
  await type(page, 'Seed', 'spring tide');
  await expect(page.getByRole('main').getByRole('alert')).toHaveCount(0);
  await page.getByRole('checkbox', { name: 'lantern − chime' }).uncheck();
  await expect(page.getByText('No contrast is chosen')).toBeVisible();
  await expectAccessible(page);
});

test('a search beats even alternation, is adopted and undone; its seed gives it again', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'search', lanterns());
  const [before] = await figures(page);
  const present = (await stored(page, task)).document.runs[0]!.trials.map((t) => t.onset);
  await page.getByLabel('Search for').selectOption('200,000 moves, the same anywhere');
  await search(page).click();
  await expect(page.getByText(/^Done after .* designs scored in 200,000 moves/)).toBeVisible({
    timeout: 50_000
  });
  const [now, best] = await figures(page);
  expect(now).toBe(before);
  expect(best! / now!).toBeGreaterThan(1.05);
  await expect(page.getByRole('img', { name: /^Best score over the designs tried/ })).toBeVisible();
  await expect(page.getByRole('img', { name: 'Best candidate: 24 trials in 3:00' })).toBeVisible();
  await expectAccessible(page);

  await page.getByRole('button', { name: 'Adopt into Run 1' }).click();
  await expect(page.getByText('This candidate is the run now.')).toBeVisible();
  const onsets = async () => (await stored(page, task)).document.runs[0]!.trials.map((t) => t.onset);
  await expect.poll(onsets).not.toEqual(present);
  const adopted = await onsets();
  expect(adopted).toHaveLength(24);
  for (const onset of adopted) expect(onset % 375_000).toBe(0);
  await page.getByRole('button', { name: 'Undo the adoption' }).click();
  await expect.poll(onsets).toEqual(present);

  await page.getByRole('button', { name: 'Search again' }).click();
  await expect(page.getByRole('button', { name: 'Stop and keep the best' })).toBeVisible();
  await expect(page.getByText(/^Done after .* designs scored in 200,000 moves/)).toBeVisible({
    timeout: 50_000
  });
  await page.getByRole('button', { name: 'Adopt into Run 1' }).click();
  await expect.poll(onsets).toEqual(adopted);
});

test('a search shows its pace, goes on while another screen is open, and stops at a press', async ({
  page
}) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'search', lanterns());
  await page.getByLabel('Search for').selectOption('10 minutes');
  await search(page).click();
  await expect(page.getByText(/^[\d,]+ designs a second · .* left$/)).toBeVisible();
  await page.getByRole('link', { name: 'Cards', exact: true }).click();
  await expect(page.getByRole('navigation', { name: 'Trial cards' })).toBeVisible();
  await page.getByRole('link', { name: 'Timing search' }).click();
  await expect(page.getByRole('progressbar', { name: 'Search' })).toBeVisible();
  await page.getByRole('button', { name: 'Stop and keep the best' }).click();
  await expect(page.getByText(/^Stopped after /)).toBeVisible();
  await expect(page.getByRole('button', { name: 'Adopt into Run 1' })).toBeEnabled();
  await chooseTheme(page, 'dim');
  await expectAccessible(page);
});
