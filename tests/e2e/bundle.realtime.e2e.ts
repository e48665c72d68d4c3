/** The packed bundle as it is used: opened from disk, without a network, beside a scanner that sends pulses. */
import { expect, test } from '@playwright/test';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { checkBundle } from '../../src/lib/bundle/read-manifest';
import { sha256Hex } from '../../src/lib/task/canonical';
import { validateDataset } from './support/bids';
import { sampleFolder, type BundleFolder } from './support/bundle-folder';
import { expectOnTime, onsetErrors } from './support/onsets';
import { armRun, logLines, saveRun, tableOf } from './support/operator';
import { Scanner } from './support/scanner';
import { callWitness, hearWitness } from './support/witness';

const second = 1_000_000;
/** µs; each falls elsewhere between two frames. Cards in turn: word, lantern, chime, picture. */
const onsets = [1.003, 2.507, 4.011, 5.516, 7.021, 8.529, 10.014, 11.508].map((s) => Math.round(s * second));
const volumes = 14;
/** Presses by trial, ms after its onset: right, right, wrong, right, none, … */
const answers = [
  { trial: 1, code: 'Digit1', after: 400 },
  { trial: 2, code: 'Digit1', after: 350 },
  { trial: 3, code: 'Digit2', after: 500 },
  { trial: 4, code: 'Digit1', after: 300 },
  { trial: 6, code: 'Digit1', after: 620 }
];

// A trace takes pictures of the page all the time, which costs frames.
test.use({ trace: 'off' });

let bundle: BundleFolder;
test.beforeAll(async () => {
  bundle = await sampleFolder({ onsets, volumes });
});
test.afterAll(() => bundle?.remove());

test('a run from disk: no request, onsets in their frames, log and tables whole', async ({ browser }) => {
  const packed = checkBundle(bundle.files());
  expect(packed).toMatchObject({ ok: true, missing: [], altered: [], extra: [] });

  const context = await browser.newContext({ offline: true, viewport: { width: 1280, height: 720 } });
  const page = await context.newPage();
  const requests: string[] = [];
  const complaints: string[] = [];
  context.on('request', (request) => requests.push(request.url()));
  page.on('console', (message) => message.type() === 'error' && complaints.push(message.text()));
  page.on('pageerror', (error) => complaints.push(error.message));
  await callWitness(page);
  await page.goto(bundle.address);
  await expect(page.getByText('PROOF, not for collection').first()).toBeVisible();
  await armRun(page, { participant: '07', keys: ['Digit1', 'Digit2'] });

  const scanner = await Scanner.beside(page);
  await scanner.scan({
    code: 'Digit5',
    tr: 1000,
    count: volumes,
    presses: answers.map(({ trial, code, after }) => ({ at: onsets[trial - 1]! / 1000 + after, code }))
  });
  const saved = await saveRun(page);
  const testimony = await hearWitness(page);
  await context.close();

  expect(requests.filter((address) => !/^(data|blob):/.test(address))).toEqual([bundle.address]);
  expect(complaints).toEqual([]);

  const zero = testimony.keys.find((key) => key.code === 'Digit5')!.at;
  const visible = onsets.filter((_, place) => place % 4 !== 2).map((micros) => micros / 1000);
  const seen = onsetErrors(testimony, zero, visible);
  await test.step('every visible onset within one frame of plan, by the witness', () => {
    expectOnTime(seen);
  });

  await test.step('the log counts and seals itself', () => {
    expect(saved.log.name).toBe('sub-07_task-chimelantern_run-1_attempt-1_log.jsonl');
    const lines = logLines(saved.log.text);
    const [header] = lines;
    const end = lines.at(-1)!;
    expect(header).toMatchObject({ type: 'header', kind: 'PROOF', participant: '07', volumes });
    if (packed.ok)
      expect(header).toMatchObject({ revision: packed.manifest.revision, build: packed.manifest.player });
    expect(end).toMatchObject({ type: 'end', state: 'complete' });
    expect(end.counts).toMatchObject({ pulsesCounted: volumes, itemsNotShown: 0, itemsShown: onsets.length });
    const before = saved.log.text.trimEnd().split('\n').slice(0, -1);
    expect(end.sha256).toBe(sha256Hex(before.map((line) => `${line}\n`).join('')));
  });

  await test.step('the event table says what happened', () => {
    const rows = tableOf(saved.events.text);
    expect(rows.map((row) => row.item)).toEqual(
      onsets.map((_, place) => ['word', 'lantern', 'chime', 'harbour'][place % 4])
    );
    expect(rows.map((row) => row.correct)).toEqual([
      'correct',
      'correct',
      'wrong',
      'correct',
      'missing',
      'correct',
      'missing',
      'missing'
    ]);
    expect(rows[3]!.stim_file).toBe('harbour.png');
    for (const [place, row] of rows.entries())
      expect(Number(row.planned_onset)).toBe(onsets[place]! / second);
    // Told in scanner time: the line through exact pulses lies within a millisecond of the page's clock.
    for (const { planned, seen: at } of seen.onsets) {
      const row = rows[onsets.indexOf(Math.round(planned * 1000))]!;
      expect(Math.abs(Number(row.onset) * 1000 - at!), `onset in the table of ${planned} ms`).toBeLessThan(
        1.5
      );
    }
    for (const { trial, after } of answers) {
      const row = rows[trial - 1]!;
      const pressed = Number(row.onset) + Number(row.response_time);
      // The key's own time is exact to 0.1 ms; the line through pulses adds less than a millisecond.
      expect(Math.abs(pressed - (onsets[trial - 1]! / second + after / 1000))).toBeLessThan(0.0015);
    }
  });

  await test.step('both BIDS validators find no fault', async () => {
    const folder = mkdtempSync(join(tmpdir(), 'ebbline-dataset-'));
    try {
      const files = bundle.files();
      const { errors, warnings } = await validateDataset({
        folder,
        taskName: 'chimelantern',
        tr: 1,
        volumes,
        runs: [
          {
            stem: saved.events.name.replace(/_events\.tsv$/, ''),
            tsv: saved.events.text,
            sidecar: saved.sidecar.text
          }
        ],
        stimuli: { 'harbour.png': files['stimuli/harbour.png']! }
      });
      expect(errors).toEqual([]);
      expect(warnings).toEqual([]);
    } finally {
      rmSync(folder, { recursive: true, force: true });
    }
  });
});
