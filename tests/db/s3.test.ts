import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import S3rver from 's3rver';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { s3Storage } from '$lib/server/storage/s3';

const directory = mkdtempSync(join(tmpdir(), 'ebbline-s3-'));
const server = new S3rver({
  port: 0,
  address: '127.0.0.1',
  silent: true,
  directory,
  configureBuckets: [{ name: 'stimuli', configs: [] }]
});
let endpoint = '';
beforeAll(async () => {
  const { port } = await server.run();
  endpoint = `http://127.0.0.1:${port}`;
});
afterAll(async () => {
  await server.close();
  rmSync(directory, { recursive: true });
});

describe('a bucket that speaks S3', () => {
  it('gives back the very bytes of a streamed file, and null for what is not there', async () => {
    const store = s3Storage({
      endpoint,
      region: 'us-east-1',
      bucket: 'stimuli',
      accessKey: 'S3RVER',
      secretKey: 'S3RVER'
    });
    const bytes = Buffer.from(Array.from({ length: 100_000 }, (_, n) => n % 251));
    const path = join(directory, 'picture');
    writeFileSync(path, bytes);
    await store.put('lab/hash', path, bytes.length, 'image/png');
    expect(Buffer.from((await store.get('lab/hash'))!).equals(bytes)).toBe(true);
    expect(await store.get('lab/other')).toBeNull();
    // Loading the library takes seconds on a busy machine.
  }, 60_000);
});
