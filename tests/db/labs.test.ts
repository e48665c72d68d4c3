import { beforeAll, describe, expect, it } from 'vitest';
import { can, labOf, requireMember, safeNext } from '$lib/server/auth/member';
import { canonicalRedirect, isForeign } from '$lib/server/auth/origin';
import { loadTask } from '$lib/server/services/workspace';
import { createDemoLab, isDemoOffered } from '$lib/server/services/demo/lab';
import { addMember, changeMember, createLab, removeMember } from '$lib/server/services/labs';
import { createProfile, updateProfile } from '$lib/server/services/profiles';
import { saveTask } from '$lib/server/services/documents';
import { defaultProfile } from '$lib/task/profile';
import { hashOf } from '$lib/task/canonical';
import type { User } from '$lib/server/db/rows';
import { call } from './support/api';
import { useDatabase } from './support/database';
import { labWithRoles, person } from './support/people';

const t = useDatabase();
let w: Awaited<ReturnType<typeof labWithRoles>>;
beforeAll(async () => (w = await labWithRoles(t.db)));

const locals = (user: User | null): App.Locals => ({ db: t.db, user, session: null, path: '/labs/1?a=b' });

describe('members', () => {
  it('the last owner stays owner and stays in the lab, until another is one', async () => {
    const owner = w.people.owner;
    const lab = await createLab(t.db, owner.id, { name: 'Dune Lab' });
    const lone = { status: 409, body: { message: expect.stringMatching(/needs an owner/) } };
    await expect(changeMember(t.db, lab.id, owner.id, owner.id, { role: 'reader' })).rejects.toMatchObject(
      lone
    );
    await expect(removeMember(t.db, lab.id, owner.id, owner.id)).rejects.toMatchObject(lone);
    await addMember(t.db, lab.id, owner.id, { email: w.people.reader.email, role: 'owner' });
    await removeMember(t.db, lab.id, owner.id, owner.id);
    await expect(requireMember(locals(owner), lab.id, 'read')).rejects.toMatchObject({ status: 404 });
  });

  it('two owners who step down at once leave one', async () => {
    const a = await person(t.db);
    const b = await person(t.db);
    const lab = await createLab(t.db, a.id, { name: 'Dune Lab' });
    await addMember(t.db, lab.id, a.id, { email: b.email, role: 'owner' });
    const done = await Promise.allSettled([
      removeMember(t.db, lab.id, a.id, a.id),
      removeMember(t.db, lab.id, b.id, b.id)
    ]);
    expect(done.map((d) => d.status).sort()).toEqual(['fulfilled', 'rejected']);
    expect(await t.db('memberships').where({ lab_id: lab.id, role: 'owner' })).toHaveLength(1);
  });

  it('cannot be added twice, nor without an account', async () => {
    const add = (email: string) => addMember(t.db, w.lab.id, w.people.owner.id, { email, role: 'reader' });
    await expect(add(w.people.reader.email)).rejects.toMatchObject({ status: 409 });
    await expect(add('nobody@marram.example')).rejects.toMatchObject({
      status: 422,
      body: { details: [{ path: 'email' }] }
    });
  });

  it('a changed role holds at once; a deputy may sign off and no more', async () => {
    const lab = await createLab(t.db, w.people.owner.id, { name: 'Dune Lab' });
    const other = w.people.outsider;
    await addMember(t.db, lab.id, w.people.owner.id, { email: other.email, role: 'reader' });
    await expect(requireMember(locals(other), lab.id, 'edit')).rejects.toMatchObject({ status: 403 });
    await changeMember(t.db, lab.id, w.people.owner.id, other.id, { role: 'experimenter', deputy: true });
    expect((await requireMember(locals(other), lab.id, 'edit')).role).toBe('experimenter');
    expect((await requireMember(locals(other), lab.id, 'sign-off')).deputy).toBe(true);
    await expect(requireMember(locals(other), lab.id, 'manage')).rejects.toMatchObject({ status: 403 });
    expect(can('reader', 'sign-off')).toBe(false);
  });

  it('leaves a trace of who did what', async () => {
    const rows = await t.db('audit').where({ lab_id: w.lab.id, action: 'member added' });
    expect(rows).toHaveLength(3);
    expect(rows.every((r) => r.actor === w.people.owner.id)).toBe(true);
  });
});

