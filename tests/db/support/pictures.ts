/** Smallest pictures of each kind, made here. */
import { deflateSync, crc32 } from 'node:zlib';

function chunk(type: string, data: Buffer): Buffer {
  const body = Buffer.concat([Buffer.from(type, 'latin1'), data]);
  const out = Buffer.alloc(body.length + 8);
  out.writeUInt32BE(data.length, 0);
  body.copy(out, 4);
  out.writeUInt32BE(crc32(body), body.length + 4);
  return out;
}

/** A PNG of one colour, `size` pixels a side. */
export function png(size = 2, grey = 128): Buffer {
  const header = Buffer.alloc(13);
  header.writeUInt32BE(size, 0);
  header.writeUInt32BE(size, 4);
  header[8] = 8;
  const rows = Buffer.concat(Array.from({ length: size }, () => Buffer.from([0, ...Array(size).fill(grey)])));
  return Buffer.concat([
    Buffer.from('\x89PNG\r\n\x1a\n', 'latin1'),
    chunk('IHDR', header),
    chunk('IDAT', deflateSync(rows)),
    chunk('IEND', Buffer.alloc(0))
  ]);
}
export const gif = () => Buffer.from('R0lGODlhAQABAIAAAP///wAAACwAAAAAAQABAAACAkQBADs=', 'base64');
export const jpeg = () => Buffer.from([0xff, 0xd8, 0xff, 0xe0, 0, 16, ...Buffer.from('JFIF\0'), 0xff, 0xd9]);
export const webp = () =>
  Buffer.from('RIFF\x1a\0\0\0WEBPVP8L\r\0\0\0/\0\0\0\x10\x07\x10\x11\x11\x88\x88\xfe\x07\0', 'latin1');

/** A form as a browser sends it. */
export function form(bytes: Uint8Array, name = 'lantern.png', fields: Record<string, string> = {}): FormData {
  const data = new FormData();
  for (const [key, value] of Object.entries(fields)) data.append(key, value);
  data.append('file', new File([new Uint8Array(bytes)], name));
  return data;
}
