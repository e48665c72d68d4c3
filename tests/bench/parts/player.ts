/**
 * The real bundle, opened from disk without a network, beside a simulated scanner: onset errors as a witness outside
 * the player saw them, next to a chain of `setTimeout` that shows the same plan in the same browser; key times; and
 * the scanner's clock as found by pulse-locked timing.
 */
import { chromium, type Browser } from '@playwright/test';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { packBundle } from '../../../src/lib/bundle/pack';
import { sampleInput } from '../../fixtures/sample-bundle';
import { sampleFolder, type BundleFolder } from '../../e2e/support/bundle-folder';
import { onsetErrors, type OnsetErrors } from '../../e2e/support/onsets';
import { armRun, logLines, saveRun, tableOf, type SavedRun } from '../../e2e/support/operator';
import { playerScript } from '../../e2e/support/player-script';
import { Scanner, type Press } from '../../e2e/support/scanner';
import { callWitness, hearWitness } from '../../e2e/support/witness';
import { writeChainPage } from '../timeout-chain';
import type { BenchPart, BenchRow } from '../types';

const TR = 1000;
const VOLUMES = 66;
const SHOWN = 240;
/**
 * 120 onsets about half a second apart, ms. Their places between two frames of 60 Hz go round by the golden section,
 * so that a mean error of zero cannot come from the plan's own grid.
 */
const PLAN = Array.from({ length: 120 }, (_, k) => 1000 + k * 533.3 + ((k * 0.618034) % 1) * 16.667);
const PRESSES: Press[] = PLAN.filter((_, k) => k % 4 === 0).map((at) => ({ at: at + 263.4, code: 'Digit1' }));
/** The scanner's clock against the computer's, parts per million. */
const SLOW = 50;

interface Witnessed {
  onsets: OnsetErrors;
  saved: SavedRun;
  /** Page time of the first pulse, ms. */
  zero: number;
}

async function bundleOfPlan(): Promise<BundleFolder> {
  const micros = PLAN.map((ms) => Math.round(ms * 1000));
  return sampleFolder({ onsets: micros, volumes: VOLUMES, only: 'lantern', shown: SHOWN * 1000 });
}

async function watchBundle(
  browser: Browser,
  bundle: BundleFolder,
  timing: 'free-run' | 'pulse-locked',
  tr: number
): Promise<Witnessed> {
  const context = await browser.newContext({ offline: true, viewport: { width: 1280, height: 720 } });
  try {
    const page = await context.newPage();
    await callWitness(page);
    await page.goto(bundle.address);
    await armRun(page, { participant: '07', keys: ['Digit1', 'Digit2'], timing });
    const scanner = await Scanner.beside(page);
    await scanner.scan({ code: 'Digit5', tr, count: VOLUMES, presses: PRESSES });
    const saved = await saveRun(page);
    const testimony = await hearWitness(page);
    const zero = testimony.keys.find((key) => key.code === 'Digit5')!.at;
    const planned = PLAN.map((ms) => (timing === 'pulse-locked' ? (ms * tr) / TR : ms));
    return { onsets: onsetErrors(testimony, zero, planned), saved, zero };
  } finally {
    await context.close();
  }
}

