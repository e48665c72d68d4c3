import JSZip from 'jszip';
import { beforeAll, describe, expect, it } from 'vitest';
import { newCard, newCondition, newContrast, newId, newItem } from '$lib/task/create';
import type { TaskDocument } from '$lib/task/schema';
import { documentOfRevision, revisionHash, sealSnapshot, snapshotOf } from '$lib/server/services/revisions';
import { saveTask } from '$lib/server/services/documents';
import { call, type CallOptions } from './support/api';
import { useDatabase } from './support/database';
import { labWithRoles } from './support/people';
import { form, png } from './support/pictures';

const t = useDatabase();
let w: Awaited<ReturnType<typeof labWithRoles>>;
let doc: TaskDocument;

/** Two conditions, twenty trials each 14 s apart, and a picture. */
beforeAll(async () => {
  w = await labWithRoles(t.db);
  const picture = await call(
    t.db,
    w.people.owner,
    'POST',
    '/labs/{lab}/assets',
    { lab: w.lab.id },
    { body: form(png()) }
  );
  doc = structuredClone(w.document);
  const high = newCondition([], 'high');
  const low = newCondition([high], 'low');
  const cards = [high, low].map((c) => newCard(c.name, c.id, 1_000_000));
  const item = newItem('picture', 1_000_000);
  cards[0]!.items = [{ ...item, file: 'lantern.png', asset: picture.json.sha256 } as typeof item];
  doc.brief.conditions = [high, low];
  doc.brief.contrasts = [newContrast('high over low', { [high.id]: 1, [low.id]: -1 })];
  doc.cards = cards;
  doc.runs[0]!.trials = Array.from({ length: 20 }, (_, n) => ({
    id: newId(),
    card: cards[(n * 7 + (n >> 2)) % 2]!.id,
    onset: n * 14_000_000
  }));
  await saveTask(t.db, {
    lab: w.lab.id,
    task: w.task.id,
    base: 1,
    document: doc,
    words: [],
    author: w.people.owner.id
  });
});

const get = (path: string, query: CallOptions['query'] = {}, by = w.people.reader) =>
  call(t.db, by, 'GET', `/tasks/{task}${path}`, { task: w.task.id, run: doc.runs[0]!.id }, { query });
const text = (bytes: Uint8Array) => new TextDecoder().decode(bytes);

describe('planned tables', () => {
  it('hold every trial of the run, and no file that does not go with them', async () => {
    const answer = await get('/runs/{run}/events.tsv');
    expect(answer.headers.get('content-type')).toMatch(/^text\/tab-separated-values/);
    const [header, ...rows] = text(answer.bytes)
      .trimEnd()
      .split('\n')
      .map((l) => l.split('\t'));
    expect(header!.slice(0, 3)).toEqual(['onset', 'duration', 'trial_type']);
    expect(rows).toHaveLength(20);
    expect(rows[1]!.slice(0, 2)).toEqual(['14.000', '1.000']);
    expect(new Set(rows.map((r) => r[header!.indexOf('stim_file')]))).toEqual(new Set(['n/a']));
  });

  it('have a sidecar with both levels and the content hash', async () => {
    const sidecar = (await get('/runs/{run}/events.json')).json;
    expect(Object.keys(sidecar.trial_type.Levels)).toEqual(['high', 'low']);
    expect(sidecar.StimulusPresentation.Code).toBe(`urn:sha256:${revisionHash(doc)}`);
  });

  it('of a run that is not there are not found', async () => {
    const answer = await call(t.db, w.people.owner, 'GET', '/tasks/{task}/runs/{run}/events.tsv', {
      task: w.task.id,
      run: 'nothere'
    });
    expect(answer.status).toBe(404);
  });
});

