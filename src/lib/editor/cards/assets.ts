import { call, type Answer } from '../forms/client';

export const assetUrl = (lab: string, sha256: string): string => `/api/v1/labs/${lab}/assets/${sha256}`;

export interface UploadedAsset {
  sha256: string;
  mime: string;
  bytes: number;
  file: string;
}

/** Sends one stimulus file; the server looks at its content and size and says plainly what it refuses. */
export async function uploadPicture(lab: string, file: File): Promise<Answer<UploadedAsset>> {
  if (file.size === 0) {
    return {
      ok: false,
      status: 422,
      message: `‘${file.name}’ is empty (0 bytes); choose a PNG, JPEG, GIF or WebP file.`
    };
  }
  const body = new FormData();
  body.set('file', file);
  return call<UploadedAsset>(`/api/v1/labs/${lab}/assets`, {
    method: 'POST',
    body,
    headers: { accept: 'application/json' }
  });
}

/** Height that keeps a picture's shape at a given width, degrees; null where the browser cannot read it. */
export async function heightFor(file: File, width: number): Promise<number | null> {
  try {
    const bitmap = await createImageBitmap(file);
    const height = (width * bitmap.height) / bitmap.width;
    bitmap.close();
    return Number(Math.min(120, Math.max(0.01, height)).toFixed(3));
  } catch {
    return null;
  }
}
