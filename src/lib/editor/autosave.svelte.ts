/**
 * Autosave: every edit is kept in the browser at once and sent to the server soon after. Nothing is dropped before
 * the server has said its save number: not when the network, the session or the server goes, not on a reload, and
 * not when somebody else has saved in between (then the person chooses).
 */
import { canonicalJson } from '$lib/task/canonical';
import type { TaskDocument } from '$lib/task/schema';
import { cut } from '$lib/task/text';
import type { DocumentClient } from './document-client';
import type { KeptStore } from './kept-edits';

/** The newer save that lies between, as far as is known of it. */
export interface Theirs {
  saveNumber: number;
  document: TaskDocument;
  author: string | null;
  savedAt: string | null;
}

export type SaveState =
  | { kind: 'saved' }
  | { kind: 'saving' }
  /** The server cannot be reached; tried again by itself. */
  | { kind: 'waiting'; reason: string }
  /** Somebody else's save lies between; waits for a choice. */
  | { kind: 'stale'; theirs: Theirs }
  | { kind: 'signed-out' }
  | { kind: 'refused'; message: string };

export interface AutosaveOptions {
  /** `person:task` */
  owner: string;
  tab: () => Promise<string>;
  isOpen: (tab: string) => Promise<boolean>;
  saveNumber: number;
  client: DocumentClient;
  store: KeptStore;
  /** ms between an edit and its save, so that a burst of key presses is one save. */
  delay?: number;
}

const RETRIES = [1000, 2000, 4000, 8000, 15_000];
/** The server takes so many words of a save; of a longer list the newest are told. */
const MOST_WORDS = 400;
const LONGEST_WORDS = 500;
const same = (a: TaskDocument, b: TaskDocument): boolean => a === b || canonicalJson(a) === canonicalJson(b);

export class Autosave {
  state = $state.raw<SaveState>({ kind: 'saved' });
  /** Number of the newest save that this page's document is built on. */
  saveNumber = $state(0);
  /** False where the browser could not keep the unsaved edits. */
  isKept = $state(true);

  #options: AutosaveOptions;
  #pending: { document: TaskDocument; words: string[] } | null = null;
  /** Sent without an answer: the server may have saved it. */
  #uncertain: TaskDocument | null = null;
  #isSending = false;
  #timer: ReturnType<typeof setTimeout> | null = null;
  #attempt = 0;
  #writing: Promise<void> = Promise.resolve();

  constructor(options: AutosaveOptions) {
    this.#options = options;
    this.saveNumber = options.saveNumber;
  }

  get hasUnsaved(): boolean {
    return this.#pending !== null;
  }

  /** Called after every edit, undo and redo. */
  edited(document: TaskDocument, words: string): void {
    const before = this.#pending?.words ?? [];
    this.#pending = { document, words: [...before, cut(words, LONGEST_WORDS)].slice(-MOST_WORDS) };
    void this.#keep();
    if (this.state.kind === 'stale' || this.state.kind === 'signed-out') return;
    if (this.state.kind !== 'waiting') this.state = { kind: 'saving' };
    this.#later(this.#options.delay ?? 250);
  }

  /** Send what waits now: on the person's wish, when the network is back, when the page is hidden. */
  async retry(): Promise<void> {
    if (this.state.kind === 'stale') return;
    this.#clearTimer();
    await this.#send();
  }

