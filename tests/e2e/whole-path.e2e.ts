/**
 * The whole job as a person would do it: sign up, lab, study, task, Brief, cards, Page, predicted BOLD, search,
 * rehearsal, Pack; then at the stimulus computer: unzip, open from disk without a network, arm, trigger, respond,
 * save, and read what came out.
 */
import { expect, test } from '@playwright/test';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { checkBundle } from '../../src/lib/bundle/read-manifest';
import { sha256Hex } from '../../src/lib/task/canonical';
import { pngPicture } from '../fixtures/picture';
import { makeLab, makeStudy, makeTask, signUp } from './support/app';
import { validateDataset } from './support/bids';
import { unpackBundle } from './support/bundle-folder';
import {
  addCard,
  fillBrief,
  openScreen,
  packAndDownload,
  rehearseAtOnce,
  searchAndAdopt
} from './support/editor-steps';
import { expectOnTime, onsetErrors } from './support/onsets';
import { armRun, logLines, saveRun, tableOf } from './support/operator';
import { card, drag, middle, pointAt, shown, stored, trials } from './support/page-tools';
import { Scanner } from './support/scanner';
import { callWitness, hearWitness } from './support/witness';

// A trace takes pictures of the page all the time, which costs frames.
// A label that was renamed fails at once, not when the whole test's time is over.
test.use({ trace: 'off', actionTimeout: 30_000 });

const volumes = 34;
const brief = {
  question: 'Is the response to chimes larger than that to lanterns?',
  instructions: 'Press with your {same} when it is the same again, with your {different} when it is not.',
  conditions: ['follow-chime', 'follow-lantern'],
  responses: ['same', 'different']
};
const common = { length: 1, duration: 0.5, correct: 'same' };

