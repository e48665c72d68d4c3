/** The player's ways beside the straight one: by keyboard alone, early end, false start, damage, crash. */
import AxeBuilder from '@axe-core/playwright';
import { chromium, expect, test, type Browser, type Page } from '@playwright/test';
import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { sampleFolder, type BundleFolder } from './support/bundle-folder';
import { armRun, logLines, playerIn, savedBy, tableOf } from './support/operator';

// A trace of a browser that is killed cannot be put together.
test.use({ trace: 'off' });

const second = 1_000_000;
const onsets = [1, 3, 5].map((s) => s * second);
const keys = ['Digit1', 'Digit2'];

const opened = async (browser: Browser, bundle: BundleFolder): Promise<Page> => {
  const context = await browser.newContext({ offline: true, viewport: { width: 1280, height: 720 } });
  const page = await context.newPage();
  await page.goto(bundle.address);
  return page;
};

test.describe('a PROOF', () => {
  let bundle: BundleFolder;
  test.beforeAll(async () => (bundle = await sampleFolder({ onsets, volumes: 7 })));
  test.afterAll(() => bundle?.remove());

  test('is told apart on every screen, and no screen fails WCAG 2.2 AA', async ({ browser }) => {
    const page = await opened(browser, bundle);
    const look = async (state: string) => {
      await expect(playerIn(page, state)).toBeVisible();
      await expect(page.getByText('PROOF, not for collection')).toBeVisible();
      const { violations } = await new AxeBuilder({ page })
        .withTags(['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa'])
        .analyze();
      expect(violations.map((v) => `${state}: ${v.id} ${v.nodes[0]?.html}`)).toEqual([]);
    };
    await look('entry');
    await page.getByLabel('Participant code').fill('07');
    await page.getByRole('button', { name: 'Continue' }).click();
    await look('check');
    for (const key of keys) await page.keyboard.press(key);
    await page.getByRole('button', { name: 'Go on', exact: true }).click({ timeout: 15_000 });
    while (!(await playerIn(page, 'ready').isVisible())) await page.keyboard.press('Enter');
    await look('ready');
    await page.getByRole('button', { name: 'Arm the run' }).click();
    await look('armed');
    await page.keyboard.press('Backspace');
    await look('ready');
  });

  test('refuses a code that is none, and says how to mend it', async ({ browser }) => {
    const page = await opened(browser, bundle);
    for (const code of ['', 'Anna Smith', '../07', '<b>7</b>']) {
      await page.getByLabel('Participant code').fill(code);
      await page.getByRole('button', { name: 'Continue' }).click();
      await expect(page.getByRole('alert')).toContainText('letters and digits');
    }
    await expect(playerIn(page, 'entry')).toBeVisible();
  });

  test('ends early by Shift and End held, kept as partial; one pulse alone is a false start', async ({
    browser
  }) => {
    const page = await opened(browser, bundle);
    await armRun(page, { participant: '07', keys });
    await page.keyboard.press('Digit5');
    await expect(playerIn(page, 'running')).toBeVisible();
    await expect(playerIn(page, 'armed')).toBeVisible();
    await expect(page.getByText('armed again, nothing is lost')).toBeVisible();

    await page.keyboard.press('Digit5');
    await page.waitForTimeout(1000);
    await page.keyboard.press('Digit5');
    await page.keyboard.down('Shift');
    await page.keyboard.down('End');
    await page.waitForTimeout(300);
    await page.keyboard.up('End');
    await expect(playerIn(page, 'running')).toBeVisible();
    await page.keyboard.down('End');
    await expect(playerIn(page, 'over')).toBeVisible({ timeout: 3000 });
    await page.keyboard.up('End');
    await page.keyboard.up('Shift');
    await page.keyboard.press('Enter');
    await expect(page.getByRole('heading', { name: 'Ended early' })).toBeVisible();
    const lines = logLines((await savedBy(page, 'Save log')).text);
    expect(lines.at(-1)).toMatchObject({ type: 'end', state: 'partial', reason: 'ended by the operator' });
    expect(lines.find((l) => l.type === 'pulse')).toMatchObject({ state: 'ignored', reason: 'false-start' });
    expect(lines.filter((l) => l.what === 'false-start')).toHaveLength(1);
  });

  test('with an altered task is not run', async ({ browser }) => {
    const page = await (await browser.newContext({ offline: true })).newPage();
    const path = join(bundle.folder, 'altered.html');
    const text = readFileSync(join(bundle.folder, 'index.html'), 'utf8');
    writeFileSync(path, text.replace('"volumes":7', '"volumes":9'));
    await page.goto(bundle.address.replace('index.html', 'altered.html'));
    await expect(page.getByRole('alert')).toContainText('checksum differs');
    rmSync(path);
  });

  test('a repeat is asked about twice and counted', async ({ browser }) => {
    const page = await opened(browser, bundle);
    await armRun(page, { participant: '08', keys });
    await page.keyboard.press('Digit5');
    await page.keyboard.down('Shift');
    await page.keyboard.down('End');
    await expect(playerIn(page, 'over')).toBeVisible({ timeout: 5000 });
    await page.keyboard.up('Shift');
    await page.keyboard.press('Enter');
    await savedBy(page, 'Save log');
    await savedBy(page, 'Save event table');
    await page.getByRole('button', { name: 'The files are safe' }).click();
    await page.getByRole('button', { name: 'Next run' }).click();
    await expect(page.getByRole('region', { name: 'Unsaved runs' })).toHaveCount(0);
    await page.getByRole('button', { name: 'Continue' }).click();
    await expect(page.getByRole('alert')).toContainText('attempt 2');
    await page.getByRole('button', { name: 'Continue' }).click();
    await expect(playerIn(page, 'check')).toBeVisible();
    await expect(page.getByText('attempt 2')).toBeVisible();
  });
});

