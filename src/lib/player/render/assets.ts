/** Files of the bundle → pictures ready to draw. Each file is hashed before it is used. */
import { sha256Hex } from '$lib/task/canonical';
import type { PayloadAsset } from '../payload';

export function bytesOf(base64: string): Uint8Array<ArrayBuffer> {
  const text = atob(base64);
  const bytes = new Uint8Array(text.length);
  for (let i = 0; i < text.length; i++) bytes[i] = text.charCodeAt(i);
  return bytes;
}

declare global {
  interface Window {
    /** Filled by the sibling scripts of a bundle with large files: base64 by SHA-256. */
    EBBLINE_DATA?: Record<string, string>;
  }
}

async function dataOf(sha256: string, asset: PayloadAsset): Promise<string> {
  if ('data' in asset) return asset.data;
  if (window.EBBLINE_DATA?.[sha256] === undefined) await loadScript(asset.script);
  const data = window.EBBLINE_DATA?.[sha256];
  if (data === undefined)
    throw new Error(`${asset.script} holds no data for ${asset.file}: unpack the bundle again.`);
  return data;
}

const loadScript = (path: string): Promise<void> =>
  new Promise((done, fail) => {
    const script = document.createElement('script');
    script.src = path;
    script.addEventListener('load', () => done());
    script.addEventListener('error', () =>
      fail(new Error(`${path} is missing beside index.html: unpack the whole bundle again.`))
    );
    document.head.append(script);
  });

/** Decodes the pictures named by `wanted`. Rejects with a sentence for the operator when one is missing or altered. */
export async function loadPictures(
  wanted: readonly string[],
  assets: Record<string, PayloadAsset>
): Promise<Map<string, ImageBitmap>> {
  const pictures = new Map<string, ImageBitmap>();
  for (const sha256 of wanted) {
    const asset = Object.hasOwn(assets, sha256) ? assets[sha256] : undefined;
    if (!asset) throw new Error(`The bundle lacks the picture ${sha256.slice(0, 8)}…: pack it again.`);
    const bytes = bytesOf(await dataOf(sha256, asset));
    if (sha256Hex(bytes) !== sha256)
      throw new Error(`${asset.file} is not the file that was packed: unpack or copy the bundle again.`);
    pictures.set(sha256, await createImageBitmap(new Blob([bytes], { type: asset.mime })));
  }
  return pictures;
}
