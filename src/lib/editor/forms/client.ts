/** Calls of the app's own API from its pages: an answer, or one sentence that can be shown as it is. */
export type Answer<T> = { ok: true; value: T } | { ok: false; status: number; message: string };

interface ErrorBody {
  error?: { message?: string; details?: { path?: string; message?: string }[] };
}

/** What a failed answer says, in the server's own words where it has some. */
export function failureWords(status: number, body: unknown): string {
  const error = (body as ErrorBody | null)?.error;
  if (error?.message) {
    const details = (error.details ?? [])
      .slice(0, 3)
      .map((d) => (d.path ? `${d.path}: ${d.message}` : d.message))
      .filter(Boolean);
    return [error.message, ...details].join(' ');
  }
  if (status === 401) return 'You are signed out. Sign in again in another tab, then try once more.';
  if (status === 413) return 'The file is larger than this Ebbline takes. Choose a smaller one.';
  return `The server answered ${status}. Try again; if it stays so, tell whoever runs this Ebbline.`;
}

export async function call<T>(path: string, init?: RequestInit, fetcher = fetch): Promise<Answer<T>> {
  let response: Response;
  try {
    response = await fetcher(path, { headers: { accept: 'application/json' }, ...init });
  } catch {
    return {
      ok: false,
      status: 0,
      message:
        'The server cannot be reached. Your edits are kept here; try again when the connection is back.'
    };
  }
  const body: unknown = await response.json().catch(() => null);
  if (!response.ok)
    return { ok: false, status: response.status, message: failureWords(response.status, body) };
  return { ok: true, value: body as T };
}

export const sendJson = (
  method: 'POST' | 'PUT',
  body: unknown,
  headers: Record<string, string> = {}
): RequestInit => ({
  method,
  headers: { accept: 'application/json', 'content-type': 'application/json', ...headers },
  body: JSON.stringify(body)
});
