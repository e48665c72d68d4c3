import { createReadStream } from 'node:fs';
import { GetObjectCommand, NoSuchKey, PutObjectCommand, S3Client } from '@aws-sdk/client-s3';
import type { Storage } from './types';

export interface S3Settings {
  endpoint?: string | undefined;
  region: string;
  bucket: string;
  accessKey: string;
  secretKey: string;
}

export function s3Storage({ endpoint, region, bucket, accessKey, secretKey }: S3Settings): Storage {
  const client = new S3Client({
    region,
    ...(endpoint && { endpoint, forcePathStyle: true }),
    credentials: { accessKeyId: accessKey, secretAccessKey: secretKey },
    // Else a stream is sent in a framing that stores other than Amazon's may keep as part of the file.
    requestChecksumCalculation: 'WHEN_REQUIRED',
    responseChecksumValidation: 'WHEN_REQUIRED'
  });
  return {
    async put(key, path, size, mime) {
      await client.send(
        new PutObjectCommand({
          Bucket: bucket,
          Key: key,
          Body: createReadStream(path),
          ContentLength: size,
          ContentType: mime
        })
      );
    },
    async get(key) {
      try {
        const { Body } = await client.send(new GetObjectCommand({ Bucket: bucket, Key: key }));
        return Body ? await Body.transformToByteArray() : null;
      } catch (thrown) {
        if (thrown instanceof NoSuchKey) return null;
        throw thrown;
      }
    }
  };
}
