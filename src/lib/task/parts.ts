/**
 * Storage by part: the brief, each card, each list and each run are kept once under the hash of their canonical
 * JSON. A save is a manifest of those hashes, so that an edit stores only what it changed.
 */
import { z } from 'zod';
import { canonicalJson, sha256Hex } from './canonical';
import { FORMAT, type TaskDocument } from './schema';

const hash = z.string().regex(/^[0-9a-f]{64}$/);
const listed = z.array(z.strictObject({ id: z.string(), hash }));
export const manifestSchema = z.strictObject({
  format: z.literal(FORMAT),
  brief: hash,
  cards: listed,
  lists: listed,
  runs: listed
});
export type Manifest = z.infer<typeof manifestSchema>;
/** Canonical JSON by its hash. */
export type Parts = Record<string, string>;

export function splitDocument(document: TaskDocument): { manifest: Manifest; parts: Parts } {
  const parts: Parts = {};
  const keep = (value: unknown) => {
    const json = canonicalJson(value);
    const key = sha256Hex(json);
    parts[key] = json;
    return key;
  };
  const keepAll = (values: { id: string }[]) => values.map((v) => ({ id: v.id, hash: keep(v) }));
  const manifest: Manifest = {
    format: document.format,
    brief: keep(document.brief),
    cards: keepAll(document.cards),
    lists: keepAll(document.lists),
    runs: keepAll(document.runs)
  };
  return { manifest, parts };
}

/** The document again; throws when a part of the manifest is not among the given parts. */
export function joinDocument(manifest: Manifest, parts: Parts): unknown {
  const take = (key: string): unknown => {
    const json = parts[key];
    if (json === undefined) throw new Error(`Part ${key} of the document is missing from the store.`);
    return JSON.parse(json);
  };
  return {
    format: manifest.format,
    brief: take(manifest.brief),
    cards: manifest.cards.map((c) => take(c.hash)),
    lists: manifest.lists.map((l) => take(l.hash)),
    runs: manifest.runs.map((r) => take(r.hash))
  };
}

/** Every hash that a manifest names. */
export const hashesOf = (m: Manifest): string[] => [
  m.brief,
  ...[...m.cards, ...m.lists, ...m.runs].map((p) => p.hash)
];
