import JSZip from 'jszip';

/** Path → bytes of every file in a zip. */
export async function unzip(zip: Uint8Array): Promise<Record<string, Uint8Array>> {
  const read = await JSZip.loadAsync(zip, { checkCRC32: true });
  const paths = Object.keys(read.files).filter((path) => !read.files[path]!.dir);
  const entries = paths.map(async (path) => [path, await read.files[path]!.async('uint8array')] as const);
  return Object.fromEntries(await Promise.all(entries));
}

export const textOf = (files: Record<string, Uint8Array>, path: string): string => {
  const bytes = files[path];
  if (!bytes) throw new Error(`No ${path} among ${Object.keys(files).join(', ')}`);
  return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
};
