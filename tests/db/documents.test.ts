import { beforeAll, describe, expect, it } from 'vitest';
import { newCard, newCondition, newId } from '$lib/task/create';
import type { TaskDocument } from '$lib/task/schema';
import { currentDocument, documentAt, saveTask } from '$lib/server/services/documents';
import { call } from './support/api';
import { useDatabase } from './support/database';
import { labWithRoles } from './support/people';

const t = useDatabase();
let w: Awaited<ReturnType<typeof labWithRoles>>;
beforeAll(async () => (w = await labWithRoles(t.db)));

const PATH = '/tasks/{task}/document';
const get = async () => (await call(t.db, w.people.reader, 'GET', PATH, { task: w.task.id })).json;
const put = (document: unknown, base: number | null, words: string[] = [], by = w.people.experimenter) =>
  call(
    t.db,
    by,
    'PUT',
    PATH,
    { task: w.task.id },
    {
      headers: base === null ? {} : { 'if-match': `"${base}"` },
      body: { document, words }
    }
  );
const retitled = (d: TaskDocument, title: string): TaskDocument => ({ ...d, brief: { ...d.brief, title } });

describe('the document through the API', () => {
  it('is given whole with its save number as ETag', async () => {
    const answer = await call(t.db, w.people.reader, 'GET', PATH, { task: w.task.id });
    expect(answer.status).toBe(200);
    expect(answer.headers.get('etag')).toBe('"1"');
    expect(answer.json).toEqual({ saveNumber: 1, document: w.document });
  });

  it('is saved on its save number, with the edits in words, and comes back the same', async () => {
    const { saveNumber, document } = await get();
    const saved = await put(
      retitled(document, 'Chime, Lantern & <b>"tabs\t"</b> 🏮 مرحبا </script>'),
      saveNumber,
      ['Renamed']
    );
    expect(saved.status).toBe(200);
    expect(saved.json.saveNumber).toBe(saveNumber + 1);
    expect(saved.headers.get('etag')).toBe(`"${saveNumber + 1}"`);
    const now = await get();
    expect(now.document.brief.title).toBe('Chime, Lantern & <b>"tabs\t"</b> 🏮 مرحبا </script>');
    const row = await t
      .db('saves')
      .where({ task_id: w.task.id, number: saveNumber + 1 })
      .first();
    expect(row.words).toEqual(['Renamed']);
    expect(row.author).toBe(w.people.experimenter.id);
    // The list of tasks follows the brief.
    expect((await t.db('tasks').where({ id: w.task.id }).first()).name).toBe(now.document.brief.title);
  });

  it('keeps only the parts that are new, and every earlier save can still be read', async () => {
    const { saveNumber, document } = await get();
    const before = Number((await t.db('parts').count())[0]!.count);
    const card = newCard('Follow the chime', null);
    const first = await put({ ...document, cards: [...document.cards, card] }, saveNumber);
    expect(Number((await t.db('parts').count())[0]!.count)).toBe(before + 1);
    await put(document, first.json.saveNumber, ['Took it back']);
    expect(Number((await t.db('parts').count())[0]!.count)).toBe(before + 1);
    expect((await documentAt(t.db, w.lab.id, w.task.id, saveNumber + 1)).cards).toEqual([
      ...document.cards,
      card
    ]);
    expect((await documentAt(t.db, w.lab.id, w.task.id, saveNumber)).cards).toEqual(document.cards);
  });

  it('refuses a save on stale ground with where the task stands, and writes nothing', async () => {
    const { saveNumber, document } = await get();
    await put(retitled(document, 'By the owner'), saveNumber, ['Renamed'], w.people.owner);
    const saves = await t.db('saves').where({ task_id: w.task.id });
    const parts = await t.db('parts').select('hash');
    const stale = await put(retitled(document, 'By the experimenter'), saveNumber);
    expect(stale.status).toBe(412);
    expect(stale.json.error.code).toBe('stale');
    expect(stale.json.error.current).toMatchObject({ saveNumber: saveNumber + 1, author: 'owner' });
    expect(Date.parse(stale.json.error.current.savedAt)).toBeGreaterThan(Date.now() - 60_000);
    expect(stale.headers.get('etag')).toBe(`"${saveNumber + 1}"`);
    expect(await t.db('saves').where({ task_id: w.task.id })).toHaveLength(saves.length);
    expect(await t.db('parts').select('hash')).toHaveLength(parts.length);
    expect((await get()).document.brief.title).toBe('By the owner');
  });

  it('lets exactly one of many saves at once through', async () => {
    const { saveNumber, document } = await get();
    const answers = await Promise.all(
      Array.from({ length: 12 }, (_, n) => put(retitled(document, `Version ${n}`), saveNumber))
    );
    expect(answers.map((a) => a.status).sort()).toEqual([200, ...Array(11).fill(412)]);
    const winner = answers.findIndex((a) => a.status === 200);
    const now = await currentDocument(t.db, w.lab.id, w.task.id);
    expect(now.task.saveNumber).toBe(saveNumber + 1);
    expect(now.document.brief.title).toBe(`Version ${winner}`);
  });

  it('needs If-Match, and in the right form', async () => {
    const { document } = await get();
    expect((await put(document, null)).status).toBe(428);
    const wrong = await call(
      t.db,
      w.people.owner,
      'PUT',
      PATH,
      { task: w.task.id },
      {
        headers: { 'if-match': '*' },
        body: { document, words: [] }
      }
    );
    expect(wrong.status).toBe(400);
  });

  it('takes the document alone as well', async () => {
    const { saveNumber, document } = await get();
    const saved = await call(
      t.db,
      w.people.owner,
      'PUT',
      PATH,
      { task: w.task.id },
      {
        headers: { 'if-match': `"${saveNumber}"` },
        body: document
      }
    );
    expect(saved.status).toBe(200);
  });
});

