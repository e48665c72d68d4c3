import { expect, test, type Page } from '@playwright/test';
import { chooseTheme, expectAccessible, newcomerWithTask } from './support/app';
import { asMember, lanterns, openScreen, openWith } from './support/forms-tools';
import type { TaskDocument } from '../../src/lib/task/schema';
import { saved, stored } from './support/page-tools';

// Two people or a long piece of work in one test: more than the usual minute on a busy machine.
test.slow();

const box = (page: Page, name: string) => page.getByRole('textbox', { name, exact: true });
const type = async (page: Page, name: string, text: string) => {
  await box(page, name).fill(text);
  await box(page, name).blur();
};
/** Weights of the first contrast in the order of the conditions; the stored object has its own order, by id. */
const weightsOf = ({ brief }: TaskDocument) =>
  brief.conditions.map((c) => brief.contrasts[0]!.weights[c.id] ?? 0);
const region = (page: Page, name: string) => page.getByRole('region', { name, exact: true });

test('a newcomer writes the brief, and it is there again after a reload', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openScreen(page, task, 'brief');
  const title = `"Chime" </script> 🏮 فانوس`;
  await type(page, 'Title', title);
  await type(page, 'Question', 'How does attention move between hearing and seeing?');
  await page.getByRole('button', { name: 'Add a response' }).click();
  await type(page, 'Name of response response 1', 'same');
  await type(page, 'Instructions to the participant', 'Press the {same}, never the {other}.');
  const preview = region(page, 'As the participant reads them');
  await expect(preview).toContainText('Press the right index finger, never the {other}.');
  await expect(page.getByText('{other} names no response. The responses are {same}.')).toBeVisible();

  await page.getByRole('button', { name: 'Add a condition' }).click();
  await type(page, 'Name of condition condition 1', 'follow-lantern');
  await page.getByRole('button', { name: 'Add a condition' }).click();
  await type(page, 'Name of condition condition 2', 'follow-lantern');
  await expect(page.getByRole('main').getByRole('alert')).toContainText(
    '‘follow-lantern’ is already the name of another condition; choose a name of its own.'
  );
  await type(page, 'Name of condition condition 2', 'follow-chime');
  await expect(page.getByRole('main').getByRole('alert')).toHaveCount(0);
  await page.getByLabel('Colour of follow-chime').selectOption('thrift');

  await page.getByRole('button', { name: 'Add a contrast' }).click();
  await expect(box(page, 'Name of contrast follow-lantern − follow-chime')).toBeVisible();
  await expect(page.getByText('A difference; sums to zero.')).toBeVisible();
  await expect(page.getByRole('banner').getByRole('status')).toHaveText(/^Saved, no\. \d+$/);
  await expectAccessible(page);

  await page.reload();
  await expect(box(page, 'Title')).toHaveValue(title);
  await expect(box(page, 'Question')).toHaveValue('How does attention move between hearing and seeing?');
  await expect(page.getByLabel('Colour of follow-chime')).toHaveValue('c6');
  const { document } = await stored(page, task);
  expect(document.brief.conditions.map((c) => c.name)).toEqual(['follow-lantern', 'follow-chime']);
  expect(weightsOf(document)).toEqual([1, -1]);
});

test('a TR of 0, a negative one and text each get a clear sentence, and nothing is lost', async ({
  page
}) => {
  const { task } = await newcomerWithTask(page);
  await openScreen(page, task, 'brief');
  const alert = page.getByRole('main').getByRole('alert');
  const wrong: [string, string][] = [
    ['0', 'TR is 0 s, but must be more than 0 s. Type for example 1.5.'],
    ['-2', 'TR is -2 s, but must be more than 0 s.'],
    ['fast', '‘fast’ is not a number; TR is a number in s.'],
    ['', 'TR is empty; a number in s is needed.']
  ];
  for (const [text, words] of wrong) {
    await type(page, 'TR', text);
    await expect(alert).toContainText(words);
    await expect(alert).toContainText('The last good value, 1.5, is kept.');
    await expect(box(page, 'TR')).toHaveValue(text);
    await expect(box(page, 'TR')).toHaveAttribute('aria-invalid', 'true');
  }
  expect((await stored(page, task)).document.brief.tr).toBe(1_500_000);
  await box(page, 'TR').focus();
  await page.keyboard.press('Escape');
  await expect(box(page, 'TR')).toHaveValue('1.5');
  await expect(alert).toHaveCount(0);

  await type(page, 'TR', '0,735');
  await expect(box(page, 'TR')).toHaveValue('0.735');
  await expect.poll(async () => (await stored(page, task)).document.brief.tr).toBe(735_000);
  await saved(page, (await stored(page, task)).saveNumber);
  await type(page, 'Task label', 'two words');
  await expect(alert).toContainText('letters and digits only, as BIDS asks of a task label');
  await type(page, 'Noise, rho', '1');
  await expect(alert.nth(1)).toContainText('Noise, rho is 1, but must be less than 1.');
});

