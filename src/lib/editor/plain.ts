/**
 * Sets and maps that are made once and then only read. They are held raw and replaced as a whole, like the document, so
 * they need no reactive counterpart; making them here says so.
 */
export const idSet = (ids: Iterable<string> = []): ReadonlySet<string> => new Set(ids);

export const mapOf = <K, V>(entries: Iterable<readonly [K, V]> = []): ReadonlyMap<K, V> => new Map(entries);

export function toggled(ids: ReadonlySet<string>, id: string): ReadonlySet<string> {
  const next = new Set(ids);
  if (!next.delete(id)) next.add(id);
  return next;
}

export const withEntry = <K, V>(map: ReadonlyMap<K, V>, key: K, value: V): ReadonlyMap<K, V> =>
  new Map(map).set(key, value);

/** How often each key occurs. */
export function tally<K>(keys: Iterable<K>): ReadonlyMap<K, number> {
  const counts = new Map<K, number>();
  for (const key of keys) counts.set(key, (counts.get(key) ?? 0) + 1);
  return counts;
}