describe('bad documents', () => {
  it.each([
    [
      'TR of 0',
      (d: TaskDocument) => ({ ...d, brief: { ...d.brief, tr: 0 } }),
      /brief\.tr: TR must be more than 0/
    ],
    ['negative TR', (d: TaskDocument) => ({ ...d, brief: { ...d.brief, tr: -1 } }), /brief\.tr/],
    ['TR as text', (d: TaskDocument) => ({ ...d, brief: { ...d.brief, tr: '2' } }), /brief\.tr/],
    ['a newer format', (d: TaskDocument) => ({ ...d, format: 99 }), /newer Ebbline/],
    ['a field of its own', (d: TaskDocument) => ({ ...d, secret: 1 }), /secret/],
    [
      'a card with an unknown condition',
      (d: TaskDocument) => ({ ...d, cards: [newCard('Lost', newId())] }),
      /names a condition that the brief does not have/
    ],
    [
      'a contrast with an unknown condition',
      (d: TaskDocument) => ({
        ...d,
        brief: { ...d.brief, contrasts: [{ id: newId(), name: 'x', weights: { [newCondition([]).id]: 1 } }] }
      }),
      /weighs a condition/
    ],
    [
      'more than 5,000 trials in a run',
      (d: TaskDocument) => {
        const card = newCard('Word', null);
        const trials = Array.from({ length: 5001 }, (_, n) => ({ id: newId(), card: card.id, onset: n }));
        return { ...d, cards: [card], runs: [{ ...d.runs[0]!, trials }] };
      },
      /at most 5,000 trials/
    ]
  ])('%s is refused, with the place and nothing saved', async (_, spoil, message) => {
    const { saveNumber, document } = await get();
    const answer = await put(spoil(document), saveNumber);
    expect(answer.status).toBe(422);
    const said = answer.json.error.details
      .map((d: { path: string; message: string }) => `${d.path}: ${d.message}`)
      .join('\n');
    expect(said + answer.json.error.message).toMatch(message);
    expect((await get()).saveNumber).toBe(saveNumber);
  });

  it('what is no JSON, of another type, or too large, is told apart', async () => {
    const send = (body: string | Uint8Array, type = 'application/json', extra = {}) =>
      call(
        t.db,
        w.people.owner,
        'PUT',
        PATH,
        { task: w.task.id },
        {
          headers: { 'if-match': '"1"', 'content-type': type, ...extra },
          body
        }
      );
    expect((await send('{"document":')).status).toBe(400);
    expect((await send(new Uint8Array([0x22, 0xff, 0x22]))).status).toBe(400);
    expect((await send('{}', 'text/plain')).status).toBe(415);
    expect((await send('[1]')).status).toBe(422);
    const large = await send(`"${'x'.repeat(16_000_001)}"`);
    expect(large.status).toBe(413);
    expect(large.json.error.message).toMatch(/16\.0 MB/);
  });

  it('refuses a picture file that is not this lab’s, naming item and card', async () => {
    const { saveNumber, document } = await get();
    const card = newCard('Lantern left', null);
    card.items[0] = {
      id: newId(),
      name: 'lantern',
      kind: 'picture',
      onset: 0,
      duration: 1_000_000,
      modelled: true,
      x: 0,
      y: 0,
      width: 4,
      height: 4,
      file: 'lantern.png',
      asset: 'a'.repeat(64)
    };
    const answer = await put({ ...document, cards: [card] }, saveNumber);
    expect(answer.status).toBe(422);
    expect(answer.json.error.message).toMatch(/Picture ‘lantern’ of card ‘Lantern left’/);
    expect(answer.json.error.details[0].path).toBe('cards.0.items.0.asset');
  });

  it('a label that another task of the study has is refused', async () => {
    const params = { study: w.study.id };
    const body = {
      label: 'localiser',
      name: 'Press localiser',
      tr: 1.5,
      volumes: 120,
      conditions: ['left', 'right']
    };
    const made = await call(t.db, w.people.owner, 'POST', '/studies/{study}/tasks', params, { body });
    expect(made.status).toBe(201);
    expect(made.json.document.brief).toMatchObject({ tr: 1_500_000, volumes: 120 });
    expect(made.json.document.brief.conditions.map((c: { name: string }) => c.name)).toEqual([
      'left',
      'right'
    ]);
    const twice = await call(t.db, w.people.owner, 'POST', '/studies/{study}/tasks', params, { body });
    expect(twice.status).toBe(409);
    const { saveNumber, document } = await get();
    const renamed = await put({ ...document, brief: { ...document.brief, label: 'localiser' } }, saveNumber);
    expect(renamed.status).toBe(409);
    expect((await get()).saveNumber).toBe(saveNumber);
  });

  it.each([
    ['NUL', 'Chime\0Lantern'],
    ['half a surrogate pair', 'Lantern \ud83c']
  ])('text with %s is refused wherever it comes', async (_, text) => {
    const { saveNumber, document } = await get();
    const inTitle = await put(retitled(document, text), saveNumber);
    const inWords = await put(document, saveNumber, [text]);
    const params = { study: w.study.id };
    const body = { label: 'broken', name: text };
    const inForm = await call(t.db, w.people.owner, 'POST', '/studies/{study}/tasks', params, { body });
    for (const answer of [inTitle, inWords, inForm]) {
      expect(answer.status).toBe(422);
      expect(answer.json.error.message).toMatch(/no text/);
    }
    expect((await get()).saveNumber).toBe(saveNumber);
  });

  it.each([0, -1, '2', null, 61])('a task with a TR of %s s is refused', async (tr) => {
    const body = { label: 'x', name: 'x', tr, volumes: 100 };
    const answer = await call(
      t.db,
      w.people.owner,
      'POST',
      '/studies/{study}/tasks',
      { study: w.study.id },
      { body }
    );
    expect(answer.status).toBe(422);
    expect(answer.json.error.details[0].path).toBe('tr');
  });
});

describe('saving by the service', () => {
  it('does not save into another lab’s task', async () => {
    const other = await labWithRoles(t.db);
    await expect(
      saveTask(t.db, {
        lab: other.lab.id,
        task: w.task.id,
        base: 1,
        document: w.document,
        words: [],
        author: other.people.owner.id
      })
    ).rejects.toMatchObject({ status: 404 });
  });
});
