import { expect, test, type Page } from '@playwright/test';
import { chooseTheme, expectAccessible, newcomerWithTask } from './support/app';
import { asMember, lanterns, openScreen, openWith } from './support/forms-tools';
import { stored } from './support/page-tools';

// Two people or a long piece of work in one test: more than the usual minute on a busy machine.
test.slow();

const type = async (page: Page, name: string, text: string) => {
  const field = page.getByRole('textbox', { name, exact: true });
  await field.fill(text);
  await field.blur();
};
const start = (page: Page) => page.getByRole('button', { name: 'Rehearse', exact: true });

test('as fast as possible, with a scanner that misses pulses: a report that is kept with its save', async ({
  page
}) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'rehearse', lanterns());
  await expect(page.getByText('None yet.')).toBeVisible();
  await page.getByLabel('Speed', { exact: true }).selectOption('as fast as possible');
  await type(page, 'Missed pulses', '90');
  await expect(page.getByRole('main').getByRole('alert')).toContainText(
    'Missed pulses is 90 %, but must be at most 50 %.'
  );
  await type(page, 'Missed pulses', '10');
  await type(page, 'Pulse jitter', '2');
  await start(page).click();
  const { saveNumber } = await stored(page, task);
  await expect(page.getByText(`Kept with save no. ${saveNumber}.`)).toBeVisible({ timeout: 30_000 });
  const report = page.getByRole('region', { name: 'Report on Run 1' });
  await expect(report).toContainText('All 48 items came on.');
  await expect(report).toContainText('No frame dropped.');
  await expect(report).toContainText(/\d+ of 120 pulses found, [1-9]\d* missed; measured TR 1\.\d+ s\./);
  await expect(
    report.getByRole('img', { name: 'Onset errors in frames: 48 of 48 within half a frame' })
  ).toBeVisible();
  await expect(report.getByRole('row', { name: /^follow-lantern \d+ of 12/ })).toBeVisible();
  await expectAccessible(page);

  await page.reload();
  const row = page.getByRole('region', { name: 'Kept rehearsals' }).getByRole('listitem').first();
  await expect(row).toContainText(`save no. ${saveNumber}`);
  await row.locator('summary').click();
  await expect(row).toContainText('All 48 items came on.');
});

test('in real time on the page, with answers by the keyboard; stopped early it says so', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'rehearse', lanterns({ trials: 3, every: 3 }));
  await expect(page.getByText('same: right index finger, key 1 (top row)')).toBeVisible();
  await page.getByLabel('A soft beat with each pulse').check();
  await start(page).click();
  const stage = page.getByRole('img', { name: 'What the participant sees' });
  await expect(stage).toBeVisible();
  await expect(page.getByText(/^0:0[3-9] of 3:00$/)).toBeVisible({ timeout: 20_000 });
  // The first lantern, 5° right of the centre, must come on between 3.5 and 4.25 s.
  await expect
    .poll(
      () =>
        stage.evaluate((canvas) => {
          const { width, height } = canvas as HTMLCanvasElement;
          const x = Math.round(width / 2 + (Math.tan((5 * Math.PI) / 180) * 1.2 * width) / 0.6);
          const at = (canvas as HTMLCanvasElement)
            .getContext('2d')!
            .getImageData(x, Math.round(height / 2), 1, 1);
          return [...at.data.slice(0, 3)];
        }),
      { intervals: [30], timeout: 10_000 }
    )
    .toEqual([0xe0, 0xb3, 0x5a]);
  await page.keyboard.press('Digit1');
  await page.waitForTimeout(2500);
  await page.getByRole('button', { name: 'Stop and report' }).click();
  const report = page.getByRole('region', { name: 'Report on Run 1' });
  await expect(report).toContainText('Ended before its end');
  await expect(report).toContainText(/Kept with save no\. \d+\./);
  // One press in one window: answered, and correct by the card.
  const rows = await report
    .getByRole('row', { name: /^follow-/ })
    .getByRole('cell')
    .allTextContents();
  expect(
    rows
      .slice(1, 2)
      .concat(rows.slice(7, 8))
      .filter((n) => n === '1')
  ).toHaveLength(1);
});

test('a reader may rehearse, but it is not kept', async ({ page, browser }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'rehearse', lanterns({ trials: 4, volumes: 40 }));
  const reader = await asMember(browser, page, task.lab, 'reader');
  await openScreen(reader, task, 'rehearse');
  await reader.getByLabel('Speed', { exact: true }).selectOption('as fast as possible');
  await start(reader).click();
  await expect(reader.getByText('A reader’s rehearsal is not kept.')).toBeVisible({ timeout: 30_000 });
  await expect(reader.getByRole('region', { name: 'Kept rehearsals' })).toContainText('None yet.');
  await chooseTheme(reader, 'dim');
  await expectAccessible(reader);
  await reader.context().close();
});
