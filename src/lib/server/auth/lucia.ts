/** Sessions of 30 days in a cookie that scripts cannot read. */
import { Lucia, TimeSpan } from 'lucia';
import type { Knex } from 'knex';
import { config } from '../config';
import { KnexAdapter } from './adapter';

const make = (db: Knex) =>
  new Lucia(new KnexAdapter(db), {
    sessionExpiresIn: new TimeSpan(30, 'd'),
    sessionCookie: { attributes: { secure: config().secureCookie, sameSite: 'lax' } },
    getUserAttributes: (a) => ({ email: a.email, name: a.name })
  });

const made = new WeakMap<Knex, ReturnType<typeof make>>();
export function sessionsOf(db: Knex) {
  let lucia = made.get(db);
  if (!lucia) made.set(db, (lucia = make(db)));
  return lucia;
}

export interface SessionUser {
  id: string;
  email: string;
  name: string;
}

declare module 'lucia' {
  interface Register {
    Lucia: ReturnType<typeof make>;
    DatabaseUserAttributes: { email: string; name: string };
  }
}
