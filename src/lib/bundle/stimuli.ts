/** Which stimulus files go in, under what name, inline or beside the page. */
import type { PayloadAsset } from '$lib/player/payload';
import { sha256Hex } from '$lib/task/canonical';
import { assetsOf, type StimFiles } from '$lib/task/events';
import type { TaskDocument } from '$lib/task/schema';
import { toBase64 } from './base64';
import { stimulusName, uniqueName } from './names';
import { PackError, type PackAsset } from './types';

/** Up to here a file stands inside the page, bytes. */
export const INLINE_EACH = 512 * 1024;
/** All files inside the page together, bytes: the page must open at once. */
export const INLINE_TOTAL = 8 * 1024 * 1024;
/** All stimuli of a bundle, bytes: they must fit into the memory of a stimulus computer, decoded. */
export const STIMULI_TOTAL = 100 * 1024 * 1024;

export interface PackedStimuli {
  /** For the payload, by SHA-256. */
  assets: Record<string, PayloadAsset>;
  /** Name under `stimuli/` by SHA-256. */
  names: StimFiles;
  /** Path → content. */
  files: Record<string, Uint8Array | string>;
}

const megabytes = (bytes: number) => `${(bytes / 1024 / 1024).toFixed(1)} MB`;

/** The stimuli that the document shows, each once, in order of hash; files that it does not show stay out. */
export function packStimuli(document: TaskDocument, given: readonly PackAsset[]): PackedStimuli {
  const byHash = new Map(given.map((asset) => [asset.sha256, asset]));
  const used = new Map(assetsOf(document).map((use) => [use.sha256, use]));
  const total = [...used.keys()].reduce((sum, sha256) => sum + (byHash.get(sha256)?.bytes.length ?? 0), 0);
  if (total > STIMULI_TOTAL)
    throw new PackError(
      `The stimuli are ${megabytes(total)} together, and a bundle holds at most ${megabytes(STIMULI_TOTAL)}: make the pictures smaller or split the task.`
    );
  const packed: PackedStimuli = { assets: {}, names: {}, files: {} };
  const taken = new Set<string>();
  let inline = 0;
  for (const sha256 of [...used.keys()].sort()) {
    const use = used.get(sha256)!;
    const asset = byHash.get(sha256);
    const what = `The file ‘${use.file}’ of item ‘${use.item}’ on card ‘${use.card}’`;
    if (!asset)
      throw new PackError(`${what} is not in the lab's store: upload it again, or take the item away.`);
    if (sha256Hex(asset.bytes) !== sha256)
      throw new PackError(`${what} has other bytes than when it was chosen: upload it again.`);
    const file = uniqueName(stimulusName(asset.file, asset.mime, sha256), taken);
    packed.names[sha256] = file;
    packed.files[`stimuli/${file}`] = asset.bytes;
    const data = toBase64(asset.bytes);
    if (asset.bytes.length <= INLINE_EACH && inline + asset.bytes.length <= INLINE_TOTAL) {
      inline += asset.bytes.length;
      packed.assets[sha256] = { mime: asset.mime, file, data };
    } else {
      const script = `data/${sha256}.js`;
      packed.files[script] = `(window.EBBLINE_DATA??={})["${sha256}"]="${data}";\n`;
      packed.assets[sha256] = { mime: asset.mime, file, script };
    }
  }
  return packed;
}
