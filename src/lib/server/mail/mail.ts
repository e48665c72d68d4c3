/**
 * Mail by SMTP, or, where none is configured, as files in the data folder that a person can read.
 * A mail that cannot be sent never undoes what it tells about: the failure is logged.
 */
import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import nodemailer from 'nodemailer';
import { config } from '../config';

export interface Mail {
  to: string;
  subject: string;
  text: string;
}

export async function sendMail(
  mail: Mail,
  { url, from, folder }: { url: string | null; from: string; folder: string } = config().mail
): Promise<boolean> {
  try {
    if (url) {
      const transport = nodemailer.createTransport(url);
      await transport.sendMail({ from, ...mail });
      transport.close();
    } else {
      const transport = nodemailer.createTransport({ streamTransport: true, buffer: true });
      const { message } = await transport.sendMail({ from, ...mail });
      await mkdir(folder, { recursive: true });
      await writeFile(join(folder, `${Date.now()}-${crypto.randomUUID()}.eml`), message as Buffer, {
        mode: 0o600
      });
    }
    return true;
  } catch (thrown) {
    console.error(
      `Mail ‘${mail.subject}’ could not be sent: ${thrown instanceof Error ? thrown.message : thrown}`
    );
    return false;
  }
}
