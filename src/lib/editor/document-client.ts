/** The two calls that the editor makes to the server: read a task's document and save it. */
import type { TaskDocument } from '$lib/task/schema';

export type SaveAnswer =
  | { kind: 'saved'; saveNumber: number }
  /** Somebody saved in between; who and when, where the server says it. */
  | { kind: 'stale'; author: string | null; savedAt: string | null }
  | { kind: 'away'; reason: string }
  | { kind: 'signed-out' }
  | { kind: 'refused'; message: string };

export interface DocumentClient {
  save(document: TaskDocument, words: string[], base: number): Promise<SaveAnswer>;
  /** Throws where the server gives no document. */
  load(): Promise<{ saveNumber: number; document: TaskDocument }>;
}

interface ErrorBody {
  error?: {
    message?: string;
    details?: { path?: string; message?: string }[];
    current?: { author?: string | null; savedAt?: string };
  };
}

const body = async (response: Response): Promise<unknown> => {
  try {
    return await response.json();
  } catch {
    return null;
  }
};
/** Save numbers travel as entity tags: `"12"`. */
const tagNumber = (response: Response): number | null => {
  const tag = /(\d+)/.exec(response.headers.get('etag') ?? '');
  return tag ? Number(tag[1]) : null;
};
const numberIn = (value: unknown): number | null => {
  const n = (value as { saveNumber?: unknown } | null)?.saveNumber;
  return typeof n === 'number' ? n : null;
};

/** One sentence of what the server said, with the place of the first detail. */
export function refusal(status: number, answer: unknown): string {
  const { error } = (answer ?? {}) as ErrorBody;
  const detail = error?.details?.[0];
  const where = detail ? ` (${[detail.path, detail.message].filter(Boolean).join(': ')})` : '';
  return error?.message ? `${error.message}${where}` : `The server refused the save with status ${status}.`;
}

const HEADERS = { 'content-type': 'application/json', accept: 'application/json' };

export function httpClient(task: string, request: typeof fetch = (...a) => fetch(...a)): DocumentClient {
  const url = `/api/v1/tasks/${task}/document`;
  return {
    async save(document, words, base) {
      let response: Response;
      try {
        response = await request(url, {
          method: 'PUT',
          headers: { ...HEADERS, 'if-match': `"${base}"` },
          body: JSON.stringify({ document, words })
        });
      } catch {
        return { kind: 'away', reason: 'no answer from the server' };
      }
      const { status } = response;
      const answer = await body(response);
      if (response.ok) {
        const saveNumber = tagNumber(response) ?? numberIn(answer);
        return saveNumber === null
          ? { kind: 'away', reason: 'the answer was not complete' }
          : { kind: 'saved', saveNumber };
      }
      if (status === 412) {
        const current = (answer as ErrorBody | null)?.error?.current;
        return { kind: 'stale', author: current?.author ?? null, savedAt: current?.savedAt ?? null };
      }
      if (status === 401) return { kind: 'signed-out' };
      if (status >= 500 || status === 429 || status === 408)
        return { kind: 'away', reason: `the server answered with status ${status}` };
      return { kind: 'refused', message: refusal(status, answer) };
    },
    async load() {
      const response = await request(url, { headers: { accept: 'application/json' } });
      const answer = await body(response);
      if (!response.ok) throw new Error(refusal(response.status, answer));
      const saveNumber = tagNumber(response) ?? numberIn(answer);
      const wrapped = (answer as { document?: TaskDocument } | null)?.document;
      const document = wrapped ?? (answer as TaskDocument | null);
      if (saveNumber === null || !document) throw new Error('The server gave no document.');
      return { saveNumber, document };
    }
  };
}
