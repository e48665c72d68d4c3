/** Reads an unpacked bundle's manifest and says which files are not as they were packed. */
import { sha256Hex } from '$lib/task/canonical';
import { MANIFEST_FILE, manifestSchema, sortedPaths, type BundleManifest } from './manifest';

export type ManifestReading =
  | { ok: true; manifest: BundleManifest; missing: string[]; altered: string[]; extra: string[] }
  | { ok: false; problem: string };

/** `files`: path within the bundle → bytes. Never throws: a bundle comes from outside. */
export function checkBundle(files: Readonly<Record<string, Uint8Array>>): ManifestReading {
  const bytes = Object.hasOwn(files, MANIFEST_FILE) ? files[MANIFEST_FILE]! : null;
  if (!bytes) return { ok: false, problem: `There is no ${MANIFEST_FILE}: unpack the whole zip.` };
  let value: unknown;
  try {
    value = JSON.parse(new TextDecoder('utf-8', { fatal: true }).decode(bytes));
  } catch {
    return { ok: false, problem: `${MANIFEST_FILE} is not JSON: it was changed after packing.` };
  }
  const read = manifestSchema.safeParse(value);
  if (!read.success) {
    const [issue] = read.error.issues;
    const where = issue?.path.map(String).join('.') ?? '';
    return { ok: false, problem: `${MANIFEST_FILE} has an unexpected ${where || 'form'}: ${issue?.message}` };
  }
  const manifest = read.data;
  const listed = sortedPaths(manifest.files);
  const here = new Set(Object.keys(files));
  return {
    ok: true,
    manifest,
    missing: listed.filter((path) => !here.has(path)),
    altered: listed.filter(
      (path) => here.has(path) && sha256Hex(files[path]!) !== manifest.files[path]!.sha256
    ),
    extra: sortedPaths(files).filter((path) => path !== MANIFEST_FILE && !Object.hasOwn(manifest.files, path))
  };
}