  /**
   * Edits of this person that an earlier page left behind. Returns the document to go on with, or null where there
   * is none. When somebody has saved since, the state becomes stale, so that the person chooses.
   */
  async restore(current: TaskDocument): Promise<TaskDocument | null> {
    const { store, owner, tab, isOpen } = this.#options;
    const own = `${owner}:${await tab()}`;
    for (const kept of await store.list(owner).catch(() => [])) {
      const other = kept.key !== own;
      if (other && (await isOpen(kept.key.slice(owner.length + 1)))) continue;
      if (same(kept.document, current)) {
        await store.remove(kept.key);
        continue;
      }
      // The person was quicker than the browser's storage: the older record stays for the next visit.
      if (this.#pending) return null;
      this.#pending = { document: kept.document, words: kept.words };
      if (other) {
        await this.#keep();
        await store.remove(kept.key);
      }
      if (kept.base === this.saveNumber) {
        this.state = { kind: 'saving' };
        this.#later(0);
      } else
        this.state = {
          kind: 'stale',
          theirs: { saveNumber: this.saveNumber, document: current, author: null, savedAt: null }
        };
      return kept.document;
    }
    return null;
  }

  /** The choice to go on with the other person's save. Returns it; what was mine is let go. */
  async takeTheirs(): Promise<TaskDocument | null> {
    if (this.state.kind !== 'stale') return null;
    const { theirs } = this.state;
    this.saveNumber = theirs.saveNumber;
    this.#pending = null;
    this.#uncertain = null;
    this.state = { kind: 'saved' };
    await this.#keep();
    return theirs.document;
  }

  /** The choice to save mine as the next number; theirs stays in the history under its own. */
  async saveOverTheirs(): Promise<void> {
    if (this.state.kind !== 'stale' || !this.#pending) return;
    const { theirs } = this.state;
    this.saveNumber = theirs.saveNumber;
    this.#pending.words = [...this.#pending.words, `Saved over no. ${theirs.saveNumber}`];
    this.state = { kind: 'saving' };
    await this.#keep();
    await this.#send();
  }

  stop(): void {
    this.#clearTimer();
    if (this.#pending && this.state.kind !== 'stale') void this.#send();
  }

  #later(delay: number): void {
    this.#clearTimer();
    this.#timer = setTimeout(() => void this.#send(), delay);
  }

  #clearTimer(): void {
    if (this.#timer !== null) clearTimeout(this.#timer);
    this.#timer = null;
  }

  /** Write what waits to the browser, one after the other, the newest last. */
  #keep(): Promise<void> {
    const { store, owner, tab } = this.#options;
    this.#writing = this.#writing.then(async () => {
      try {
        const key = `${owner}:${await tab()}`;
        const pending = this.#pending;
        if (pending) await store.put({ key, owner, base: this.saveNumber, at: Date.now(), ...pending });
        else await store.remove(key);
        this.isKept = true;
      } catch {
        this.isKept = false;
      }
    });
    return this.#writing;
  }

  async #send(): Promise<void> {
    const pending = this.#pending;
    if (this.#isSending || !pending) return;
    this.#isSending = true;
    const { document, words } = pending;
    if (this.state.kind !== 'waiting') this.state = { kind: 'saving' };
    const answer = await this.#options.client.save(document, words, this.saveNumber);
    const met = answer.kind === 'stale' ? await this.#meetStale(document, answer) : answer;
    this.#isSending = false;

    switch (met.kind) {
      case 'saved':
        return this.#saved(met.saveNumber, document, words.length);
      case 'again':
        this.saveNumber = met.saveNumber;
        this.#uncertain = null;
        return this.#send();
      case 'away': {
        this.#uncertain = document;
        this.state = { kind: 'waiting', reason: met.reason };
        const wait = RETRIES[Math.min(this.#attempt++, RETRIES.length - 1)] ?? 15_000;
        return this.#later(wait);
      }
      case 'signed-out':
        this.state = { kind: 'signed-out' };
        return;
      case 'refused':
        this.state = { kind: 'refused', message: met.message };
        return;
      case 'chosen':
        this.state = { kind: 'stale', theirs: met.theirs };
    }
  }

  #saved(saveNumber: number, document: TaskDocument, told: number): void {
    this.saveNumber = saveNumber;
    this.#attempt = 0;
    this.#uncertain = null;
    if (this.#pending?.document === document) {
      this.#pending = null;
      this.state = { kind: 'saved' };
      void this.#keep();
      return;
    }
    // Edited while the save was under way: the rest goes out now, built on the new number.
    if (this.#pending) this.#pending.words = this.#pending.words.slice(told);
    this.state = { kind: 'saving' };
    void this.#keep();
    this.#later(0);
  }

  /**
   * A newer save lies on the server. It may be ours, where an answer was lost on the way: then it is no clash.
   */
  async #meetStale(
    document: TaskDocument,
    { author, savedAt }: Pick<Theirs, 'author' | 'savedAt'>
  ): Promise<
    | { kind: 'saved' | 'again'; saveNumber: number }
    | { kind: 'chosen'; theirs: Theirs }
    | { kind: 'away'; reason: string }
    | { kind: 'signed-out' }
    | { kind: 'refused'; message: string }
  > {
    try {
      const theirs = await this.#options.client.load();
      if (same(theirs.document, document)) return { kind: 'saved', saveNumber: theirs.saveNumber };
      if (this.#uncertain && same(theirs.document, this.#uncertain))
        return { kind: 'again', saveNumber: theirs.saveNumber };
      return { kind: 'chosen', theirs: { ...theirs, author, savedAt } };
    } catch (error) {
      return {
        kind: 'away',
        reason: error instanceof Error ? error.message : 'the newer save could not be read'
      };
    }
  }
}
