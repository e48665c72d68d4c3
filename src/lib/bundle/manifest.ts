/** MANIFEST.json: what the bundle is, and the SHA-256 of every other file in it. */
import { z } from 'zod';
import { BUNDLE_KINDS } from '$lib/player/payload';
import { sha256Hex } from '$lib/task/canonical';
import type { PackInput } from './types';

export const MANIFEST_FORMAT = 1;
export const MANIFEST_FILE = 'MANIFEST.json';
export const CHECKSUMS_FILE = 'checksums.sha256';

const sha256 = z.string().regex(/^[0-9a-f]{64}$/, 'a SHA-256 in hex');

export const manifestSchema = z.strictObject({
  format: z.literal(MANIFEST_FORMAT),
  kind: z.enum(BUNDLE_KINDS),
  lab: z.string(),
  study: z.strictObject({ label: z.string(), name: z.string() }),
  task: z.strictObject({ label: z.string(), title: z.string() }),
  /** Content hash of the task with its assets. */
  revision: sha256,
  saveNumber: z.number().int().nullable(),
  profile: z.strictObject({ name: z.string(), hash: sha256 }),
  /** SHA-256 of the player's script. */
  player: sha256,
  madeAt: z.iso.datetime(),
  files: z.record(z.string(), z.strictObject({ bytes: z.number().int().min(0), sha256 }))
});
export type BundleManifest = z.infer<typeof manifestSchema>;

export const sortedPaths = (files: Readonly<Record<string, unknown>>): string[] => Object.keys(files).sort();

export function makeManifest(input: PackInput, files: Readonly<Record<string, Uint8Array>>): BundleManifest {
  const { brief } = input.document;
  return {
    format: MANIFEST_FORMAT,
    kind: input.kind,
    lab: input.lab,
    study: { label: input.study.label, name: input.study.name },
    task: { label: brief.label, title: brief.title },
    revision: input.revision,
    saveNumber: input.saveNumber,
    profile: { name: input.profile.name, hash: input.profileHash },
    player: input.playerBuild,
    madeAt: input.madeAt,
    files: Object.fromEntries(
      sortedPaths(files).map((path) => {
        const bytes = files[path]!;
        return [path, { bytes: bytes.length, sha256: sha256Hex(bytes) }];
      })
    )
  };
}

/** The same sums as lines that `sha256sum -c` reads. */
export const checksumsText = (files: Readonly<Record<string, Uint8Array>>): string =>
  sortedPaths(files)
    .map((path) => `${sha256Hex(files[path]!)}  ${path}\n`)
    .join('');