test('contrasts are checked; what is used asks before it goes, and undo brings it back', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'brief', lanterns());
  const weight = (condition: string) => `Weight of ${condition} in lantern − chime`;
  await type(page, weight('follow-lantern'), '0.5');
  await expect(page.getByText('claim a difference, but they sum to -0.5, not 0')).toBeVisible();
  await type(page, weight('follow-lantern'), '0');
  await type(page, weight('follow-chime'), '0');
  await expect(page.getByRole('main').getByRole('alert')).toContainText(
    'all weights of ‘lantern − chime’ would be 0'
  );
  await expect.poll(async () => weightsOf((await stored(page, task)).document)).toEqual([0, -1]);

  await page.getByRole('button', { name: 'Remove condition follow-chime' }).click();
  const question = page.getByRole('dialog', { name: 'Remove ‘follow-chime’?' });
  await expect(question).toContainText('It is used by 1 card (12 trials on the runs) and 1 contrast.');
  await question.getByRole('button', { name: 'Keep it' }).click();
  await expect(box(page, 'Name of condition follow-chime')).toBeVisible();
  await page.getByRole('button', { name: 'Remove condition follow-chime' }).click();
  await question.getByRole('button', { name: 'Remove' }).click();
  await expect(box(page, 'Name of condition follow-chime')).toHaveCount(0);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(box(page, 'Name of condition follow-chime')).toBeVisible();
  await expect
    .poll(async () => (await stored(page, task)).document.cards.every((c) => c.condition !== null))
    .toBe(true);
});

test('conditions are put in order by keyboard and by mouse', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'brief', lanterns());
  const list = page.getByRole('list', { name: 'Conditions' }).getByRole('listitem');
  const names = () => list.evaluateAll((all) => all.map((e) => e.getAttribute('aria-label')));
  expect(await names()).toEqual(['follow-lantern', 'follow-chime']);
  await page.getByRole('button', { name: /^Move follow-lantern/ }).focus();
  await page.keyboard.press('Enter');
  await page.keyboard.press('ArrowDown');
  await page.keyboard.press('Enter');
  await expect.poll(names).toEqual(['follow-chime', 'follow-lantern']);
  const order = async () => (await stored(page, task)).document.brief.conditions.map((c) => c.name);
  await expect.poll(order).toEqual(['follow-chime', 'follow-lantern']);

  const from = (await page.getByRole('button', { name: /^Move follow-lantern/ }).boundingBox())!;
  const to = (await page.getByRole('button', { name: /^Move follow-chime/ }).boundingBox())!;
  await page.mouse.move(from.x + 8, from.y + 10);
  await page.mouse.down();
  await page.mouse.move(from.x + 8, from.y - 10, { steps: 4 });
  await page.mouse.move(to.x + 8, to.y - 10, { steps: 10 });
  await page.waitForTimeout(300);
  await page.mouse.up();
  await expect.poll(order).toEqual(['follow-lantern', 'follow-chime']);
});

test('a reader sees all of it and can change nothing', async ({ page, browser }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'brief', lanterns());
  const reader = await asMember(browser, page, task.lab, 'reader');
  await openScreen(reader, task, 'brief');
  await expect(box(reader, 'Title')).toHaveValue('Chime and Lantern');
  await expect(reader.locator('main').locator('input:enabled, textarea:enabled, select:enabled')).toHaveCount(
    0
  );
  await expect(reader.getByRole('button', { name: 'Add a condition' })).toBeDisabled();
  await chooseTheme(reader, 'dim');
  await expectAccessible(reader);
  await reader.context().close();
});
