import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { Autosave } from '../../../src/lib/editor/autosave.svelte';
import type { DocumentClient, SaveAnswer } from '../../../src/lib/editor/document-client';
import { memoryStore, type KeptStore } from '../../../src/lib/editor/kept-edits';
import { newDocument } from '../../../src/lib/task/create';
import type { TaskDocument } from '../../../src/lib/task/schema';

const base = newDocument({ title: 'Tide', label: 'tide', tr: 1_500_000, volumes: 10 });
const titled = (title: string): TaskDocument => ({ ...base, brief: { ...base.brief, title } });

/** A server of one document that obeys If-Match; `mood` makes it fail in the ways that servers fail. */
class PretendServer implements DocumentClient {
  saves: { document: TaskDocument; words: string[] }[] = [{ document: base, words: [] }];
  mood: 'well' | 'away' | 'lost-answer' | 'signed-out' | 'refusing' = 'well';
  calls = 0;
  get number() {
    return this.saves.length - 1;
  }
  async save(document: TaskDocument, words: string[], on: number): Promise<SaveAnswer> {
    this.calls++;
    if (this.mood === 'away') return { kind: 'away', reason: 'no answer from the server' };
    if (this.mood === 'signed-out') return { kind: 'signed-out' };
    if (this.mood === 'refusing') return { kind: 'refused', message: 'The label is not allowed.' };
    if (on !== this.number) return { kind: 'stale', author: 'B', savedAt: null };
    this.saves.push({ document: structuredClone(document), words });
    if (this.mood === 'lost-answer') return { kind: 'away', reason: 'no answer from the server' };
    return { kind: 'saved', saveNumber: this.number };
  }
  async load() {
    return { saveNumber: this.number, document: structuredClone(this.saves[this.number]!.document) };
  }
}

let server: PretendServer;
let store: KeptStore;
const open = (tab = 'one', saveNumber = server.number, others: string[] = []) =>
  new Autosave({
    owner: 'person:task',
    tab: async () => tab,
    isOpen: async (id) => others.includes(id),
    saveNumber,
    client: server,
    store,
    delay: 200
  });
const kept = async () => (await store.list('person:task')).map((k) => k.document.brief.title);

beforeEach(() => {
  vi.useFakeTimers();
  server = new PretendServer();
  store = memoryStore();
});
afterEach(() => vi.useRealTimers());

