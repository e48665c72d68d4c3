import { describe, expect, it } from 'vitest';
import { changePassword, signIn, signUp } from '$lib/server/auth/accounts';
import { sessionsOf } from '$lib/server/auth/lucia';
import { useDatabase } from './support/database';
import { PASSWORD, person } from './support/people';

const t = useDatabase();
const here = '198.51.100.7';

describe('accounts', () => {
  it('keeps no password, but its argon2id hash with 19 MiB, two passes, one lane', async () => {
    const user = await person(t.db);
    const row = await t.db('users').where({ id: user.id }).first();
    expect(row.password_hash).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
    expect(JSON.stringify(row)).not.toContain(PASSWORD);
  });

  it('signs in whatever the case of the address, and refuses a second account for it', async () => {
    await signUp(t.db, { email: ' Ada.Marram@Marram.Example ', name: 'Ada', password: PASSWORD });
    const user = await signIn(t.db, { email: 'ada.marram@marram.example', password: PASSWORD }, here);
    expect(user.name).toBe('Ada');
    await expect(
      signUp(t.db, { email: 'ADA.MARRAM@marram.example', name: 'B', password: PASSWORD })
    ).rejects.toMatchObject({ status: 409, body: { details: [{ path: 'email' }] } });
  });

  it('says the same for a wrong password and an unknown address', async () => {
    const user = await person(t.db);
    const wrong = await signIn(t.db, { email: user.email, password: 'not this one' }, here).catch((e) => e);
    const unknown = await signIn(t.db, { email: 'nobody@marram.example', password: 'x' }, here).catch(
      (e) => e
    );
    expect(wrong.status).toBe(401);
    expect(unknown.body).toEqual(wrong.body);
  });

  it('asks for a name, a real address and a password of ten characters', async () => {
    const wrong = await signUp(t.db, { email: 'no', name: ' ', password: 'short' }).catch((e) => e);
    expect(wrong.status).toBe(422);
    expect(wrong.body.details.map((d: { path: string }) => d.path).sort()).toEqual([
      'email',
      'name',
      'password'
    ]);
  });

  it('changes the password only with the present one, and ends every other session', async () => {
    const user = await person(t.db);
    const sessions = sessionsOf(t.db);
    const kept = await sessions.createSession(user.id, {});
    const other = await sessions.createSession(user.id, {});
    const keep = { sessionId: kept.id, address: here };
    await expect(
      changePassword(t.db, user.id, { present: 'wrong', next: 'a new long one' }, keep)
    ).rejects.toMatchObject({ status: 422, body: { details: [{ path: 'present' }] } });
    expect((await sessions.validateSession(other.id)).session).not.toBeNull();
    await changePassword(t.db, user.id, { present: PASSWORD, next: 'a new long one' }, keep);
    expect((await sessions.validateSession(kept.id)).session).not.toBeNull();
    expect((await sessions.validateSession(other.id)).session).toBeNull();
    await expect(signIn(t.db, { email: user.email, password: PASSWORD }, here)).rejects.toMatchObject({
      status: 401
    });
    expect((await signIn(t.db, { email: user.email, password: 'a new long one' }, here)).id).toBe(user.id);
  });
});

describe('limits on sign-in', () => {
  const miss = (email: string, address: string) =>
    signIn(t.db, { email, password: 'a guess' }, address).then(
      () => 200,
      (e) => e.status as number
    );

  it('stops the eleventh guess at an account, from any address, and says how many minutes', async () => {
    const { email } = await person(t.db);
    for (let n = 0; n < 10; n++) expect(await miss(email, `203.0.113.${n}`)).toBe(401);
    const stopped = await signIn(t.db, { email, password: PASSWORD }, '203.0.113.99').catch((e) => e);
    expect(stopped.status).toBe(429);
    expect(stopped.body.message).toMatch(/for this account: 10 within 15 minutes .* in 1[45] minutes/);
    expect(stopped.body.retryAfter).toBeGreaterThan(800);
    // The window has passed: the right password is taken, and counts nothing.
    await t
      .db('sign_in_attempts')
      .where({ account: email })
      .update({ at: t.db.raw("now() - interval '16 minutes'") });
    expect((await signIn(t.db, { email, password: PASSWORD }, '203.0.113.99')).email).toBe(email);
  });

  it('lets no burst of guesses at once slip past', async () => {
    const { email } = await person(t.db);
    const answers = await Promise.all(Array.from({ length: 30 }, (_, n) => miss(email, `192.0.2.${n}`)));
    expect(answers.filter((s) => s === 401)).toHaveLength(10);
    expect(answers.filter((s) => s === 429)).toHaveLength(20);
  });

  it('stops guesses at many accounts from one address, and leaves other addresses alone', async () => {
    const { email } = await person(t.db);
    for (let n = 0; n < 60; n++)
      await t.db('sign_in_attempts').insert({ account: `a${n}@marram.example`, address: '100.64.0.1' });
    expect(await miss('b@marram.example', '100.64.0.1')).toBe(429);
    expect((await signIn(t.db, { email, password: PASSWORD }, '100.64.0.2')).email).toBe(email);
  });
});
