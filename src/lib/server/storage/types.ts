export interface Storage {
  /** Take over a finished file; the same key may come again with the same bytes. */
  put(key: string, path: string, size: number, mime: string): Promise<void>;
  /** The bytes, or null when there is no such file. */
  get(key: string): Promise<Uint8Array | null>;
}
