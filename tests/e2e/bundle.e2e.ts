/** The unpacked bundle when something is not as it was packed, when names are hostile, and its papers. */
import { AxeBuilder } from '@axe-core/playwright';
import { expect, test as base, type Page } from '@playwright/test';
import { readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { checkBundle } from '../../src/lib/bundle/read-manifest';
import { pngPicture } from '../fixtures/picture';
import { sampleFolder, type BundleFolder } from './support/bundle-folder';
import { armRun, getReady, playerIn } from './support/operator';

/** Noise does not compress, so this one is too large to stand inside the page. */
function largePicture(): Uint8Array {
  let state = 7;
  return pngPicture(900, 700, () => (state = (state * 48271) % 2147483647) & 63);
}

const test = base.extend<{ bundle: BundleFolder; large: BundleFolder; computer: Page }>({
  // eslint-disable-next-line no-empty-pattern -- Playwright wants the pattern
  bundle: async ({}, use) => {
    const bundle = await sampleFolder({ runs: 2 });
    await use(bundle);
    bundle.remove();
  },
  // eslint-disable-next-line no-empty-pattern -- Playwright wants the pattern
  large: async ({}, use) => {
    const bundle = await sampleFolder({ picture: largePicture() });
    await use(bundle);
    bundle.remove();
  },
  computer: async ({ browser }, use) => {
    const context = await browser.newContext({ offline: true });
    await use(await context.newPage());
    await context.close();
  }
});

const choice = { participant: '07', keys: ['Digit1', 'Digit2'] };
const change = (path: string, edit: (text: string) => string) => {
  const before = readFileSync(path, 'utf8');
  const after = edit(before);
  expect(after).not.toBe(before);
  writeFileSync(path, after);
};
const dataScript = (bundle: BundleFolder) =>
  join(
    bundle.folder,
    Object.keys(bundle.files()).find((path) => path.startsWith('data/'))!
  );

test('a large picture beside the page is loaded from the folder, and nothing else is', async ({
  large,
  computer
}) => {
  const requests: string[] = [];
  computer.on('request', (request) => requests.push(request.url()));
  await computer.goto(large.address);
  await armRun(computer, choice);
  const expected = [large.address, pathToFileURL(dataScript(large)).href];
  expect(requests.filter((address) => !/^(data|blob):/.test(address))).toEqual(expected);
});

test('a stimulus file that is missing is met before the run', async ({ large, computer }) => {
  rmSync(dataScript(large));
  expect(checkBundle(large.files())).toMatchObject({ ok: true, missing: [expect.stringMatching(/^data\//)] });
  await computer.goto(large.address);
  await getReady(computer, choice);
  await computer.getByRole('button', { name: 'Arm the run' }).click();
  await expect(computer.getByRole('alert')).toContainText('missing beside index.html');
});

test('a stimulus file that was changed is met before the run', async ({ large, computer }) => {
  // One sign of the picture's first line.
  change(dataScript(large), (text) => text.replace('="iVBORw0KGgo', '="iVBORw0KGgp'));
  expect(checkBundle(large.files())).toMatchObject({ ok: true, altered: [expect.stringMatching(/^data\//)] });
  await computer.goto(large.address);
  await getReady(computer, choice);
  await computer.getByRole('button', { name: 'Arm the run' }).click();
  await expect(computer.getByRole('alert')).toContainText('not the file that was packed');
});

test('a task that was changed in the page is refused', async ({ bundle, computer }) => {
  change(join(bundle.folder, 'index.html'), (page) => page.replace('"volumes":20', '"volumes":21'));
  expect(checkBundle(bundle.files())).toMatchObject({ ok: true, altered: ['index.html'] });
  await computer.goto(bundle.address);
  await expect(computer.getByRole('alert')).toContainText('checksum differs');
});

test('a player that was changed does not run, and the page says so', async ({ bundle, computer }) => {
  change(join(bundle.folder, 'index.html'), (page) =>
    page.replace(/<script>/, '<script>window.changed = true;')
  );
  await computer.goto(bundle.address);
  await expect(computer.getByText('If this sentence stays, the task did not start')).toBeVisible();
  await expect(computer.locator('.player')).toHaveCount(0);
  expect(await computer.evaluate(() => 'changed' in window)).toBe(false);
});

test('names that try to break out are shown as they are', async ({ computer }) => {
  const title = `</script><img src=x onerror="window.broken=1">"'\t🦀 כלנית`;
  const bundle = await sampleFolder(
    { title, pictureName: `${title}.png`, conditionNames: [title, 'b'] },
    { lab: title, study: { label: 'tide', name: title } }
  );
  try {
    for (const name of ['index.html', 'console-card.html', 'run-list.html']) {
      await computer.goto(pathToFileURL(join(bundle.folder, name)).href);
      await expect(computer.getByText('onerror').first()).toBeVisible();
      expect(
        await computer.evaluate(() => 'broken' in window || document.querySelector('img') !== null)
      ).toBe(false);
    }
  } finally {
    bundle.remove();
  }
});

for (const kind of ['PROOF', 'PRACTICE'] as const)
  test(`every screen before the run says ${kind}`, async ({ computer }) => {
    const bundle = await sampleFolder({}, { kind });
    try {
      await computer.goto(bundle.address);
      const mark = computer.locator('header').getByText(kind);
      await expect(playerIn(computer, 'entry')).toBeVisible();
      await expect(mark).toBeVisible();
      await getReady(computer, choice);
      await expect(mark).toBeVisible();
    } finally {
      bundle.remove();
    }
  });

for (const name of ['console-card.html', 'run-list.html', 'index.html'])
  test(`${name} has no accessibility fault`, async ({ bundle, computer }) => {
    await computer.goto(pathToFileURL(join(bundle.folder, name)).href);
    await expect(computer.getByRole('heading', { level: 1 })).toBeVisible();
    // Legacy mode: the checker may open no page of its own beside this one.
    const { violations } = await new AxeBuilder({ page: computer })
      .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'])
      .setLegacyMode()
      .analyze();
    expect(violations).toEqual([]);
  });
