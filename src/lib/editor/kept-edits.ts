/**
 * Edits that the server has not taken yet, kept in the browser so that they outlive a lost network, a lost session
 * and a reload. One record per person, task and tab: two tabs never overwrite each other's.
 */
import type { TaskDocument } from '$lib/task/schema';

export interface KeptEdits {
  /** `person:task:tab` */
  key: string;
  /** `person:task` */
  owner: string;
  /** The save number that the document was built on. */
  base: number;
  document: TaskDocument;
  words: string[];
  /** ms since 1970 */
  at: number;
}

export interface KeptStore {
  put(kept: KeptEdits): Promise<void>;
  remove(key: string): Promise<void>;
  /** All records of one person and task, the newest first. */
  list(owner: string): Promise<KeptEdits[]>;
}

/** For tests, and where the browser gives no storage (a private window): kept as long as the page is open. */
export function memoryStore(): KeptStore {
  const records = new Map<string, KeptEdits>();
  return {
    put: async (kept) => void records.set(kept.key, kept),
    remove: async (key) => void records.delete(key),
    list: async (owner) => [...records.values()].filter((k) => k.owner === owner).sort((a, b) => b.at - a.at)
  };
}

const NAME = 'ebbline-kept-edits';
const STORE = 'kept';

const done = <T>(request: IDBRequest<T>): Promise<T> =>
  new Promise((resolve, reject) => {
    request.onsuccess = () => resolve(request.result);
    request.onerror = () => reject(request.error ?? new Error('the browser storage gave no reason'));
  });

function open(): Promise<IDBDatabase> {
  const request = indexedDB.open(NAME, 1);
  request.onupgradeneeded = () => {
    request.result.createObjectStore(STORE, { keyPath: 'key' }).createIndex('owner', 'owner');
  };
  return done(request);
}

/** Kept in IndexedDB, which has been seen to keep every acknowledged record through a killed browser. */
export function browserStore(): KeptStore {
  if (typeof indexedDB === 'undefined') return memoryStore();
  let opened: Promise<IDBDatabase> | null = null;
  const run = async <T>(mode: IDBTransactionMode, act: (s: IDBObjectStore) => IDBRequest<T>): Promise<T> => {
    opened ??= open();
    const transaction = (await opened).transaction(STORE, mode);
    const ended = new Promise<void>((resolve, reject) => {
      transaction.oncomplete = () => resolve();
      transaction.onabort = () => reject(transaction.error ?? new Error('the browser storage is full'));
    });
    const result = await done(act(transaction.objectStore(STORE)));
    await ended;
    return result;
  };
  return {
    put: async (kept) => void (await run('readwrite', (s) => s.put(kept))),
    remove: async (key) => void (await run('readwrite', (s) => s.delete(key))),
    list: async (owner) => {
      const all = (await run('readonly', (s) => s.index('owner').getAll(owner))) as KeptEdits[];
      return all.sort((a, b) => b.at - a.at);
    }
  };
}
