/** Packs a task in Node and unpacks it into a folder, as an operator would on the stimulus computer. */
import JSZip from 'jszip';
import { mkdirSync, mkdtempSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join, relative } from 'node:path';
import { pathToFileURL } from 'node:url';
import { packBundle } from '../../../src/lib/bundle/pack';
import type { PackInput } from '../../../src/lib/bundle/types';
import { sampleInput, type SampleOptions } from '../../fixtures/sample-bundle';
import { playerScript } from './player-script';

export interface BundleFolder {
  folder: string;
  /** `file://…/index.html` */
  address: string;
  files(): Record<string, Uint8Array>;
  remove(): void;
}

export async function unpackBundle(zip: Uint8Array): Promise<BundleFolder> {
  const folder = mkdtempSync(join(tmpdir(), 'ebbline-bundle-'));
  const read = await JSZip.loadAsync(zip, { checkCRC32: true });
  for (const entry of Object.values(read.files)) {
    if (entry.dir) continue;
    const path = join(folder, entry.name);
    mkdirSync(dirname(path), { recursive: true });
    writeFileSync(path, await entry.async('uint8array'));
  }
  return {
    folder,
    address: pathToFileURL(join(folder, 'index.html')).href,
    files: () =>
      Object.fromEntries(
        readdirSync(folder, { recursive: true, withFileTypes: true })
          .filter((entry) => entry.isFile())
          .map((entry) => join(entry.parentPath, entry.name))
          .map((path) => [relative(folder, path), new Uint8Array(readFileSync(path))])
      ),
    remove: () => rmSync(folder, { recursive: true, force: true })
  };
}

/** The sample task with the real player, unpacked. */
export async function sampleFolder(options: SampleOptions = {}, changes: Partial<PackInput> = {}) {
  const input = sampleInput(await playerScript(), options, changes);
  return { input, ...(await unpackBundle(await packBundle(input))) };
}
