import { expect, test, type Page } from '@playwright/test';
import { chooseTheme, expectAccessible, newcomerWithTask, ready } from './support/app';
import { card, demoDocument, headerSays, openPage, shown, stored, trials } from './support/page-tools';

async function openImport(page: Page) {
  await page.getByRole('button', { name: 'Import event table' }).click();
  return page.getByRole('dialog', { name: 'Import an event table' });
}
const file = (name: string, content: string | Uint8Array) => ({
  name,
  mimeType: 'text/tab-separated-values',
  buffer: Buffer.from(content as string)
});

test('an event table becomes a run, with a plain report, and can be undone', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openPage(page, task, demoDocument({ onsets: [3] }));
  const dialog = await openImport(page);
  await dialog
    .getByLabel('Table as a file')
    .setInputFiles(
      file(
        'sub-01_task-tide_run-2_events.tsv',
        'onset\tduration\ttrial_type\tresponse_time\n2.5\t1\tfollow-chime\t0.4\n9\t1\tebb\tn/a\nsoon\t1\tebb\tn/a\n'
      )
    );
  await expect(dialog.getByRole('status')).toHaveText('2 trials can be made; 1 line is left out.');
  await expect(dialog).toContainText('already in the Brief');
  await expect(dialog.getByRole('row', { name: /^4 / })).toContainText('soon');
  await dialog.getByRole('button', { name: 'Make it a run' }).click();
  await expect(dialog).toBeHidden();
  await expect(page.getByRole('button', { name: /^sub-01_task-tide_run-2/ })).toHaveAttribute(
    'aria-current',
    'true'
  );
  expect(await shown(page)).toEqual([expect.stringMatching(/ 2\.5$/), expect.stringMatching(/ 9$/)]);
  await headerSays(page, /^Saved, no\./);
  expect((await stored(page, task)).document.runs).toHaveLength(2);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(page.getByRole('button', { name: /^sub-01/ })).toHaveCount(0);
});

test('a pasted table comes in too', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openPage(page, task, demoDocument());
  const dialog = await openImport(page);
  await dialog.getByLabel('Or paste it').fill('onset\tduration\ttrial_type\n0\t2\tebb\n10\t2\tflood');
  await dialog.getByRole('button', { name: 'Read the table' }).click();
  await dialog.getByRole('button', { name: 'Make it a run' }).click();
  await expect(trials(page)).toHaveCount(2);
});

test('what is no event table is refused with its reason, and nothing changes', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openPage(page, task, demoDocument({ onsets: [3] }));
  const { saveNumber } = await stored(page, task);
  const dialog = await openImport(page);
  const many = `onset\tduration\ttrial_type\n${Array.from({ length: 5001 }, (_, i) => `${i}\t1\tebb`).join('\n')}`;
  const cases: [string, string | Uint8Array, RegExp][] = [
    ['empty.tsv', '', /The file is empty/],
    ['binary.tsv', new Uint8Array([137, 80, 78, 71, 0, 1, 2, 3]), /not a text file/],
    ['utf16.tsv', new Uint8Array([0xff, 0xfe, 111, 0]), /UTF-16/],
    ['latin1.tsv', new Uint8Array([0x6f, 0xe9, 0x0a]), /not in UTF-8/],
    ['huge.tsv', 'x'.repeat(10_000_001), /up to 10 MB/],
    ['words.tsv', 'once upon a time\nthere was a tide\n', /onset/],
    ['many.tsv', many, /5,00[01]/]
  ];
  for (const [name, content, reason] of cases) {
    await dialog.getByLabel('Table as a file').setInputFiles(file(name, content));
    await expect(dialog.getByRole('alert'), name).toContainText(reason);
  }
  await dialog.getByRole('button', { name: 'Read the table' }).click();
  await expect(dialog.getByRole('alert')).toContainText('The table is empty');
  await dialog.getByRole('button', { name: 'Cancel' }).click();
  await expect(trials(page)).toHaveCount(1);
  expect((await stored(page, task)).saveNumber).toBe(saveNumber);
});

