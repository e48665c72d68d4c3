/**
 * A name for this tab that survives a reload but is not shared: a duplicated tab copies `sessionStorage`, so the name
 * is also held as a lock, and a tab that cannot get the lock takes a new name.
 */
import { newId } from '$lib/task/create';

const KEY = 'ebbline-tab';
const lockName = (id: string): string => `ebbline-tab-${id}`;

/** Take a lock for as long as the page lives; false where another page has it. */
function hold(name: string): Promise<boolean> {
  return new Promise((resolve) => {
    void navigator.locks.request(name, { ifAvailable: true }, (lock) => {
      resolve(lock !== null);
      // A lock is held until its callback's promise ends: never, so until the page goes.
      return lock ? new Promise<void>(() => {}) : undefined;
    });
  });
}

let claimed: Promise<string> | null = null;

export function tabId(): Promise<string> {
  claimed ??= claim();
  return claimed;
}

async function claim(): Promise<string> {
  const before = read();
  // Browsers give locks to secure pages only; without them the name alone must do.
  const locks = 'locks' in navigator;
  if (before && (!locks || (await hold(lockName(before))))) return before;
  const id = newId();
  if (locks) await hold(lockName(id));
  try {
    sessionStorage.setItem(KEY, id);
  } catch {
    // No storage: the name lives as long as the page.
  }
  return id;
}

function read(): string | null {
  try {
    return sessionStorage.getItem(KEY);
  } catch {
    return null;
  }
}

/** Whether a tab of that name is open now. */
export async function tabIsOpen(id: string): Promise<boolean> {
  if (!('locks' in navigator)) return false;
  const { held } = await navigator.locks.query();
  return (held ?? []).some((lock) => lock.name === lockName(id));
}
