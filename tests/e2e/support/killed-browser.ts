/** A browser that can be killed as a power cut would: its whole process group at once, with its profile kept. */
import { chromium, type Browser, type Page } from '@playwright/test';
import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { BundleFolder } from './bundle-folder';
import { armRun, logLines, playerIn, savedBy, type LogLine } from './operator';
import { Scanner } from './scanner';

const FLAGS = [
  '--headless',
  '--no-sandbox',
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
  '--remote-debugging-port=0'
];

export class KillableBrowser {
  readonly page: Page;
  readonly #process: ChildProcess;
  readonly #browser: Browser;
  private constructor(process: ChildProcess, browser: Browser, page: Page) {
    this.#process = process;
    this.#browser = browser;
    this.page = page;
  }

  static async start(profile: string): Promise<KillableBrowser> {
    const program = process.env.CHROMIUM || '/usr/bin/chromium';
    const child = spawn(program, [...FLAGS, `--user-data-dir=${profile}`, 'about:blank'], {
      detached: true,
      stdio: ['ignore', 'ignore', 'pipe']
    });
    const address = await new Promise<string>((done, fail) => {
      let said = '';
      child.stderr!.on('data', (data: Buffer) => {
        said += String(data);
        const found = /DevTools listening on (ws:\S+)/.exec(said);
        if (found) done(found[1]!);
      });
      child.once('exit', (code) => fail(new Error(`The browser ended with ${code}: ${said}`)));
    });
    const browser = await chromium.connectOverCDP(address);
    const page = browser.contexts()[0]!.pages()[0]!;
    return new KillableBrowser(child, browser, page);
  }

  /** SIGKILL to every process of the browser. */
  async kill(): Promise<void> {
    if (this.#process.exitCode === null && this.#process.signalCode === null) {
      const ended = new Promise((done) => this.#process.once('exit', done));
      process.kill(-this.#process.pid!, 'SIGKILL');
      await ended;
    }
    await this.#browser.close().catch(() => {});
  }
}

export interface KillTrial {
  /** Keys that were pressed at least 50 ms before the kill, and how many of them the recovered log holds. */
  pressed: number;
  found: number;
  pulses: number;
  pulsesFound: number;
  /** The log that the reopened page offered. */
  lines: LogLine[];
}

/** Runs a bundle, kills the browser `after` ms into the scan, opens the bundle again and saves what it offers. */
export async function killTrial(bundle: BundleFolder, after: number): Promise<KillTrial> {
  const profile = mkdtempSync(join(tmpdir(), 'ebbline-profile-'));
  let browser = await KillableBrowser.start(profile);
  try {
    await browser.page.goto(bundle.address);
    await armRun(browser.page, { participant: '07', keys: ['Digit1', 'Digit2'] });
    const scanner = await Scanner.beside(browser.page);
    const sent: { code: string; at: number }[] = [];
    const start = Date.now() + 200;
    const tr = 1000;
    for (let step = 0; step * 100 < after; step++) {
      const moment = start + step * 100;
      const isPulse = (step * 100) % tr === 0;
      await scanner.press(isPulse ? 'Digit5' : 'Digit1', moment);
      // When the page has it, not when it was meant to: a busy machine sends late.
      sent.push({ code: isPulse ? 'Digit5' : 'Digit1', at: Date.now() });
    }
    await new Promise((done) => setTimeout(done, start + after - Date.now()));
    const killed = Date.now();
    await browser.kill();
    const due = sent.filter(({ at }) => at <= killed - 50);

    browser = await KillableBrowser.start(profile);
    await browser.page.goto(bundle.address);
    await playerIn(browser.page, 'entry').waitFor();
    const name = 'sub-07 run 1, attempt 1';
    const log = await savedBy(browser.page, `Save log of ${name}`);
    const lines = logLines(log.text);
    const isPress = (line: LogLine) => line.type === 'key' && line.state === 'down';
    const isPulse = (line: LogLine) => line.type === 'pulse' && line.state === 'counted';
    return {
      pressed: due.filter(({ code }) => code === 'Digit1').length,
      found: lines.filter(isPress).length,
      pulses: due.filter(({ code }) => code === 'Digit5').length,
      pulsesFound: lines.filter(isPulse).length,
      lines
    };
  } finally {
    await browser.kill();
    rmSync(profile, { recursive: true, force: true, maxRetries: 5 });
  }
}