test('from sign-up to a log and an event table that the analysis can trust', async ({ page, browser }) => {
  const folder = mkdtempSync(join(tmpdir(), 'ebbline-whole-path-'));
  const picture = join(folder, 'harbour light.png');
  writeFileSync(picture, pngPicture(320, 240));
  const errors: string[] = [];
  page.on('pageerror', (error) => errors.push(error.message));

  const task = await test.step('sign up, lab, study, task', async () => {
    await signUp(page);
    const study = await makeStudy(page, await makeLab(page, 'Marram Lab'), 'Tide of attention');
    return makeTask(page, study, { title: 'Chime and Lantern', tr: 1, volumes });
  });

  await test.step('Brief: question, conditions, responses, contrast', async () => {
    await fillBrief(page, brief);
    await expect(page.getByLabel('Weight of follow-lantern in', { exact: false })).toHaveValue('-1');
  });

  await test.step('cards: text, tone, shape, picture', async () => {
    await openScreen(page, task, 'cards');
    await addCard(page, {
      ...common,
      name: 'word',
      condition: 'follow-chime',
      kind: 'Text',
      fields: { Text: 'chime' }
    });
    await addCard(page, {
      ...common,
      name: 'chime',
      condition: 'follow-chime',
      kind: 'Tone',
      fields: { Frequency: 880 }
    });
    await addCard(page, {
      ...common,
      name: 'lantern',
      condition: 'follow-lantern',
      kind: 'Shape',
      fields: { Shape: 'lantern', 'Position, right of centre': 2 }
    });
    await addCard(page, {
      ...common,
      name: 'harbour',
      condition: 'follow-lantern',
      kind: 'Picture',
      picture
    });
  });

  await test.step('Page: drag trials, see the predicted BOLD signal', async () => {
    await openScreen(page, task, 'page');
    const curves = page.locator('[data-curve]');
    await drag(page, await middle(card(page, 'word')), await pointAt(page, 2.05));
    await expect(trials(page)).toHaveCount(1);
    const one = await curves.evaluateAll((all) => all.map((curve) => curve.getAttribute('d')).join());
    await drag(page, await middle(card(page, 'lantern')), await pointAt(page, 7.05));
    await drag(page, await middle(card(page, 'chime')), await pointAt(page, 12.05));
    await drag(page, await middle(card(page, 'harbour')), await pointAt(page, 17.05));
    await expect(trials(page)).toHaveCount(4);
    expect(await shown(page)).toEqual(['word 2', 'lantern 7', 'chime 12', 'harbour 17']);
    await expect(curves.first()).toBeVisible();
    const four = await curves.evaluateAll((all) => all.map((curve) => curve.getAttribute('d')).join());
    expect(four).not.toBe(one);
    const figures = page.getByRole('complementary', { name: 'Figures of Run 1' });
    await expect(figures.locator('dd').first()).toHaveText(/\d/);
  });

  await test.step('search for better timing and adopt it', async () => {
    await openScreen(page, task, 'search');
    await searchAndAdopt(page, {
      counts: { 'follow-chime': 4, 'follow-lantern': 4 },
      gap: { least: 0.5, mean: 1.5, most: 4 },
      leadOut: 8,
      seed: 'whole path'
    });
  });

  await test.step('rehearse', async () => {
    await openScreen(page, task, 'rehearse');
    await rehearseAtOnce(page);
  });

  const { document } = await stored(page, task);
  const [run] = document.runs;
  const packed = await test.step('pack', async () => {
    await openScreen(page, task, 'pack');
    return packAndDownload(page, 'PROOF');
  });
  expect(errors).toEqual([]);
  await page.close();

  const bundle = await unpackBundle(packed.zip);
  try {
    const check = checkBundle(bundle.files());
    expect(check).toMatchObject({
      ok: true,
      missing: [],
      altered: [],
      extra: [],
      manifest: { kind: 'PROOF' }
    });
    const plan = tableOf(
      new TextDecoder().decode(bundle.files()[`events/task-${document.brief.label}_run-1_events.tsv`])
    );
    expect(plan).toHaveLength(8);
    expect(run!.trials).toHaveLength(8);

    const offline = await browser.newContext({ offline: true, viewport: { width: 1280, height: 720 } });
    const player = await offline.newPage();
    const requests: string[] = [];
    offline.on('request', (request) => requests.push(request.url()));
    await callWitness(player);
    await player.goto(bundle.address);
    await armRun(player, { participant: '07', keys: ['Digit1', 'Digit2'] });
    const scanner = await Scanner.beside(player);
    // Right, wrong, none, and so on in turn.
    const presses = plan.flatMap((row, place) => {
      const at = Number(row.planned_onset) * 1000 + 430;
      return place % 3 === 2 ? [] : [{ at, code: place % 3 === 0 ? 'Digit1' : 'Digit2' }];
    });
    await scanner.scan({ code: 'Digit5', tr: 1000, count: volumes, presses });
    const saved = await saveRun(player);
    const testimony = await hearWitness(player);
    await offline.close();
    expect(requests.filter((address) => !/^(data|blob):/.test(address))).toEqual([bundle.address]);

    await test.step('every onset within one frame of plan, by the witness', () => {
      const zero = testimony.keys.find((key) => key.code === 'Digit5')!.at;
      const visible = plan
        .filter((row) => row.item !== 'chime')
        .map((row) => Number(row.planned_onset) * 1000);
      expectOnTime(onsetErrors(testimony, zero, visible));
    });

    await test.step('log and event table', () => {
      const lines = logLines(saved.log.text);
      expect(lines[0]).toMatchObject({ type: 'header', kind: 'PROOF', participant: '07', tr: 1, volumes });
      if (check.ok) expect(lines[0]).toMatchObject({ revision: check.manifest.revision });
      const before = saved.log.text.trimEnd().split('\n').slice(0, -1);
      expect(lines.at(-1)).toMatchObject({
        state: 'complete',
        counts: { pulsesCounted: volumes },
        sha256: sha256Hex(before.map((line) => `${line}\n`).join(''))
      });
      const rows = tableOf(saved.events.text);
      expect(rows.map((row) => [row.item, row.trial_type, row.planned_onset])).toEqual(
        plan.map((row) => [row.item, row.trial_type, row.planned_onset])
      );
      expect(rows.map((row) => row.correct)).toEqual(
        plan.map((_, place) => ['correct', 'wrong', 'missing'][place % 3])
      );
      for (const row of rows.filter((one) => one.item === 'harbour'))
        expect(Object.keys(bundle.files())).toContain(`stimuli/${row.stim_file}`);
    });

    await test.step('both BIDS validators find no fault in a small data set', async () => {
      const files = bundle.files();
      const stimuli = Object.entries(files).filter(([path]) => path.startsWith('stimuli/'));
      const { errors: faults, warnings } = await validateDataset({
        folder: join(folder, 'dataset'),
        taskName: document.brief.label,
        tr: 1,
        volumes,
        runs: [
          {
            stem: saved.events.name.replace(/_events\.tsv$/, ''),
            tsv: saved.events.text,
            sidecar: saved.sidecar.text
          }
        ],
        stimuli: Object.fromEntries(stimuli.map(([path, bytes]) => [path.slice('stimuli/'.length), bytes]))
      });
      expect(faults).toEqual([]);
      expect(warnings).toEqual([]);
    });
  } finally {
    bundle.remove();
    rmSync(folder, { recursive: true, force: true });
  }
});
