/**
 * Reads a multipart body part by part as it arrives (RFC 7578), so that a file goes to disk without being held in
 * memory. Only what forms and `FormData` send is understood; anything else is refused as malformed.
 */
import { refuse } from '../errors';

export interface Part {
  name: string;
  /** The file's name, or null for a plain field. */
  filename: string | null;
  /** The part's bytes; must be read to the end before the next part is asked for. */
  chunks: AsyncIterable<Buffer>;
}

const MAX_HEADERS = 16_384;
const broken = (): never =>
  refuse(400, 'The upload is not a well-formed form. Send it as multipart/form-data.');

export async function* readParts(request: Request): AsyncGenerator<Part> {
  const boundary = /boundary=(?:"([^"]{1,70})"|([^\s;]{1,70}))/i.exec(
    request.headers.get('content-type') ?? ''
  );
  if (!boundary || !request.body) return broken();
  const source = new Source(request.body.getReader());
  const mark = Buffer.from(`\r\n--${boundary[1] ?? boundary[2]}`);
  // The first mark has no line break before it.
  source.unread(Buffer.from('\r\n'));
  for await (const _ of source.until(mark)) if (_.length > 2) broken();
  for (;;) {
    const next = await source.take(2);
    if (next.toString('latin1') === '--') return;
    if (next.toString('latin1') !== '\r\n') return broken();
    const header = await headersOf(source);
    const chunks = source.until(mark);
    yield { ...header, chunks };
    // What the reader left is skipped.
    for await (const _ of chunks);
  }
}

async function headersOf(source: Source): Promise<{ name: string; filename: string | null }> {
  const lines: Buffer[] = [];
  let length = 0;
  source.unread(Buffer.from('\r\n'));
  for await (const chunk of source.until(Buffer.from('\r\n\r\n'))) {
    length += chunk.length;
    if (length > MAX_HEADERS) return broken();
    lines.push(chunk);
  }
  const text = Buffer.concat(lines).toString('utf8');
  const disposition = /^content-disposition:\s*form-data;(.*)$/im.exec(text)?.[1] ?? broken();
  const value = (key: string) => {
    const found = new RegExp(`(?:^|;)\\s*${key}="((?:[^"\\\\]|\\\\.)*)"`, 'i').exec(disposition);
    // Browsers write a quote in a name as %22.
    return found ? found[1]!.replaceAll('%22', '"').replace(/\\(.)/g, '$1') : null;
  };
  return { name: value('name') ?? broken(), filename: value('filename') };
}

/** Bytes with a little memory, read up to a mark. */
class Source {
  private held: Buffer = Buffer.alloc(0);
  constructor(private readonly reader: ReadableStreamDefaultReader<Uint8Array>) {}

  unread(bytes: Buffer): void {
    this.held = Buffer.concat([bytes, this.held]);
  }
  private async more(): Promise<void> {
    const { done, value } = await this.reader.read();
    if (done) return broken();
    this.held = this.held.length ? Buffer.concat([this.held, value]) : Buffer.from(value);
  }
  async take(count: number): Promise<Buffer> {
    while (this.held.length < count) await this.more();
    const taken = this.held.subarray(0, count);
    this.held = this.held.subarray(count);
    return taken;
  }
  /** Everything before the mark, which is taken off; ends at once when it was read before. */
  async *until(mark: Buffer): AsyncGenerator<Buffer> {
    for (;;) {
      const at = this.held.indexOf(mark);
      if (at >= 0) {
        const last = this.held.subarray(0, at);
        this.held = this.held.subarray(at + mark.length);
        if (last.length) yield last;
        return;
      }
      // The mark may be cut in two: keep what could be its beginning.
      const safe = this.held.length - mark.length + 1;
      if (safe > 0) {
        const chunk = this.held.subarray(0, safe);
        this.held = this.held.subarray(safe);
        yield chunk;
      }
      await this.more();
    }
  }
}
