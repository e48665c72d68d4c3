/** Reading request bodies with a cap, so that nothing large is held in memory unasked. */
import { refuse, refuseLarge } from '../errors';

/** The media type of a request, without its parameters. */
export const mediaOf = (request: Request): string =>
  (request.headers.get('content-type') ?? '').split(';')[0]!.trim().toLowerCase();

export function needMedia(request: Request, allowed: readonly string[]): void {
  const media = mediaOf(request);
  if (!allowed.includes(media))
    refuse(
      415,
      `The body is ‘${media || 'of no stated type'}’; send it with Content-Type: ${allowed.join(' or ')}.`
    );
}

/** All bytes of the body, or 413 as soon as there are more than `cap`. */
export async function readBytes(request: Request, cap: number): Promise<Uint8Array> {
  const declared = Number(request.headers.get('content-length') ?? 0);
  if (declared > cap) refuseLarge(cap, 'A body', declared);
  const chunks: Uint8Array[] = [];
  let length = 0;
  const reader = request.body?.getReader();
  while (reader) {
    const { done, value } = await reader.read();
    if (done) break;
    length += value.length;
    if (length > cap) {
      await reader.cancel();
      refuseLarge(cap, 'The body');
    }
    chunks.push(value);
  }
  return Buffer.concat(chunks);
}

export async function readJson(request: Request, cap: number): Promise<unknown> {
  needMedia(request, ['application/json']);
  const bytes = await readBytes(request, cap);
  try {
    return JSON.parse(new TextDecoder('utf-8', { fatal: true }).decode(bytes));
  } catch {
    return refuse(400, 'The body is not JSON in UTF-8. Check it for a missing quote, comma or brace.');
  }
}