describe('autosave', () => {
  it('saves a burst of edits once, with all words, and keeps nothing afterwards', async () => {
    const save = open();
    save.edited(titled('a'), 'one');
    save.edited(titled('b'), 'two');
    expect(save.state.kind).toBe('saving');
    await vi.advanceTimersByTimeAsync(0);
    expect(await kept()).toEqual(['b']);
    await vi.advanceTimersByTimeAsync(300);
    expect(server.saves[1]).toEqual({ document: titled('b'), words: ['one', 'two'] });
    expect(server.calls).toBe(1);
    expect(save.saveNumber).toBe(1);
    expect(save.state.kind).toBe('saved');
    await vi.advanceTimersByTimeAsync(0);
    expect(await kept()).toEqual([]);
  });

  it('waits for a server that is away and goes out by itself when it is back', async () => {
    const save = open();
    server.mood = 'away';
    save.edited(titled('a'), 'one');
    await vi.advanceTimersByTimeAsync(5000);
    expect(save.state.kind).toBe('waiting');
    save.edited(titled('b'), 'two');
    await vi.advanceTimersByTimeAsync(100);
    expect(await kept()).toEqual(['b']);
    server.mood = 'well';
    await vi.advanceTimersByTimeAsync(20_000);
    expect(save.state.kind).toBe('saved');
    expect(server.saves.map((s) => s.document.brief.title)).toEqual(['Tide', 'b']);
  });

  it('is taken up again by the next page when the first was closed before the server came back', async () => {
    server.mood = 'away';
    const first = open();
    first.edited(titled('a'), 'one');
    await vi.advanceTimersByTimeAsync(1000);
    first.stop();
    server.mood = 'well';
    const second = open();
    const restored = await second.restore(base);
    expect(restored?.brief.title).toBe('a');
    await vi.advanceTimersByTimeAsync(100);
    expect(server.saves[1]?.document.brief.title).toBe('a');
    expect(second.state.kind).toBe('saved');
  });

  it('leaves the edits of a tab that is still open to that tab, and takes those of a closed one', async () => {
    server.mood = 'away';
    const other = open('two');
    other.edited(titled('of two'), 'x');
    await vi.advanceTimersByTimeAsync(100);
    expect(await open('one', 0, ['two']).restore(base)).toBeNull();
    const taker = open('one', 0, []);
    expect((await taker.restore(base))?.brief.title).toBe('of two');
    expect((await store.list('person:task')).map((k) => k.key)).toEqual(['person:task:one']);
  });

  it('meets a save of somebody else with a choice, keeps both, and goes on editing meanwhile', async () => {
    const a = open('one');
    const b = open('two');
    a.edited(titled('of a'), 'a');
    await vi.advanceTimersByTimeAsync(300);
    b.edited(titled('of b'), 'b');
    await vi.advanceTimersByTimeAsync(300);
    expect(b.state.kind).toBe('stale');
    expect(b.state.kind === 'stale' && b.state.theirs.document.brief.title).toBe('of a');
    b.edited(titled('of b, later'), 'c');
    await vi.advanceTimersByTimeAsync(5000);
    expect(server.number).toBe(1);
    expect(await kept()).toEqual(['of b, later']);
    await b.saveOverTheirs();
    expect(server.saves.map((s) => s.document.brief.title)).toEqual(['Tide', 'of a', 'of b, later']);
    expect(server.saves[2]?.words).toEqual(['b', 'c', 'Saved over no. 1']);
    expect(b.saveNumber).toBe(2);
  });

  it('goes on with theirs when that is chosen', async () => {
    const a = open('one');
    const b = open('two');
    a.edited(titled('of a'), 'a');
    await vi.advanceTimersByTimeAsync(300);
    b.edited(titled('of b'), 'b');
    await vi.advanceTimersByTimeAsync(300);
    expect((await b.takeTheirs())?.brief.title).toBe('of a');
    expect(b.state.kind).toBe('saved');
    b.edited(titled('of a, then b'), 'd');
    await vi.advanceTimersByTimeAsync(300);
    expect(server.number).toBe(2);
  });

  it('does not mistake its own save, whose answer was lost, for somebody else’s', async () => {
    const save = open();
    server.mood = 'lost-answer';
    save.edited(titled('a'), 'one');
    await vi.advanceTimersByTimeAsync(300);
    expect(save.state.kind).toBe('waiting');
    server.mood = 'well';
    save.edited(titled('b'), 'two');
    await vi.advanceTimersByTimeAsync(20_000);
    expect(save.state.kind).toBe('saved');
    expect(server.saves.map((s) => s.document.brief.title)).toEqual(['Tide', 'a', 'b']);
  });

  it('keeps the edit through an ended session and sends it after signing in again', async () => {
    const save = open();
    server.mood = 'signed-out';
    save.edited(titled('a'), 'one');
    await vi.advanceTimersByTimeAsync(300);
    expect(save.state.kind).toBe('signed-out');
    expect(await kept()).toEqual(['a']);
    await vi.advanceTimersByTimeAsync(60_000);
    expect(server.calls).toBe(1);
    server.mood = 'well';
    await save.retry();
    expect(save.state.kind).toBe('saved');
  });

  it('says why the server refused and keeps the edit', async () => {
    const save = open();
    server.mood = 'refusing';
    save.edited(titled('a'), 'one');
    await vi.advanceTimersByTimeAsync(300);
    expect(save.state).toEqual({ kind: 'refused', message: 'The label is not allowed.' });
    expect(await kept()).toEqual(['a']);
  });

  it('sends an edit made while a save is under way right after it, on the new number', async () => {
    const save = open();
    save.edited(titled('a'), 'one');
    let release = () => {};
    const gate = new Promise<void>((resolve) => (release = resolve));
    const plain = server.save.bind(server);
    server.save = async (...args) => {
      await gate;
      return plain(...args);
    };
    await vi.advanceTimersByTimeAsync(250);
    save.edited(titled('b'), 'two');
    release();
    await vi.advanceTimersByTimeAsync(300);
    expect(server.saves.map((s) => [s.document.brief.title, s.words])).toEqual([
      ['Tide', []],
      ['a', ['one']],
      ['b', ['two']]
    ]);
  });

  it('says so when the browser cannot keep the edit', async () => {
    store.put = async () => {
      throw new Error('full');
    };
    const save = open();
    save.edited(titled('a'), 'one');
    await vi.advanceTimersByTimeAsync(0);
    expect(save.isKept).toBe(false);
  });
});
