/** What a file is, by its first bytes; its name and declared type are not asked. */
const ascii = (bytes: Uint8Array, from: number, to: number) =>
  String.fromCharCode(...bytes.subarray(from, to));

/** Bytes needed to tell. */
export const HEAD = 1024;

export type PictureType =
  { mime: 'image/png' | 'image/jpeg' | 'image/gif' | 'image/webp' } | { refused: string };

export function pictureType(head: Uint8Array): PictureType {
  if (ascii(head, 0, 8) === '\x89PNG\r\n\x1a\n') return { mime: 'image/png' };
  if (head[0] === 0xff && head[1] === 0xd8 && head[2] === 0xff) return { mime: 'image/jpeg' };
  if (/^GIF8[79]a$/.test(ascii(head, 0, 6))) return { mime: 'image/gif' };
  if (ascii(head, 0, 4) === 'RIFF' && ascii(head, 8, 12) === 'WEBP') return { mime: 'image/webp' };
  const accepted = 'Pictures may be PNG, JPEG, GIF or WebP.';
  if (head.length === 0) return { refused: `The file is empty. ${accepted}` };
  const text = new TextDecoder().decode(head).replaceAll('\0', '');
  if (/<svg[\s>]/i.test(text) || /^\s*<\?xml/i.test(text.replace(/^\ufeff/, '')))
    return {
      refused: `SVG is refused, because it can hold scripts and looks different from one browser to another. Save it as PNG. ${accepted}`
    };
  return {
    refused: `This is no picture that can be shown: its first bytes are of none of the known kinds. ${accepted}`
  };
}
