import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { bundleFileName, packBundle } from '../../../src/lib/bundle/pack';
import { checkBundle } from '../../../src/lib/bundle/read-manifest';
import { readPayload } from '../../../src/lib/player/payload';
import { sampleDocument, sampleInput } from '../../fixtures/sample-bundle';
import { pngPicture } from '../../fixtures/picture';
import { ownFindings } from '../../e2e/support/bids';
import { textOf, unzip } from './unzip';

const PLAYER = 'document.getElementById("root").textContent = "ready";';
const sha = (bytes: Uint8Array | string) => createHash('sha256').update(bytes).digest('hex');
const packed = async (input = sampleInput(PLAYER)) => unzip(await packBundle(input));
const payloadIn = (page: string): unknown =>
  JSON.parse(
    /<script type="application\/json" id="payload" data-sha256="[0-9a-f]{64}">(.*?)<\/script>/s.exec(
      page
    )![1]!
  );

describe('packBundle', () => {
  it('holds the files that the operator and the analyst need', async () => {
    const files = await packed(sampleInput(PLAYER, { runs: 2 }));
    expect(Object.keys(files).sort()).toEqual([
      'MANIFEST.json',
      'README.txt',
      'checksums.sha256',
      'console-card.html',
      'events/conditions/task-chimelantern_run-1_follow-chime.tsv',
      'events/conditions/task-chimelantern_run-1_follow-lantern.tsv',
      'events/conditions/task-chimelantern_run-2_follow-chime.tsv',
      'events/conditions/task-chimelantern_run-2_follow-lantern.tsv',
      'events/task-chimelantern_run-1_events.json',
      'events/task-chimelantern_run-1_events.tsv',
      'events/task-chimelantern_run-2_events.json',
      'events/task-chimelantern_run-2_events.tsv',
      'index.html',
      'methods.txt',
      'run-list.html',
      'stimuli/harbour.png'
    ]);
    expect(files['stimuli/harbour.png']).toEqual(new Uint8Array(pngPicture()));
  });

  it('gives the same bytes for the same input, whatever the order of the stimuli', async () => {
    const input = sampleInput(PLAYER);
    const spare = { sha256: sha('spare'), mime: 'image/png', file: 'spare.png', bytes: Buffer.from('spare') };
    const first = await packBundle({ ...input, assets: [spare, ...input.assets] });
    const second = await packBundle({ ...input, assets: [...input.assets, spare] });
    expect(sha(first)).toBe(sha(second));
    const later = await packBundle({ ...input, madeAt: '2026-03-02T09:30:01.000Z' });
    expect(sha(later)).not.toBe(sha(first));
  });

  it('gives the player a payload that it accepts, with the picture inside', async () => {
    const read = readPayload(payloadIn(textOf(await packed(), 'index.html')));
    if (!read.ok) throw new Error(read.problems.join());
    expect(read.payload.document).toEqual(sampleDocument());
    expect(read.payload.kind).toBe('PROOF');
    expect(Object.values(read.payload.assets)).toEqual([
      { mime: 'image/png', file: 'harbour.png', data: Buffer.from(pngPicture()).toString('base64') }
    ]);
  });

  it('writes planned tables that pass our own checks and name the stimulus file', async () => {
    const files = await packed();
    const stem = 'events/task-chimelantern_run-1_events';
    const tsv = textOf(files, `${stem}.tsv`);
    expect(ownFindings({ stem, tsv, sidecar: textOf(files, `${stem}.json`) })).toEqual([]);
    expect(tsv.split('\n')[4]).toMatch(/^7\.000\t0\.500\tfollow-lantern\tn\/a\tharbour\.png\tharbour\t4\t/);
    expect(textOf(files, 'events/conditions/task-chimelantern_run-1_follow-chime.tsv')).toBe(
      'onset\tduration\tamplitude\n1.000\t0.500\t1\n5.000\t0.250\t1\n9.000\t0.500\t1\n'
    );
  });

  it('puts a large picture beside the page as data that gives back its bytes', async () => {
    let state = 1;
    const noise = () => (state = (state * 48271) % 2147483647) & 63;
    const picture = pngPicture(900, 700, noise);
    expect(picture.length).toBeGreaterThan(512 * 1024);
    const files = await packed(sampleInput(PLAYER, { picture }));
    const page = textOf(files, 'index.html');
    const hash = sha(picture);
    expect(payloadIn(page)).toMatchObject({ assets: { [hash]: { script: `data/${hash}.js` } } });
    const script = textOf(files, `data/${hash}.js`);
    const sandbox: { EBBLINE_DATA?: Record<string, string> } = {};
    new Function('window', script)(sandbox);
    expect(sha(Buffer.from(sandbox.EBBLINE_DATA![hash]!, 'base64'))).toBe(hash);
    expect(page).toContain(`' file:;`);
  });

  it.each([
    ['a stimulus that is not there', { assets: [] }, /harbour\.png.*card ‘harbour’.*upload it again/],
    [
      'a stimulus with other bytes',
      { assets: [{ ...sampleInput(PLAYER).assets[0]!, bytes: Buffer.from('other') }] },
      /other bytes.*upload it again/
    ],
    [
      'a build that is not of the script',
      { playerBuild: 'a'.repeat(64) },
      /pass the script that the build names/
    ],
    ['a document without runs', { document: { ...sampleDocument(), runs: [] } }, /at least one run/],
    [
      'a plan with a run that the task does not have',
      { plan: [{ participant: '01', session: null, runs: ['gone-run'], responses: {}, seed: '1' }] },
      /there is no run gone-run/
    ]
  ])('refuses %s', async (_what, changes, message) => {
    await expect(packBundle(sampleInput(PLAYER, {}, changes))).rejects.toThrow(message);
  });

  it('refuses more stimuli than the stated limit, with both numbers', async () => {
    const input = sampleInput(PLAYER);
    const [asset] = input.assets;
    const huge = { ...input, assets: [{ ...asset!, bytes: new Uint8Array(101 * 1024 * 1024) }] };
    await expect(packBundle(huge)).rejects.toThrow(/101\.0 MB together.*at most 100\.0 MB/);
  });

  it('is offered under a name that says its kind', () => {
    expect(bundleFileName(sampleInput(PLAYER))).toMatch(/^task-chimelantern_PROOF_[0-9a-f]{8}\.zip$/);
  });
});