test('names of any kind are text and nothing else', async ({ page }) => {
  const names = [
    `it's "quoted" \\ and \`ticked\``,
    'tab\there',
    '🌊 tide 👩🏽‍🔬',
    'مدّ وجزر',
    '</script><script>window.broken=1</script><img src=x onerror="window.broken=1">'
  ];
  const errors: Error[] = [];
  page.on('pageerror', (e) => errors.push(e));
  const { task } = await newcomerWithTask(page);
  const document = demoDocument({ names, onsets: [3, 9, 15, 21, 27] });
  document.runs[0]!.name = names[4]!.slice(0, 60);
  document.brief.title = names[4]!;
  await openPage(page, task, document);
  expect(await shown(page)).toEqual(names.map((name, i) => `${name} ${3 + 6 * i}`));
  // Edited, saved and loaded again, they are the same.
  await page.getByRole('group', { name: 'Trial cards' }).getByRole('button').nth(4).focus();
  await page.keyboard.press('Enter');
  await expect(trials(page)).toHaveCount(6);
  await headerSays(page, /^Saved, no\./);
  await page.getByRole('button', { name: 'Table', exact: true }).click();
  await expect(page.getByRole('gridcell', { name: names[4]!, exact: true }).first()).toBeVisible();
  await page.reload();
  await ready(page);
  const kept = await stored(page, task);
  expect(kept.document.brief.conditions.map((c) => c.name)).toEqual(names);
  expect(await page.evaluate(() => 'broken' in window)).toBe(false);
  expect(errors).toEqual([]);
});

test('can be used with a screen reader and with low vision', async ({ page }) => {
  // Four analyses of a full page.
  test.slow();
  const { task } = await newcomerWithTask(page, { volumes: 20 });
  // Trials with blanks between them: one that overlaps another is partly covered by it and can be hit only beside that
  // (a red Notice says so); grips in narrow blanks have the table and the keyboard as their equivalent.
  await openPage(page, task, demoDocument({ onsets: [3, 12, 21, 30, 66], volumes: 20 }));
  await expectAccessible(page);
  await card(page, 'follow-both').focus();
  await chooseTheme(page, 'dim');
  await expectAccessible(page);
  await page.getByRole('button', { name: 'Table', exact: true }).click();
  await expectAccessible(page);
  await openImport(page);
  await expectAccessible(page);
});

test('a run of 5,000 trials opens and can be edited', async ({ page }) => {
  test.slow();
  const { task } = await newcomerWithTask(page);
  const onsets = Array.from({ length: 5000 }, (_, i) => 3 * i);
  await openPage(page, task, demoDocument({ onsets, volumes: 10_100 }));
  await expect(page.getByRole('region', { name: 'Run 1, 5000 trials' })).toContainText('5,000 trials');
  // Only the lines near the window are drawn, and the keyboard leads to all of them.
  expect(await trials(page).count()).toBeLessThan(1000);
  await page.locator('[role=option][tabindex="0"]').focus();
  await page.keyboard.press('End');
  await expect(page.getByRole('option', { name: /^Trial 5000, / })).toBeFocused();
  await page.keyboard.press('ArrowUp');
  await expect(page.getByRole('option', { name: /^Trial 4980, / })).toBeFocused();
  await card(page, 'follow-both').focus();
  await page.keyboard.press('Enter');
  await expect(page.getByRole('alert').filter({ hasText: 'at most 5,000 trials' })).toBeVisible();
  await page.getByRole('button', { name: 'Table', exact: true }).click();
  await page.getByRole('gridcell').first().focus();
  await page.keyboard.type('0.5');
  await page.keyboard.press('Enter');
  await headerSays(page, /^Saved, no\./);
  expect((await stored(page, task)).document.runs[0]!.trials[0]!.onset).toBe(500_000);
});
