import { readFile } from 'node:fs/promises';
import { expect, test } from '@playwright/test';
import JSZip from 'jszip';
import { addItem } from '../../src/lib/task/commands';
import { chooseTheme, expectAccessible, newcomerWithTask } from './support/app';
import { asMember, lanterns, openScreen, openWith } from './support/forms-tools';
import { stored } from './support/page-tools';

// Two people or a long piece of work in one test: more than the usual minute on a busy machine.
test.slow();

test('a bundle is chosen, packed and listed by its hash; red Notices are named', async ({
  page,
  browser
}) => {
  const { task } = await newcomerWithTask(page);
  // Six trials beyond the scan's end.
  await openWith(page, task, 'pack', lanterns({ trials: 12, volumes: 30 }));
  await expect(page.getByRole('region', { name: 'Runs and their Notices' })).toContainText(
    /Run 1 · 12 trials, 30 volumes ·\s+\d+ red/
  );
  await expect(page.getByText(/red Notices? stands? above/)).toBeVisible();
  await expect(page.getByRole('region', { name: 'Cautions' })).toContainText(
    'Stopping the task does not stop the scanner.'
  );
  await page.getByRole('radio', { name: /^PRACTICE/ }).check();
  const download = page.waitForEvent('download');
  await page.getByRole('button', { name: 'Pack and download (PRACTICE)' }).click();
  const file = await download;
  expect(file.suggestedFilename()).toMatch(/^task-chimes_PRACTICE_[0-9a-f]{8}\.zip$/);
  const zip = await JSZip.loadAsync(await readFile(await file.path()));
  const names = Object.keys(zip.files);
  for (const name of ['index.html', 'console-card.html', 'run-list.html', 'README.txt', 'MANIFEST.json'])
    expect(
      names.some((n) => n === name || n.endsWith(`/${name}`)),
      name
    ).toBe(true);
  const manifest = JSON.parse(await zip.file(/MANIFEST\.json$/)[0]!.async('string'));
  const kept = page.getByRole('region', { name: 'Packed before' }).getByRole('listitem');
  await expect(kept).toHaveCount(1);
  await expect(kept).toContainText(manifest.revision);
  await expect(kept).toContainText(`Save no. ${(await stored(page, task)).saveNumber}`);
  await expectAccessible(page);

  const operator = await asMember(browser, page, task.lab, 'operator');
  await openScreen(operator, task, 'pack');
  await expect(operator.getByRole('button', { name: /^Pack and download/ })).toBeDisabled();
  await expect(operator.getByText('your role is operator')).toBeVisible();
  await chooseTheme(operator, 'dim');
  await expectAccessible(operator);
  await operator.context().close();
});

test('a picture that was never chosen is named, with the way out', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  const document = lanterns();
  await openWith(page, task, 'pack', addItem(document, document.cards[0]!.id, 'picture').document);
  await expect(
    page.getByText('The card ‘follow-lantern’ has a picture item, ‘picture’, with no picture chosen')
  ).toBeVisible();
  await expect(page.getByRole('button', { name: /^Pack and download/ })).toBeDisabled();
});
