import { createHash } from 'node:crypto';
import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { newCard, newItem } from '$lib/task/create';
import { config } from '$lib/server/config';
import { saveTask } from '$lib/server/services/documents';
import { call } from './support/api';
import { useDatabase } from './support/database';
import { labWithRoles } from './support/people';
import { form, gif, jpeg, png, webp } from './support/pictures';

const t = useDatabase();
let w: Awaited<ReturnType<typeof labWithRoles>>;
let other: Awaited<ReturnType<typeof labWithRoles>>;
beforeAll(async () => {
  w = await labWithRoles(t.db);
  other = await labWithRoles(t.db);
});

const upload = (body: FormData, lab = w) =>
  call(t.db, lab.people.experimenter, 'POST', '/labs/{lab}/assets', { lab: lab.lab.id }, { body });
const fetchAsset = (sha: string, lab = w, headers = {}) =>
  call(t.db, lab.people.reader, 'GET', '/labs/{lab}/assets/{sha}', { lab: lab.lab.id, sha }, { headers });
const hashOf = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex');

describe('uploading a picture', () => {
  it.each([
    ['PNG', png(), 'image/png'],
    ['GIF', gif(), 'image/gif'],
    ['JPEG', jpeg(), 'image/jpeg'],
    ['WebP', webp(), 'image/webp']
  ])(
    '%s is known by its content and given back byte for byte, as nothing but a picture',
    async (_, bytes, mime) => {
      const made = await upload(
        form(bytes, 'named-wrongly.txt', { note: 'drawn by the lab', redistributable: 'true' })
      );
      expect(made.status).toBe(201);
      expect(made.json).toEqual({
        sha256: hashOf(bytes),
        mime,
        size: bytes.length,
        name: 'named-wrongly.txt',
        note: 'drawn by the lab',
        redistributable: true
      });
      const got = await fetchAsset(made.json.sha256);
      expect(Buffer.from(got.bytes).equals(bytes)).toBe(true);
      expect(got.headers.get('content-type')).toBe(mime);
      expect(got.headers.get('x-content-type-options')).toBe('nosniff');
      expect(got.headers.get('content-security-policy')).toMatch(/sandbox/);
      expect(
        (await fetchAsset(made.json.sha256, w, { 'if-none-match': `"${made.json.sha256}"` })).status
      ).toBe(304);
    }
  );

  it('keeps the same bytes once per lab, under the first name', async () => {
    const bytes = png(3);
    await upload(form(bytes, 'first.png'));
    const again = await upload(form(bytes, 'second.png'));
    expect(again.status).toBe(201);
    expect(again.json.name).toBe('first.png');
    expect(await t.db('assets').where({ sha256: hashOf(bytes) })).toHaveLength(1);
  });

  it('keeps a name that is strange, without its folders', async () => {
    const made = await upload(form(png(4), '../../etc/Latérne "🏮" مصباح </script>.png'));
    expect(made.json.name).toBe('script>.png');
    const plain = await upload(form(png(5), 'Latérne "🏮" مصباح.png'));
    expect(plain.json.name).toBe('Latérne "🏮" مصباح.png');
  });

  it('takes a large picture whole, however it is cut into pieces', async () => {
    const bytes = Buffer.concat([png(), Buffer.alloc(3_000_000, '\r\n--')]);
    const whole = await new Response(form(bytes)).arrayBuffer();
    const type = new TextDecoder('latin1').decode(whole.slice(0, 100)).split('\r\n')[0]!.slice(2);
    const pieces = new ReadableStream<Uint8Array>({
      start(control) {
        for (let at = 0; at < whole.byteLength; at += 4093)
          control.enqueue(new Uint8Array(whole.slice(at, at + 4093)));
        control.close();
      }
    });
    const made = await call(
      t.db,
      w.people.owner,
      'POST',
      '/labs/{lab}/assets',
      { lab: w.lab.id },
      {
        body: pieces,
        headers: { 'content-type': `multipart/form-data; boundary=${type}` }
      }
    );
    expect(made.status).toBe(201);
    expect(made.json.sha256).toBe(hashOf(bytes));
  });
});

