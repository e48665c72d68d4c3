import { copyFile, mkdir, readFile, rename, rm } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import type { Storage } from './types';

export function folderStorage(folder: string): Storage {
  return {
    async put(key, path) {
      const target = join(folder, key);
      await mkdir(dirname(target), { recursive: true, mode: 0o700 });
      // Copy, then rename: under its own name there is a whole file or none.
      const half = `${target}.${crypto.randomUUID()}.part`;
      try {
        await copyFile(path, half);
        await rename(half, target);
      } catch (thrown) {
        await rm(half, { force: true });
        throw thrown;
      }
    },
    async get(key) {
      try {
        return await readFile(join(folder, key));
      } catch (thrown) {
        if ((thrown as NodeJS.ErrnoException).code === 'ENOENT') return null;
        throw thrown;
      }
    }
  };
}