async function watchChain(browser: Browser): Promise<OnsetErrors> {
  const folder = mkdtempSync(join(tmpdir(), 'ebbline-chain-'));
  const context = await browser.newContext({ offline: true, viewport: { width: 1280, height: 720 } });
  try {
    const page = await context.newPage();
    await callWitness(page);
    await page.goto(writeChainPage(folder, PLAN, SHOWN, 'Digit5'));
    const scanner = await Scanner.beside(page);
    await scanner.scan({ code: 'Digit5', tr: TR, count: VOLUMES });
    const testimony = await hearWitness(page);
    const zero = testimony.keys.find((key) => key.code === 'Digit5')!.at;
    // It drifts far off the plan: each onset is looked for up to half way to its neighbours.
    return onsetErrors(testimony, zero, PLAN, 260);
  } finally {
    await context.close();
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Largest difference between a key's time in the log and when it was sent as pressed, ms. */
function keyErrors({ saved }: Witnessed): number[] {
  const pressed = logLines(saved.log.text)
    .filter((line) => line.type === 'key' && line.state === 'down' && line.code === 'Digit1')
    .map((line) => line.time! * 1000);
  return PRESSES.map(({ at }) => Math.min(...pressed.map((time) => Math.abs(time - at))));
}

/** How much slower the scanner is than the computer, ppm, by the line through the log's pulses. */
function slowness({ saved }: Witnessed): number {
  const pulses = logLines(saved.log.text).filter((line) => line.type === 'pulse' && line.state === 'counted');
  const n = pulses.length;
  const x = pulses.map((line) => Number(line.volume));
  const y = pulses.map((line) => line.page);
  const [mx, my] = [x, y].map((values) => values.reduce((sum, value) => sum + value, 0) / n) as [
    number,
    number
  ];
  const slope =
    x.reduce((sum, value, k) => sum + (value - mx) * (y[k]! - my), 0) /
    x.reduce((sum, value) => sum + (value - mx) ** 2, 0);
  return (slope / (TR / 1000) - 1) * 1e6;
}

async function playerBench(): Promise<BenchRow[]> {
  const rows: BenchRow[] = [];
  const row = (name: string, value: number, unit: string, more: Partial<BenchRow> = {}) =>
    rows.push({ part: 'player', name, value, unit, aim: null, better: 'lower', against: null, ...more });
  const bundle = await bundleOfPlan();
  const browser = await chromium.launch({
    executablePath: process.env.CHROMIUM || '/usr/bin/chromium',
    args: ['--no-sandbox', '--disable-gpu', '--no-first-run', '--disable-background-networking']
  });
  try {
    const free = await watchBundle(browser, bundle, 'free-run', TR);
    const chain = await watchChain(browser);
    const against = (value: number) => ({ name: 'chain of timeouts', value });
    const { onsets } = free;
    row('onset error, signed mean, away from 0', Math.abs(onsets.mean), 'frames', {
      aim: 0.05,
      against: against(Math.abs(chain.mean))
    });
    row('onset error, largest, frames that were made', onsets.largest, 'frames', {
      aim: 0.5 + 1 / onsets.interval,
      against: against(chain.largest)
    });
    row('onsets never seen', onsets.unseen, 'of 120', { aim: 0, against: against(chain.unseen) });
    row('onsets whose frames the browser dropped', onsets.dropped, 'of 120', {
      against: against(chain.dropped)
    });
    row('onset in the saved table against the witness, largest', tableErrors(free), 'ms', { aim: 1.5 });
    row('time of a key in the log, largest error', Math.max(...keyErrors(free)), 'ms', { aim: 0.3 });

    const locked = await watchBundle(browser, bundle, 'pulse-locked', TR * (1 + SLOW / 1e6));
    row(`scanner made ${SLOW} ppm slow, found off by`, Math.abs(slowness(locked) - SLOW), 'ppm', { aim: 2 });
    row('onset error to those pulses, largest', locked.onsets.largest, 'frames', { aim: 1 });
  } finally {
    await browser.close();
    bundle.remove();
  }
  const input = sampleInput(await playerScript());
  const began = performance.now();
  const zip = await packBundle(input);
  row('pack the sample task', performance.now() - began, 'ms');
  row('size of its bundle', zip.length / 1024, 'kB');
  return rows;
}

/** Onsets as the player tells them in the event table beside those that the witness saw, largest difference, ms. */
function tableErrors({ saved, onsets }: Witnessed): number {
  const told = tableOf(saved.events.text).map((line) => Number(line.onset) * 1000);
  const seen = onsets.onsets.flatMap(({ seen: at }) => (at === null ? [] : [at]));
  return Math.max(...seen.map((at) => Math.min(...told.map((time) => Math.abs(time - at)))));
}

export default { name: 'player', run: playerBench } satisfies BenchPart;
