/** Stimulus files: taken in through a cap, told by content, kept once per lab under their SHA-256. */
import { createHash } from 'node:crypto';
import { mkdir, open, rm } from 'node:fs/promises';
import { join } from 'node:path';
import type { Knex } from 'knex';
import { config } from '../config';
import { assets } from '../db/repositories/assets';
import type { Asset } from '../db/rows';
import { notFound, refuse, refuseLarge } from '../errors';
import { readParts, type Part } from '../storage/multipart';
import { HEAD, pictureType } from '../storage/picture-type';
import { assetKey, storage } from '../storage/storage';

interface Received {
  sha256: string;
  size: number;
  head: Buffer;
}

/** So much beyond the cap is still taken off the line unkept, since a browser reads the refusal only after sending. */
const PATIENCE = 5;

/** Stream to `path`, hashing on the way; 413 when there are more than `cap` bytes. */
async function receive(chunks: AsyncIterable<Buffer>, path: string, cap: number): Promise<Received> {
  const hash = createHash('sha256');
  let size = 0;
  let head = Buffer.alloc(0);
  const target = await open(path, 'w', 0o600);
  try {
    for await (const chunk of chunks) {
      size += chunk.length;
      if (size > cap * PATIENCE) break;
      if (size > cap) continue;
      hash.update(chunk);
      if (head.length < HEAD) head = Buffer.concat([head, chunk.subarray(0, HEAD - head.length)]);
      await target.write(chunk);
    }
  } finally {
    await target.close();
  }
  if (size > cap) refuseLarge(cap, 'The file', size);
  return { sha256: hash.digest('hex'), size, head };
}

async function text(part: Part, cap: number): Promise<string> {
  const chunks: Buffer[] = [];
  let size = 0;
  for await (const chunk of part.chunks) {
    size += chunk.length;
    if (size > cap) refuseLarge(cap, `The field ‘${part.name}’`);
    chunks.push(chunk);
  }
  return Buffer.concat(chunks).toString('utf8');
}

/** The file's own name, without folders and control characters, at most 200 characters. */
const plainName = (name: string) =>
  name
    .replace(/^.*[/\\]/, '')
    .replace(/\p{Cc}/gu, '')
    .slice(-200)
    // Half a character at the cut is no text.
    .replace(/^[\uDC00-\uDFFF]/, '') || 'picture';

/**
 * Take in one picture from a multipart form: field `file`, and optionally `note` and `redistributable` before it.
 * The same bytes again give the file that is there already.
 */
export async function uploadPicture(
  db: Knex,
  labId: string,
  author: string,
  request: Request
): Promise<Asset> {
  const { uploadLimit, uploadFolder } = config();
  const declared = Number(request.headers.get('content-length') ?? 0);
  if (declared > uploadLimit * PATIENCE) refuseLarge(uploadLimit, 'The file', declared);
  await mkdir(uploadFolder, { recursive: true, mode: 0o700 });
  const path = join(uploadFolder, crypto.randomUUID());
  const fields: Record<string, string> = {};
  let found: (Received & { name: string }) | null = null;
  try {
    for await (const part of readParts(request)) {
      if (part.filename !== null && part.name === 'file' && !found)
        found = { name: plainName(part.filename), ...(await receive(part.chunks, path, uploadLimit)) };
      else if (part.filename === null) fields[part.name] = await text(part, 4000);
      else refuse(422, 'One file at a time, in the field ‘file’.');
    }
    if (!found)
      return refuse(422, 'There is no file in the upload. Choose a picture and send it in the field ‘file’.');
    const type = pictureType(found.head);
    if ('refused' in type)
      return refuse(415, type.refused, { details: [{ path: 'file', message: type.refused }] });
    const { sha256, size, name } = found;
    await (await storage()).put(assetKey(labId, sha256), path, size, type.mime);
    const asset: Asset = {
      sha256,
      mime: type.mime,
      size,
      name,
      note: fields.note ?? '',
      redistributable: fields.redistributable === 'true'
    };
    return await assets(db).keep(labId, asset, author);
  } finally {
    await rm(path, { force: true });
  }
}

export async function readAsset(
  db: Knex,
  labId: string,
  sha256: string
): Promise<Asset & { bytes: Uint8Array }> {
  const asset = (await assets(db).find(labId, sha256)) ?? notFound('stimulus file');
  const bytes = await (await storage()).get(assetKey(labId, sha256));
  if (!bytes) throw new Error(`The file ${sha256} of lab ${labId} is in the database, but not in storage.`);
  return { ...asset, bytes };
}

export const listAssets = (db: Knex, labId: string) => assets(db).list(labId);