describe('MANIFEST.json', () => {
  it('names the SHA-256 of every file, the task, the profile and the player', async () => {
    const input = sampleInput(PLAYER);
    const files = await packed(input);
    const manifest = JSON.parse(textOf(files, 'MANIFEST.json'));
    expect(manifest).toMatchObject({
      kind: 'PROOF',
      revision: input.revision,
      saveNumber: 7,
      profile: { name: 'East scanner', hash: input.profileHash },
      player: sha(PLAYER),
      task: { label: 'chimelantern' }
    });
    for (const [path, bytes] of Object.entries(files)) {
      if (path === 'MANIFEST.json') continue;
      expect(manifest.files[path], path).toEqual({ bytes: bytes.length, sha256: sha(bytes) });
      if (path !== 'checksums.sha256')
        expect(textOf(files, 'checksums.sha256')).toContain(`${sha(bytes)}  ${path}\n`);
    }
  });

  it('shows what is missing, altered or added', async () => {
    const files = await packed();
    expect(checkBundle(files)).toMatchObject({ ok: true, missing: [], altered: [], extra: [] });
    const { 'methods.txt': _gone, ...rest } = files;
    const page = new Uint8Array(files['index.html']!);
    page[page.length - 20]! ^= 1;
    const answer = checkBundle({ ...rest, 'index.html': page, 'note.txt': new Uint8Array() });
    expect(answer).toMatchObject({
      ok: true,
      missing: ['methods.txt'],
      altered: ['index.html'],
      extra: ['note.txt']
    });
  });

  it.each([
    ['absent', undefined, /no MANIFEST\.json/],
    ['binary', new Uint8Array([255, 254, 0]), /not JSON/],
    ['of a later format', new TextEncoder().encode('{"format":2}'), /unexpected format/]
  ])('%s: one clear sentence', (_what, bytes, message) => {
    const answer = checkBundle(bytes ? { 'MANIFEST.json': bytes } : {});
    expect(answer.ok).toBe(false);
    if (!answer.ok) expect(answer.problem).toMatch(message);
  });
});
