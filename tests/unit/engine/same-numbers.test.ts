import { chromium } from 'playwright';
import { expect, it } from 'vitest';
import script from './fixtures/decisive-numbers.ts?bundle=iife';
import { decisiveNumbers } from './fixtures/decisive-numbers';

it('Node and the browser give the same bytes for everything that decides', { timeout: 120_000 }, async () => {
  const browser = await chromium.launch({
    executablePath: process.env.CHROMIUM || '/usr/bin/chromium',
    args: ['--no-sandbox', '--disable-gpu', '--no-first-run', '--disable-background-networking']
  });
  try {
    const page = await browser.newPage();
    await page.addScriptTag({ content: script });
    const there = await page.evaluate(() =>
      (
        globalThis as unknown as { EbblinePlayer: { decisiveNumbers(): string } }
      ).EbblinePlayer.decisiveNumbers()
    );
    const here = decisiveNumbers();
    expect(here.length).toBeGreaterThan(100_000);
    expect(there === here).toBe(true);
  } finally {
    await browser.close();
  }
});
