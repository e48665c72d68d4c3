/**
 * Slows guessing: failed sign-ins are counted per account and per network address over fifteen minutes.
 * The attempt is written down before the password is looked at, so that many guesses at once cannot slip past.
 */
import type { Knex } from 'knex';
import { config } from '../config';
import type { AttemptRow } from '../db/rows';
import { refuse } from '../errors';

export const WINDOW_MINUTES = 15;

/** Write an attempt down; refuses with the minutes to wait when there were too many. Returns its id. */
export async function countAttempt(db: Knex, account: string, address: string): Promise<string> {
  const limits = config().signInLimits;
  const [row] = await db<AttemptRow>('sign_in_attempts').insert({ account, address }).returning('id');
  const id = row!.id;
  for (const [column, value, limit] of [
    ['account', account, limits.account],
    ['address', address, limits.address]
  ] as const) {
    // The attempt that must leave the window before another is taken: the limit-th latest before this one.
    const blocking = await db<AttemptRow>('sign_in_attempts')
      .where(column, value)
      .andWhere('id', '<', id)
      .andWhereRaw(`at > now() - interval '${WINDOW_MINUTES} minutes'`)
      .orderBy('id', 'desc')
      .offset(limit - 1)
      .first('at');
    if (!blocking) continue;
    await db<AttemptRow>('sign_in_attempts').where({ id }).del();
    const seconds = Math.max(1, Math.ceil((blocking.at.getTime() - Date.now()) / 1000 + WINDOW_MINUTES * 60));
    const minutes = Math.ceil(seconds / 60);
    const whose = column === 'account' ? 'for this account' : 'from this network address';
    refuse(
      429,
      `Too many failed sign-ins ${whose}: ${limit} within ${WINDOW_MINUTES} minutes are allowed. ` +
        `Please try again in ${minutes} ${minutes === 1 ? 'minute' : 'minutes'}.`,
      { retryAfter: seconds }
    );
  }
  return id;
}

/** The password was right: forget this account's failures, and this attempt. */
export const forgetAttempts = (db: Knex, account: string) =>
  db<AttemptRow>('sign_in_attempts').where({ account }).del();