describe('the design of a run', () => {
  it('has a value for each volume, and an efficiency of the contrast', async () => {
    const { json, status } = await get('/runs/{run}/design');
    expect(status).toBe(200);
    expect(json).toMatchObject({ tr: 1.5, volumes: 300 });
    expect(json.sampling).toHaveLength(300);
    // Middle of the first acquisition, as the defaults say.
    expect(json.sampling[0]).toBeCloseTo(0.75, 12);
    expect(json.regressors.map((r: { name: string }) => r.name)).toEqual(['high', 'low']);
    for (const r of json.regressors) expect(r.values).toHaveLength(300);
    // Constant and floor(2 · 450 / 128) cosines.
    expect(json.nuisance).toHaveLength(8);
    expect(json.contrasts[0]).toMatchObject({ name: 'high over low', weights: [1, -1], estimable: true });
    expect(json.contrasts[0].efficiency).toBeGreaterThan(0);
    const white = (await get('/runs/{run}/design', { noise: 'white' })).json;
    expect(white.contrasts[0].efficiency).not.toBeCloseTo(json.contrasts[0].efficiency, 6);
  });

  it('refuses a response that it does not know', async () => {
    const answer = await get('/runs/{run}/design', { response: 'balloon' });
    expect(answer.status).toBe(400);
    expect(answer.json.error.message).toMatch(/\?response= wrong: .*double-gamma/);
  });
});

describe('import of an event table', () => {
  const send = (body: string | Uint8Array, query = {}, type = 'text/tab-separated-values') =>
    call(
      t.db,
      w.people.experimenter,
      'POST',
      '/tasks/{task}/runs/import',
      { task: w.task.id },
      {
        body,
        query,
        headers: { 'content-type': type }
      }
    );
  const current = async () => (await get('/document')).json;

  it('makes a run, and says what was skipped and why', async () => {
    const before = await current();
    const answer = await send('onset\tduration\ttrial_type\n1.5\t0.5\thigh\nx\t1\tlow\n9\tn/a\tnew one\n', {
      volumes: '40',
      name: 'From a table'
    });
    expect(answer.status).toBe(201);
    expect(answer.json.report).toMatchObject({
      trials: 2,
      conditions: [
        { name: 'high', trials: 1, made: false },
        { name: 'new one', trials: 1, made: true }
      ],
      skipped: [{ line: 3, reason: expect.stringMatching(/onset ‘x’/) }]
    });
    const after = await current();
    expect(after.saveNumber).toBe(before.saveNumber + 1);
    expect(after.document.runs.at(-1)).toMatchObject({
      id: answer.json.run,
      name: 'From a table',
      volumes: 40
    });
  });

  it.each([
    ['an empty table', '', 422, /empty/],
    ['a binary file', new Uint8Array([0x89, 0x50, 0, 1, 2]), 422, /not a text file/],
    ['one in UTF-16', new Uint8Array(Buffer.from('\ufeffonset\tduration\n1\t1\n', 'utf16le')), 422, /UTF-16/],
    [
      'one in Latin-1',
      new Uint8Array(Buffer.from('onset\tduration\ttrial_type\n1\t1\tgr\xfcn\n', 'latin1')),
      422,
      /not in UTF-8/
    ],
    ['one without onsets', 'time\tduration\n1\t1\n', 422, /no column ‘onset’/],
    ['more than 5,000 events', `onset\tduration\n${'1\t1\n'.repeat(5001)}`, 422, /at most 5,000/],
    ['a huge file', new Uint8Array(16_000_001).fill(65), 413, /16\.0 MB/]
  ])('%s changes nothing', async (_, body, status, message) => {
    const before = await current();
    const answer = await send(body);
    expect(answer.status).toBe(status);
    expect(answer.json.error.message).toMatch(message);
    expect(await current()).toEqual(before);
  });

  it('takes tables only', async () => {
    expect((await send('{}', {}, 'application/json')).status).toBe(415);
    expect((await send('onset\tduration\n1\t1\n', { volumes: '0' })).status).toBe(400);
  });
});

describe('rehearsals', () => {
  const keep = (by: typeof w.people.owner, body: unknown) =>
    call(t.db, by, 'POST', '/tasks/{task}/rehearsals', { task: w.task.id }, { body });
  const report = { items: { planned: 20, shown: 20 } };

  it('are kept with the save they were of; a reader’s is not', async () => {
    const run = doc.runs[0]!.id;
    const kept = await keep(w.people.operator, { run, saveNumber: 2, report });
    expect(kept.json).toMatchObject({ kept: true });
    expect((await keep(w.people.reader, { run, saveNumber: 2, report })).json).toEqual({
      kept: false,
      id: null
    });
    const { items } = (await get('/rehearsals')).json;
    expect(items).toEqual([
      { id: kept.json.id, saveNumber: 2, run, author: 'operator', at: expect.any(String), report }
    ]);
    expect((await keep(w.people.operator, { run, saveNumber: 999, report })).status).toBe(422);
  });
});

