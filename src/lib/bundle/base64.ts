/** Base64 (RFC 4648, padded) without DOM or Node, so that Pack runs anywhere. */
const SIGNS = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/';
const CODES = Uint8Array.from(SIGNS, (sign) => sign.charCodeAt(0));
const PAD = '='.charCodeAt(0);

export function toBase64(bytes: Uint8Array): string {
  const out = new Uint8Array(Math.ceil(bytes.length / 3) * 4);
  for (let from = 0, to = 0; from < bytes.length; from += 3, to += 4) {
    const [a, b, c] = [bytes[from]!, bytes[from + 1], bytes[from + 2]];
    out[to] = CODES[a >> 2]!;
    out[to + 1] = CODES[((a & 3) << 4) | ((b ?? 0) >> 4)]!;
    out[to + 2] = b === undefined ? PAD : CODES[((b & 15) << 2) | ((c ?? 0) >> 6)]!;
    out[to + 3] = c === undefined ? PAD : CODES[c & 63]!;
  }
  return new TextDecoder('latin1').decode(out);
}

/** The same for a SHA-256 given in hex, as content security policies name a script: `sha256-…`. */
export const sha256Source = (hex: string): string =>
  `'sha256-${toBase64(Uint8Array.from(hex.match(/../g) ?? [], (pair) => parseInt(pair, 16)))}'`;