test('PRACTICE goes from entry to files by keyboard alone, with feedback and without a scanner', async ({
  browser
}) => {
  const bundle = await sampleFolder({ onsets, volumes: 7 }, { kind: 'PRACTICE' });
  const page = await opened(browser, bundle);
  await expect(page.getByLabel('Participant code')).toBeFocused();
  await page.keyboard.type('07');
  await page.keyboard.press('Enter');
  await expect(playerIn(page, 'check')).toBeVisible();
  for (const key of keys) await page.keyboard.press(key);
  await expect(page.getByRole('button', { name: 'Go on', exact: true })).toBeFocused({ timeout: 15_000 });
  await page.keyboard.press('Enter');
  while (!(await playerIn(page, 'ready').isVisible())) await page.keyboard.press('ArrowRight');
  await page.keyboard.press('Enter');
  await expect(playerIn(page, 'running')).toBeVisible();
  await expect(playerIn(page, 'over')).toBeVisible({ timeout: 15_000 });
  await page.keyboard.press('Enter');
  await expect(page.getByRole('button', { name: 'Save log' })).toBeFocused();
  const [download] = await Promise.all([page.waitForEvent('download'), page.keyboard.press('Enter')]);
  const lines = logLines(readFileSync(await download.path(), 'utf8'));
  expect(lines[0]).toMatchObject({ kind: 'PRACTICE' });
  expect(lines.at(-1)).toMatchObject({ state: 'complete', counts: { pulsesCounted: 0 } });
  bundle.remove();
});

/** A browser of our own, to be killed: Playwright's own would take the test along. */
async function spawnBrowser(profile: string): Promise<{ child: ChildProcess; browser: Browser }> {
  const args = [
    '--headless',
    '--no-sandbox',
    '--disable-gpu',
    '--no-first-run',
    '--disable-background-networking'
  ];
  const child = spawn(
    process.env.CHROMIUM || '/usr/bin/chromium',
    [...args, `--user-data-dir=${profile}`, '--remote-debugging-port=0', 'about:blank'],
    { detached: true, stdio: ['ignore', 'ignore', 'pipe'] }
  );
  const address = await new Promise<string>((done) => {
    let heard = '';
    child.stderr!.on('data', (data: Buffer) => {
      heard += data.toString();
      const found = /DevTools listening on (ws:\S+)/.exec(heard);
      if (found) done(found[1]!);
    });
  });
  return { child, browser: await chromium.connectOverCDP(address) };
}
const kill = (child: ChildProcess): Promise<void> =>
  new Promise((done) => {
    child.once('exit', () => done());
    process.kill(-child.pid!, 'SIGKILL');
  });

test('killed at three moments of a run, it still has the last key older than 50 ms', async () => {
  test.setTimeout(300_000);
  const bundle = await sampleFolder({ onsets, volumes: 30 });
  for (const moment of [0.9, 2.1, 3.4]) {
    const profile = mkdtempSync(join(tmpdir(), 'ebbline-browser-'));
    const first = await spawnBrowser(profile);
    const page = first.browser.contexts()[0]!.pages()[0]!;
    await page.goto(bundle.address);
    await armRun(page, { participant: '07', keys });
    const start = Date.now();
    let pressed = 0;
    for (let next = 0; Date.now() - start < moment * 1000;) {
      if (Date.now() - start >= next) {
        await page.keyboard.press('Digit5');
        next += 1000;
      }
      await page.keyboard.press('Digit1');
      pressed += 1;
      await page.waitForTimeout(40);
    }
    // The keys so far are older than 50 ms from here on.
    await page.waitForTimeout(50);
    await kill(first.child);
    await first.browser.close().catch(() => {});

    const second = await spawnBrowser(profile);
    const again = second.browser.contexts()[0]!.pages()[0]!;
    await again.goto(bundle.address);
    const unsaved = again.getByRole('region', { name: 'Unsaved runs' });
    await expect(unsaved.getByText('did not come to its end')).toBeVisible();
    const log = await savedBy(again, 'Save log of sub-07 run 1, attempt 1');
    const lines = logLines(log.text);
    expect(lines.filter((l) => l.type === 'key' && l.state === 'down')).toHaveLength(pressed);
    expect(lines.at(-1)).toMatchObject({ type: 'end', state: 'recovered' });
    const table = tableOf((await savedBy(again, 'Save event table of sub-07 run 1, attempt 1')).text);
    if (moment > 2) expect(table.length).toBeGreaterThan(0);
    await kill(second.child);
    await second.browser.close().catch(() => {});
    rmSync(profile, { recursive: true, force: true });
  }
  bundle.remove();
});
