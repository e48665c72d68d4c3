/**
 * Keeps every run in IndexedDB until the operator says its files are safe. All pages opened from disk share one
 * store, so everything is keyed by study and bundle. Pulse, key and response lines go in at once with strict
 * durability; items and dropped frames wait at most half a second.
 */
import { isUrgent } from '../log';
import type { LogEnding } from '../log';
import type { LogEntry, LogHeader } from '../log-lines';

const NAME = 'ebbline-player';
const BATCH = 400;

export interface StoredAttempt {
  /** `study bundle number`. */
  key: string;
  /** Study label and hash of the bundle's payload. */
  bundle: string;
  header: LogHeader;
  /** Null: it never came to its end. */
  ending: LogEnding | null;
  /** The operator has said that its files are safe. */
  safe: boolean;
}

const done = (transaction: IDBTransaction): Promise<void> =>
  new Promise((ok, fail) => {
    transaction.oncomplete = () => ok();
    transaction.onerror = () => fail(transaction.error);
    transaction.onabort = () => fail(transaction.error);
  });
const answer = <T>(request: IDBRequest<T>): Promise<T> =>
  new Promise((ok, fail) => {
    request.onsuccess = () => ok(request.result);
    request.onerror = () => fail(request.error);
  });

const rangeOf = (key: string) => IDBKeyRange.bound([key, -Infinity], [key, Infinity]);

export class RunStore {
  readonly #db: IDBDatabase;
  readonly bundle: string;
  /** Set when a write failed: the run goes on in memory and the operator is told at its end. */
  failed: string | null = null;
  #waiting: { key: string; entry: LogEntry }[] = [];
  #timer: ReturnType<typeof setTimeout> | null = null;

  private constructor(db: IDBDatabase, bundle: string) {
    this.#db = db;
    this.bundle = bundle;
  }

  /** Rejects where the browser keeps nothing. */
  static async open(bundle: string): Promise<RunStore> {
    const request = indexedDB.open(NAME, 1);
    request.onupgradeneeded = () => {
      request.result.createObjectStore('attempts', { keyPath: 'key' }).createIndex('bundle', 'bundle');
      request.result.createObjectStore('entries', { keyPath: ['key', 'entry.seq'] });
    };
    return new RunStore(await answer(request), bundle);
  }

  /** Every attempt of this bundle; none where they cannot be read, which `failed` then says. */
  async attempts(): Promise<StoredAttempt[]> {
    try {
      const transaction = this.#db.transaction('attempts');
      return await answer(transaction.objectStore('attempts').index('bundle').getAll(this.bundle));
    } catch (problem) {
      this.failed = problem instanceof Error ? problem.message : String(problem);
      return [];
    }
  }

  /** Begins an attempt; its key is for `add` and `end`. */
  async begin(header: LogHeader): Promise<string> {
    const key = `${this.bundle} ${crypto.randomUUID()}`;
    await this.#put({ key, bundle: this.bundle, header, ending: null, safe: false });
    return key;
  }
  async end(key: string, ending: LogEnding): Promise<void> {
    await this.#flush();
    await this.#change(key, (attempt) => ({ ...attempt, ending }));
  }
  async markSafe(key: string): Promise<void> {
    await this.#change(key, (attempt) => ({ ...attempt, safe: true }));
  }

  /** Forgets an attempt that was disarmed before it began. */
  async drop(key: string): Promise<void> {
    await this.#flush();
    const transaction = this.#db.transaction(['attempts', 'entries'], 'readwrite');
    transaction.objectStore('attempts').delete(key);
    transaction.objectStore('entries').delete(rangeOf(key));
    await done(transaction);
  }

  /** Keeps an entry; returns at once. */
  add(key: string, entry: LogEntry): void {
    this.#waiting.push({ key, entry });
    if (isUrgent(entry)) void this.#flush();
    else this.#timer ??= setTimeout(() => void this.#flush(), BATCH);
  }

  async entries(key: string): Promise<LogEntry[]> {
    const rows = await answer<{ entry: LogEntry }[]>(
      this.#db.transaction('entries').objectStore('entries').getAll(rangeOf(key))
    );
    return rows.map((row) => row.entry).sort((a, b) => a.seq - b.seq);
  }

  async #flush(): Promise<void> {
    if (this.#timer !== null) clearTimeout(this.#timer);
    this.#timer = null;
    if (!this.#waiting.length) return;
    const batch = this.#waiting;
    this.#waiting = [];
    try {
      const transaction = this.#db.transaction('entries', 'readwrite', { durability: 'strict' });
      const store = transaction.objectStore('entries');
      for (const row of batch) store.put(row);
      await done(transaction);
    } catch (problem) {
      this.failed = problem instanceof Error ? problem.message : String(problem);
    }
  }
  async #put(attempt: StoredAttempt): Promise<void> {
    const transaction = this.#db.transaction('attempts', 'readwrite', { durability: 'strict' });
    transaction.objectStore('attempts').put(attempt);
    await done(transaction);
  }
  async #change(key: string, change: (attempt: StoredAttempt) => StoredAttempt): Promise<void> {
    const attempt = await answer<StoredAttempt | undefined>(
      this.#db.transaction('attempts').objectStore('attempts').get(key)
    );
    if (attempt) await this.#put(change(attempt));
  }
}

/** Bytes free for this page, where the browser tells. */
export async function freeStorage(): Promise<number | null> {
  try {
    const { quota, usage } = await navigator.storage.estimate();
    return quota === undefined ? null : quota - (usage ?? 0);
  } catch {
    return null;
  }
}
