/**
 * Canonical JSON and its hash: the same document gives the same bytes and the same hash everywhere.
 * Canonical form after RFC 8785: keys sorted by UTF-16 code units, no white space, numbers as ECMAScript prints them.
 */
import { sha256 } from '@noble/hashes/sha2';
import { bytesToHex, utf8ToBytes } from '@noble/hashes/utils';

/** Canonical JSON of plain data; keys whose value is undefined are left out. Throws on NaN, infinities and functions. */
export function canonicalJson(value: unknown): string {
  if (value === null || typeof value === 'boolean' || typeof value === 'string') return JSON.stringify(value);
  if (typeof value === 'number') {
    if (!Number.isFinite(value))
      throw new TypeError(`Canonical JSON holds finite numbers only, not ${value}.`);
    return JSON.stringify(value);
  }
  if (Array.isArray(value)) return `[${value.map((v) => canonicalJson(v ?? null)).join(',')}]`;
  if (typeof value === 'object') {
    const entries = Object.entries(value).filter(([, v]) => v !== undefined);
    // Array.prototype.sort compares strings by UTF-16 code units, as the RFC asks.
    entries.sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
    return `{${entries.map(([k, v]) => `${JSON.stringify(k)}:${canonicalJson(v)}`).join(',')}}`;
  }
  throw new TypeError(`Canonical JSON holds plain data only, not a ${typeof value}.`);
}

/** SHA-256 (FIPS 180-4) of text in UTF-8 or of bytes, as 64 hex digits. */
export function sha256Hex(data: string | Uint8Array): string {
  return bytesToHex(sha256(typeof data === 'string' ? utf8ToBytes(data) : data));
}

/** Hash of a value's canonical JSON. */
export const hashOf = (value: unknown): string => sha256Hex(canonicalJson(value));
