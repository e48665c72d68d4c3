import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { SMTPServer } from 'smtp-server';
import { describe, expect, it } from 'vitest';
import { parseConfig } from '$lib/server/config';
import { sendMail } from '$lib/server/mail/mail';
import { useDatabase } from './support/database';
import { config } from '$lib/server/config';

useDatabase();
const mail = { to: 'ada@marram.example', subject: 'Your run', text: 'Chimes at noon.' };

describe('mail', () => {
  it('is written to a folder where no server is configured', async () => {
    expect(await sendMail(mail)).toBe(true);
    const { folder } = config().mail;
    const [name] = readdirSync(folder);
    const text = readFileSync(join(folder, name!), 'utf8');
    expect(text).toMatch(/^To: ada@marram\.example\r?$/m);
    expect(text).toContain('Chimes at noon.');
  });

  it('goes to an SMTP server where one is, and says when it could not', async () => {
    let received = '';
    const server = new SMTPServer({
      authOptional: true,
      disabledCommands: ['STARTTLS'],
      onData(stream, _session, done) {
        stream.on('data', (chunk: Buffer) => (received += chunk.toString()));
        stream.on('end', done);
      }
    });
    await new Promise<void>((ready) => server.listen(0, '127.0.0.1', ready));
    const { port } = server.server.address() as { port: number };
    const settings = { url: `smtp://127.0.0.1:${port}`, from: 'lab@marram.example', folder: '' };
    expect(await sendMail(mail, settings)).toBe(true);
    expect(received).toContain('Subject: Your run');
    await new Promise<void>((closed) => server.close(closed));
    expect(await sendMail(mail, settings)).toBe(false);
  });
});

describe('configuration', () => {
  it('names what is missing or wrong', () => {
    expect(() => parseConfig({})).toThrow(/DATABASE_URL/);
    expect(() => parseConfig({ DATABASE_URL: 'postgres://x', UPLOAD_LIMIT_MB: 'big' })).toThrow(
      /UPLOAD_LIMIT_MB/
    );
    expect(() => parseConfig({ DATABASE_URL: 'postgres://x', STORAGE: 's3' })).toThrow(/S3_BUCKET/);
  });
  it('marks the cookie secure by the origin, and knows loopback', () => {
    const at = (ORIGIN: string, HOST = '127.0.0.1') =>
      parseConfig({ DATABASE_URL: 'postgres://x', ORIGIN, HOST });
    expect(at('https://ebbline.marram.example').secureCookie).toBe(true);
    expect(at('http://127.0.0.1:3000')).toMatchObject({ secureCookie: false, loopback: true });
    expect(at('https://ebbline.marram.example').loopback).toBe(false);
    expect(at('http://localhost:3000', '0.0.0.0').loopback).toBe(false);
  });
});
