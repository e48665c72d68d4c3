/** Passwords by argon2id with 19 MiB, two passes, one lane: the first choice of OWASP's password storage cheat sheet. */
import { hash, verify } from '@node-rs/argon2';
import { z } from 'zod';

const options = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };

export const hashPassword = (password: string) => hash(password, options);

/** False for a wrong password and for an account that does not exist; both take the same time. */
export async function isPassword(stored: string | null, password: string): Promise<boolean> {
  decoy ??= hashPassword('no account has this password');
  const right = await verify(stored ?? (await decoy), password, options);
  return stored !== null && right;
}
let decoy: Promise<string> | null = null;

export const passwordSchema = z
  .string()
  .min(10, 'a password of at least 10 characters')
  .max(200, 'a password of at most 200 characters');
export const emailSchema = z
  .string()
  .trim()
  .toLowerCase()
  .max(254, 'at most 254 characters')
  .pipe(z.email('an e-mail address such as name@example.org'));