describe('revisions', () => {
  const seal = (document: TaskDocument, saveNumber: number) =>
    sealSnapshot(t.db, w.lab.id, w.task.id, { document, saveNumber }, w.people.owner.id);

  it('the same content is the same revision, other content another', async () => {
    const first = await seal(doc, 2);
    const reordered = Object.fromEntries(Object.entries(doc).reverse()) as TaskDocument;
    expect(await seal(reordered, 2)).toEqual(first);
    const other = await seal({ ...doc, brief: { ...doc.brief, question: 'High or low?' } }, 2);
    expect(other.hash).not.toBe(first.hash);
    expect(await documentOfRevision(t.db, w.lab.id, first.id)).toEqual(doc);
  });

  it('the hash covers format, document and the files used, and is that of the stored bytes', async () => {
    const made = await seal(doc, 2);
    const row = await t.db('revisions').where({ id: made.id }).first();
    expect(row.snapshot).toBe(snapshotOf(doc));
    expect(Object.keys(JSON.parse(row.snapshot))).toEqual(['assets', 'document', 'format']);
    expect(JSON.parse(row.snapshot).assets).toHaveLength(1);
    const { createHash } = await import('node:crypto');
    expect(createHash('sha256').update(row.snapshot).digest('hex')).toBe(made.hash);
  });

  it('never changes, and outlives its task', async () => {
    const made = await seal(doc, 2);
    await expect(t.db('revisions').where({ id: made.id }).update({ snapshot: '{}' })).rejects.toThrow(
      /permission denied/
    );
    const copy = await labWithRoles(t.db);
    const sealed = await sealSnapshot(
      t.db,
      copy.lab.id,
      copy.task.id,
      { document: copy.document, saveNumber: 1 },
      copy.people.owner.id
    );
    await call(t.db, copy.people.owner, 'DELETE', '/tasks/{task}', { task: copy.task.id });
    expect((await call(t.db, copy.people.owner, 'GET', '/tasks/{task}', { task: copy.task.id })).status).toBe(
      404
    );
    const kept = await call(t.db, copy.people.reader, 'GET', '/revisions/{revision}', {
      revision: sealed.id
    });
    expect(kept.json).toMatchObject({ hash: sealed.hash, document: copy.document });
  });
});

describe('a bundle of the draft', () => {
  it('is a zip that names the sealed content, and packing again seals nothing new', async () => {
    const pack = (kind: string) => get('/bundle.zip', { kind }, w.people.experimenter);
    const before = await t.db('revisions').where({ task_id: w.task.id });
    const first = await pack('proof');
    expect(first.status).toBe(200);
    expect(first.headers.get('content-type')).toBe('application/zip');
    expect(first.headers.get('content-disposition')).toMatch(/task-lanterns_PROOF_[0-9a-f]{8}\.zip/);
    const zip = await JSZip.loadAsync(first.bytes);
    const { document } = (await get('/document')).json;
    const manifest = JSON.parse(await zip.file('MANIFEST.json')!.async('string'));
    expect(JSON.stringify(manifest)).toContain(revisionHash(document));
    expect(await zip.file('index.html')!.async('string')).toContain('<!doctype html>');
    expect(Object.keys(zip.files).some((name) => name.startsWith('stimuli/') && name.endsWith('.png'))).toBe(
      true
    );
    expect((await pack('practice')).status).toBe(200);
    const after = await t.db('revisions').where({ task_id: w.task.id });
    expect(after.length).toBe(before.length + 1);
    expect(after.some((r) => r.hash === revisionHash(document))).toBe(true);
  }, 60_000);

  it('of another kind, or for a profile of another lab, is refused', async () => {
    expect((await get('/bundle.zip', { kind: 'collection' }, w.people.owner)).status).toBe(400);
    const other = await labWithRoles(t.db);
    const profile = await call(
      t.db,
      other.people.owner,
      'POST',
      '/labs/{lab}/profiles',
      { lab: other.lab.id },
      { body: { name: 'Theirs' } }
    );
    expect(profile.status).toBe(201);
    expect(
      (await get('/bundle.zip', { kind: 'proof', profile: profile.json.id }, w.people.owner)).status
    ).toBe(404);
  });
});