describe('pages', () => {
  it('lead somebody not signed in to sign-in and back', async () => {
    await expect(requireMember(locals(null), w.lab.id, 'read')).rejects.toMatchObject({
      status: 303,
      location: '/sign-in?next=%2Flabs%2F1%3Fa%3Db'
    });
  });
  it.each([
    ['/labs/1?a=b', '/labs/1?a=b'],
    ['//elsewhere.example', '/labs'],
    ['/\\elsewhere.example', '/labs'],
    ['https://elsewhere.example', '/labs'],
    ['/\tx', '/labs'],
    [null, '/labs']
  ])('go on after sign-in only within this site: %s', (next, to) => expect(safeNext(next)).toBe(to));

  it('of a task get what the layout promises', async () => {
    const data = await loadTask(locals(w.people.reader), w.lab.id, w.task.id);
    expect(data).toMatchObject({
      lab: { name: 'Marram Lab' },
      role: 'reader',
      study: { label: 'senses' },
      task: { id: w.task.id, saveNumber: 1, document: w.document },
      profile: null,
      profileHash: hashOf(defaultProfile())
    });
    await expect(loadTask(locals(w.people.outsider), w.lab.id, w.task.id)).rejects.toMatchObject({
      status: 404
    });
    await expect(loadTask(locals(w.people.reader), w.lab.id, w.task.id, 'edit')).rejects.toMatchObject({
      status: 403
    });
    await expect(loadTask(locals(w.people.reader), w.lab.id, 'x')).rejects.toMatchObject({ status: 404 });
    const other = await labWithRoles(t.db);
    await expect(loadTask(locals(w.people.reader), w.lab.id, other.task.id)).rejects.toMatchObject({
      status: 404
    });
    await expect(labOf(t.db, w.people.reader.id, 'task', other.task.id)).rejects.toMatchObject({
      status: 404
    });
  });

  it('of a task that names a profile get it with its hash', async () => {
    const made = await createProfile(t.db, w.lab.id, w.people.owner.id, { name: 'Marram scanner', tr: 1.5 });
    const document = { ...w.document, brief: { ...w.document.brief, profile: made.id } };
    const { saveNumber } = (await loadTask(locals(w.people.owner), w.lab.id, w.task.id)).task;
    await saveTask(t.db, {
      lab: w.lab.id,
      task: w.task.id,
      base: saveNumber,
      document,
      words: [],
      author: w.people.owner.id
    });
    const data = await loadTask(locals(w.people.reader), w.lab.id, w.task.id);
    expect(data.profile).toEqual(made.profile);
    expect(data.profileHash).toBe(hashOf(made.profile));
  });
});

describe('scanner profiles', () => {
  it('keep every version under its own hash; unchanged content makes none', async () => {
    const first = await createProfile(t.db, w.lab.id, w.people.owner.id, { name: 'Versions' });
    const same = await updateProfile(t.db, w.lab.id, w.people.owner.id, first.id, first.profile, 1);
    expect(same.version).toBe(1);
    const next = await updateProfile(
      t.db,
      w.lab.id,
      w.people.owner.id,
      first.id,
      { ...first.profile, tr: 1.2 },
      1
    );
    expect(next).toMatchObject({ version: 2, hash: hashOf(next.profile) });
    const rows = await t.db('profile_versions').where({ profile_id: first.id }).orderBy('version');
    expect(rows.map((r) => r.hash)).toEqual([first.hash, next.hash]);
    expect(hashOf(rows[0].body)).toBe(first.hash);
    await expect(
      updateProfile(t.db, w.lab.id, w.people.owner.id, first.id, { ...first.profile, tr: 3 }, 1)
    ).rejects.toMatchObject({ status: 412 });
  });

  it.each([
    ['TR of 0', { tr: 0 }, 'tr'],
    ['negative TR', { tr: -2 }, 'tr'],
    ['TR as text', { tr: 'two' }, 'tr'],
    ['acquisition longer than the TR', { tr: 1, acquisitionTime: 1.5 }, 'acquisitionTime'],
    [
      'a key named twice',
      {
        responseKeys: [
          { code: 'Digit1', finger: 'right-index' },
          { code: 'Digit1', finger: 'right-middle' }
        ]
      },
      'responseKeys'
    ],
    ['a field of its own', { gradient: 40 }, '']
  ])('%s is refused with its place', async (_, change, path) => {
    const body = { name: 'Wrong', ...change };
    const answer = await call(
      t.db,
      w.people.owner,
      'POST',
      '/labs/{lab}/profiles',
      { lab: w.lab.id },
      { body }
    );
    expect(answer.status).toBe(422);
    expect(answer.json.error.details[0].path).toBe(path);
  });
});

describe('where requests come from', () => {
  const here = new URL('http://127.0.0.1:3000/labs?x=1');
  const request = (method: string, headers: Record<string, string>) => new Request(here, { method, headers });

  it.each(['POST', 'PUT', 'PATCH', 'DELETE'])('a %s of another origin, or of none, is foreign', (method) => {
    expect(isForeign(request(method, {}), here)).toBe(true);
    expect(isForeign(request(method, { origin: 'http://elsewhere.example' }), here)).toBe(true);
    expect(isForeign(request(method, { origin: 'http://127.0.0.1:3001' }), here)).toBe(true);
    expect(isForeign(request(method, { origin: 'null' }), here)).toBe(true);
    expect(isForeign(request(method, { origin: here.origin }), here)).toBe(false);
  });
  it('reading is not, and a token is judged alone', () => {
    expect(isForeign(request('GET', { origin: 'http://elsewhere.example' }), here)).toBe(false);
    expect(isForeign(request('POST', { authorization: 'Bearer x' }), here)).toBe(false);
  });
  it('a page asked for under the other name of this machine is led to the right one', () => {
    expect(canonicalRedirect(request('GET', { host: 'localhost:3000' }), here)).toBe(
      'http://127.0.0.1:3000/labs?x=1'
    );
    expect(canonicalRedirect(request('GET', { host: '127.0.0.1:3000' }), here)).toBeNull();
    expect(canonicalRedirect(request('GET', { host: 'elsewhere.example:3000' }), here)).toBeNull();
    expect(canonicalRedirect(request('POST', { host: 'localhost:3000' }), here)).toBeNull();
  });
  it('a demo lab is not offered where others can reach the server', async () => {
    expect(isDemoOffered()).toBe(false);
    await expect(createDemoLab(t.db)).rejects.toMatchObject({ status: 403 });
    expect(await t.db('labs').where({ demo: true })).toHaveLength(0);
  });
});