describe('what is refused', () => {
  const svg = '<svg xmlns="http://www.w3.org/2000/svg"><script>alert(1)</script></svg>';
  it.each([
    [
      'an SVG with a script',
      Buffer.from(svg),
      'lantern.png',
      415,
      /SVG is refused, because it can hold scripts/
    ],
    [
      'an SVG behind an XML line',
      Buffer.from(`<?xml version="1.0"?>\n<!-- x -->${svg}`),
      'a.svg',
      415,
      /SVG is refused/
    ],
    ['an SVG in UTF-16', Buffer.from('\ufeff' + svg, 'utf16le'), 'a.svg', 415, /SVG is refused/],
    ['a page', Buffer.from('<html><script>alert(1)</script></html>'), 'a.png', 415, /no picture/],
    ['a program', Buffer.from('MZ\x90\0'), 'a.png', 415, /no picture/],
    ['an empty file', Buffer.alloc(0), 'a.png', 415, /The file is empty/],
    [
      'a file over the limit',
      Buffer.concat([png(), Buffer.alloc(20_000_000)]),
      'a.png',
      413,
      /The file of 20\.0 MB .* 20\.0 MB/
    ]
  ])('%s', async (_, bytes, name, status, message) => {
    const count = async () => (await t.db('assets').where({ lab_id: w.lab.id })).length;
    const before = await count();
    const answer = await upload(form(bytes, name));
    expect(answer.status).toBe(status);
    expect(answer.json.error.message).toMatch(message);
    expect(await count()).toBe(before);
    expect(readdirSync(config().uploadFolder)).toEqual([]);
  });

  it('a form without a file, a body that is no form, and one cut off', async () => {
    const none = new FormData();
    none.append('note', 'x');
    expect((await upload(none)).status).toBe(422);
    const raw = (body: string, type = 'multipart/form-data; boundary=abc') =>
      call(
        t.db,
        w.people.owner,
        'POST',
        '/labs/{lab}/assets',
        { lab: w.lab.id },
        { body, headers: { 'content-type': type } }
      );
    expect((await raw('hello')).status).toBe(400);
    expect(
      (await raw('--abc\r\nContent-Disposition: form-data; name="file"; filename="a.png"\r\n\r\n\x89PNG'))
        .status
    ).toBe(400);
    expect((await raw('--abc--', 'multipart/form-data')).status).toBe(400);
    expect((await raw('{}', 'application/json')).status).toBe(415);
    expect(readdirSync(config().uploadFolder)).toEqual([]);
  });
});

describe('files and labs', () => {
  it('a file of one lab is not there for another, by address or in a document', async () => {
    const { json: asset } = await upload(form(png(7)));
    expect((await fetchAsset(asset.sha256, other)).status).toBe(404);
    const outside = await call(t.db, other.people.owner, 'GET', '/labs/{lab}/assets/{sha}', {
      lab: w.lab.id,
      sha: asset.sha256
    });
    expect(outside.status).toBe(404);
    const card = newCard('Lantern', null);
    const item = newItem('picture');
    card.items = [{ ...item, asset: asset.sha256 } as typeof item];
    const save = (lab: typeof w) =>
      saveTask(t.db, {
        lab: lab.lab.id,
        task: lab.task.id,
        base: 1,
        words: [],
        author: lab.people.owner.id,
        document: { ...lab.document, cards: [card] }
      });
    await expect(save(other)).rejects.toMatchObject({
      status: 422,
      body: { details: [{ path: 'cards.0.items.0.asset' }] }
    });
    expect((await save(w)).saveNumber).toBe(2);
    // The other lab uploads the same bytes for itself, and then may use them.
    await upload(form(png(7)), other);
    expect((await save(other)).saveNumber).toBe(2);
  });

  it('lie in a folder of their lab', async () => {
    const { json } = await upload(form(png(8)));
    const { storage } = config();
    expect(storage.kind === 'folder' && existsSync(join(storage.folder, w.lab.id, json.sha256))).toBe(true);
  });
});
