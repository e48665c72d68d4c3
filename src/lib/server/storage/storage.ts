/** Where stimulus files lie: a folder, or a bucket that speaks S3. Keys are `lab/sha256`, written once. */
import { config } from '../config';
import { folderStorage } from './folder';
import type { Storage } from './types';

let current: Promise<Storage> | null = null;
export const storage = (): Promise<Storage> => (current ??= openStorage());

async function openStorage(): Promise<Storage> {
  const chosen = config().storage;
  if (chosen.kind === 'folder') return folderStorage(chosen.folder);
  // Its library is large; only who uses it loads it.
  return (await import('./s3')).s3Storage(chosen);
}

export const assetKey = (labId: string, sha256: string) => `${labId}/${sha256}`;
