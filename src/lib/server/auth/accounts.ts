/** Sign-up, sign-in, sign-out, change of password. Sessions are made here, cookies are set by the caller. */
import type { Knex } from 'knex';
import type { Cookies } from '@sveltejs/kit';
import { z } from 'zod';
import { toUser, type User, type UserRow } from '../db/rows';
import { accept, isTaken, refuse } from '../errors';
import { sendMail } from '../mail/mail';
import { countAttempt, forgetAttempts } from './limits';
import { sessionsOf } from './lucia';
import { emailSchema, hashPassword, isPassword, passwordSchema } from './password';

export const signUpSchema = z.object({
  name: z.string().trim().min(1, 'your name, as your lab should see it').max(120, 'at most 120 characters'),
  email: emailSchema,
  password: passwordSchema
});
export const signInSchema = z.object({
  email: emailSchema,
  password: z.string().min(1, 'your password').max(200)
});

export async function signUp(db: Knex, account: z.infer<typeof signUpSchema>): Promise<User> {
  const { email, name, password } = accept(signUpSchema, account);
  try {
    const rows = await db<UserRow>('users')
      .insert({ email, name, password_hash: await hashPassword(password) })
      .returning(['id', 'email', 'name']);
    return toUser(rows[0]!);
  } catch (thrown) {
    if (isTaken(thrown, 'users_email_unique'))
      refuse(409, `There is an account for ${email} already. Sign in, or use another address.`, {
        details: [{ path: 'email', message: 'has an account already' }]
      });
    throw thrown;
  }
}

/** The account, or a refusal that does not tell a wrong password from an unknown address. */
export async function signIn(
  db: Knex,
  given: z.infer<typeof signInSchema>,
  /** Network address of the caller. */
  address: string
): Promise<User> {
  const { email, password } = accept(signInSchema, given);
  await countAttempt(db, email, address);
  const row = await db<UserRow>('users').where({ email }).first();
  if (!(await isPassword(row?.password_hash ?? null, password)))
    refuse(401, 'E-mail address and password do not belong together. Check both and try again.');
  await forgetAttempts(db, email);
  return toUser(row!);
}

/** Start a session and set its cookie; what runs later in the same request sees it in `locals`. */
export async function startSession(
  event: { locals: App.Locals; cookies: Cookies },
  user: User
): Promise<void> {
  const sessions = sessionsOf(event.locals.db);
  const session = await sessions.createSession(user.id, {});
  setCookie(event.cookies, sessions.createSessionCookie(session.id));
  event.locals.session = session;
  event.locals.user = user;
}

export async function endSession(event: { locals: App.Locals; cookies: Cookies }): Promise<void> {
  const sessions = sessionsOf(event.locals.db);
  if (event.locals.session) await sessions.invalidateSession(event.locals.session.id);
  setCookie(event.cookies, sessions.createBlankSessionCookie());
  event.locals.session = null;
  event.locals.user = null;
}

/** A new password, after the present one; every other session of the account ends. */
export async function changePassword(
  db: Knex,
  userId: string,
  given: { present: string; next: string },
  keep: { sessionId: string | null; address: string }
): Promise<void> {
  const { next } = accept(z.object({ next: passwordSchema }), given);
  const row = await db<UserRow>('users').where({ id: userId }).first();
  if (!row) return refuse(401, 'This account is not there any more. Sign in again.');
  await countAttempt(db, row.email, keep.address);
  if (!(await isPassword(row.password_hash, given.present)))
    refuse(422, 'The present password is not right, so it was not changed.', {
      details: [{ path: 'present', message: 'is not the present password' }]
    });
  await forgetAttempts(db, row.email);
  const password_hash = await hashPassword(next);
  await db.transaction(async (trx) => {
    await trx<UserRow>('users').where({ id: userId }).update({ password_hash });
    const others = trx('sessions').where({ user_id: userId });
    if (keep.sessionId) others.andWhereNot({ id: keep.sessionId });
    await others.del();
  });
  await sendMail({
    to: row.email,
    subject: 'Your Ebbline password was changed',
    text: 'The password of your Ebbline account was changed and your other sessions were ended. If this was not you, tell the person who runs Ebbline for your lab.'
  });
}

interface SessionCookie {
  name: string;
  value: string;
  attributes: object;
}
export const setCookie = (cookies: Cookies, cookie: SessionCookie) =>
  cookies.set(cookie.name, cookie.value, { path: '/', ...cookie.attributes });
