/**
 * Every API call there is, against everybody: nobody, an outsider, each role. A new call without an example here
 * fails the first test, so none can be added without its rights being tried.
 */
import { beforeAll, describe, expect, it } from 'vitest';
import { RIGHTS, type Right } from '$lib/server/auth/member';
import { ROLES, type Role, type User } from '$lib/server/db/rows';
import { addMember, createLab } from '$lib/server/services/labs';
import { createProfile } from '$lib/server/services/profiles';
import { sealSnapshot } from '$lib/server/services/revisions';
import { createStudy } from '$lib/server/services/studies';
import { createTask } from '$lib/server/services/tasks';
import { uploadPicture } from '$lib/server/services/assets';
import { describeApi } from '$lib/server/api/openapi';
import { call, registry, type CallOptions } from './support/api';
import { useDatabase } from './support/database';
import { person } from './support/people';
import { form, png } from './support/pictures';

const t = useDatabase();
let people: Record<Role | 'outsider' | 'candidate', User>;
beforeAll(async () => {
  const names = [...ROLES, 'outsider', 'candidate'] as const;
  const made = await Promise.all(names.map((name) => person(t.db, name)));
  people = Object.fromEntries(names.map((name, k) => [name, made[k]!])) as typeof people;
});

/** A lab with something of everything in it. */
async function world() {
  const owner = people.owner.id;
  const lab = await createLab(t.db, owner, { name: 'Marram Lab' });
  for (const role of ROLES.slice(1))
    await addMember(t.db, lab.id, owner, { email: people[role].email, role });
  const study = await createStudy(t.db, lab.id, owner, { label: 'senses', name: 'Between senses' });
  const where = { lab: lab.id, study: study.id, author: owner };
  const { task, document } = await createTask(t.db, where, {
    label: 'lanterns',
    name: 'Lanterns',
    volumes: 20
  });
  const profile = await createProfile(t.db, lab.id, owner, { name: 'Scanner' });
  const from = { document, saveNumber: 1 };
  const revision = await sealSnapshot(t.db, lab.id, task.id, from, owner);
  const upload = new Request('http://ebbline.test', { method: 'POST', body: form(png()) });
  const asset = await uploadPicture(t.db, lab.id, owner, upload);
  return { lab, study, task, document, profile, revision, asset };
}
type World = Awaited<ReturnType<typeof world>>;

/** One for every call that changes nothing, or is refused. */
let kept: Promise<World> | null = null;
const sharedWorld = () => (kept ??= world());

/** What a well-formed call sends, by method and path. */
const examples: Record<string, (w: World) => CallOptions> = {
  'GET /labs/{lab}': () => ({}),
  'PATCH /labs/{lab}': () => ({ body: { name: 'Dune Lab' } }),
  'GET /labs/{lab}/members': () => ({}),
  'POST /labs/{lab}/members': () => ({ body: { email: people.candidate.email, role: 'reader' } }),
  'PATCH /labs/{lab}/members/{member}': () => ({ body: { role: 'operator' } }),
  'DELETE /labs/{lab}/members/{member}': () => ({}),
  'GET /labs/{lab}/studies': () => ({}),
  'POST /labs/{lab}/studies': () => ({ body: { label: 'more', name: 'More' } }),
  'GET /labs/{lab}/profiles': () => ({}),
  'POST /labs/{lab}/profiles': () => ({ body: { name: 'Another' } }),
  'GET /labs/{lab}/assets': () => ({}),
  'POST /labs/{lab}/assets': () => ({ body: form(png(3)) }),
  'GET /labs/{lab}/assets/{sha}': () => ({}),
  'GET /studies/{study}': () => ({}),
  'PATCH /studies/{study}': () => ({ body: { name: 'Renamed' } }),
  'DELETE /studies/{study}': () => ({}),
  'GET /studies/{study}/tasks': () => ({}),
  'POST /studies/{study}/tasks': () => ({ body: { label: 'second', name: 'Second' } }),
  'GET /tasks/{task}': () => ({}),
  'DELETE /tasks/{task}': () => ({}),
  'GET /tasks/{task}/document': () => ({}),
  'PUT /tasks/{task}/document': (w) => ({
    headers: { 'if-match': '"1"' },
    body: { document: w.document, words: [] }
  }),
  'GET /tasks/{task}/revisions': () => ({}),
  'GET /tasks/{task}/rehearsals': () => ({}),
  'POST /tasks/{task}/rehearsals': (w) => ({
    body: { run: w.document.runs[0]!.id, saveNumber: 1, report: {} }
  }),
  'POST /tasks/{task}/runs/import': () => ({
    body: 'onset\tduration\ttrial_type\n1\t1\ta\n',
    headers: { 'content-type': 'text/tab-separated-values' }
  }),
  'GET /tasks/{task}/runs/{run}/events.tsv': () => ({}),
  'GET /tasks/{task}/runs/{run}/events.json': () => ({}),
  'GET /tasks/{task}/runs/{run}/design': () => ({}),
  'GET /tasks/{task}/bundle.zip': () => ({ query: { kind: 'proof' } }),
  'GET /profiles/{profile}': () => ({}),
  'PUT /profiles/{profile}': () => ({ headers: { 'if-match': '"1"' }, body: { name: 'Scanner', tr: 1.2 } }),
  'GET /revisions/{revision}': () => ({})
};

const paramsOf = (w: World): Record<string, string> => ({
  lab: w.lab.id,
  member: people.reader.id,
  study: w.study.id,
  task: w.task.id,
  run: w.document.runs[0]!.id,
  profile: w.profile.id,
  revision: w.revision.id,
  sha: w.asset.sha256
});

const inLab = registry.filter((e) => e.definition.right in RIGHTS);
const open = registry.filter((e) => !inLab.includes(e));

it('every call in a lab has an example here', () => {
  expect(inLab.map((e) => `${e.method} ${e.path}`).sort()).toEqual(Object.keys(examples).sort());
});

it('what is outside a lab is known by name', () => {
  const named = open.map((e) => `${e.method} ${e.path} ${e.definition.right}`).sort();
  expect(named).toEqual([
    'GET /labs signed-in',
    'GET /me signed-in',
    'GET /openapi.json public',
    'POST /labs signed-in'
  ]);
});

/** The table of the product, written out once more by hand. */
const ALLOWED: Record<Right, Role[]> = {
  read: ['owner', 'experimenter', 'operator', 'reader'],
  rehearse: ['owner', 'experimenter', 'operator', 'reader'],
  edit: ['owner', 'experimenter'],
  'pack-proof': ['owner', 'experimenter'],
  'pack-collection': ['owner', 'experimenter', 'operator'],
  return: ['owner', 'experimenter', 'operator'],
  manage: ['owner'],
  'sign-off': ['owner']
};
/** Rights of the calls, so that a right that is changed by mistake is seen. */
const EXPECTED: Record<string, Right> = {
  'PATCH /labs/{lab}': 'manage',
  'POST /labs/{lab}/members': 'manage',
  'PATCH /labs/{lab}/members/{member}': 'manage',
  'DELETE /labs/{lab}/members/{member}': 'manage',
  'POST /labs/{lab}/profiles': 'manage',
  'PUT /profiles/{profile}': 'manage',
  'POST /labs/{lab}/studies': 'edit',
  'POST /labs/{lab}/assets': 'edit',
  'PATCH /studies/{study}': 'edit',
  'DELETE /studies/{study}': 'edit',
  'POST /studies/{study}/tasks': 'edit',
  'DELETE /tasks/{task}': 'edit',
  'PUT /tasks/{task}/document': 'edit',
  'POST /tasks/{task}/runs/import': 'edit',
  'POST /tasks/{task}/rehearsals': 'rehearse',
  'GET /tasks/{task}/bundle.zip': 'pack-proof'
};

describe.each(inLab.map((e) => [`${e.method} ${e.path}`, e] as const))('%s', (name, entry) => {
  const right = EXPECTED[name] ?? 'read';
  const send = (w: World, user: User | null) =>
    call(t.db, user, entry.method, entry.path, paramsOf(w), examples[name]!(w));

  it(`needs the right ‘${right}’`, () => expect(entry.definition.right).toBe(right));

  it('is 401 for nobody, 404 for an outsider, 403 for each role too low; none of them changes anything', async () => {
    const w = await sharedWorld();
    const count = async () =>
      (
        await t.owner.raw(
          `select (select count(*) from memberships) m, (select count(*) from studies where deleted_at is null) s,
             (select count(*) from tasks where deleted_at is null) t, (select count(*) from saves) v,
             (select count(*) from profile_versions) p, (select count(*) from assets) a,
             (select count(*) from rehearsals) r, (select count(*) from revisions) x, (select count(*) from audit) u`
        )
      ).rows[0];
    const before = await count();
    expect((await send(w, null)).status).toBe(401);
    const outside = await send(w, people.outsider);
    expect(outside.status).toBe(404);
    for (const role of ROLES.filter((r) => !ALLOWED[right].includes(r))) {
      const answer = await send(w, people[role]);
      expect([role, answer.status]).toEqual([role, 403]);
      expect(answer.json.error.message).toContain(`is ${role}`);
    }
    expect(await count()).toEqual(before);
  });

  it('is done for the others', async () => {
    for (const role of ALLOWED[right]) {
      const answer = await send(await (entry.method === 'GET' ? sharedWorld() : world()), people[role]);
      expect([role, answer.status, answer.json?.error?.message]).toEqual([
        role,
        entry.definition.status ?? (entry.definition.answer === null ? 204 : 200),
        undefined
      ]);
    }
  });

  it('says of an outsider’s address the same as of one that does not exist', async () => {
    const w = await sharedWorld();
    const real = await send(w, people.outsider);
    const invented = Object.fromEntries(
      Object.keys(paramsOf(w)).map((key) => [key, key === 'sha' ? 'f'.repeat(64) : crypto.randomUUID()])
    );
    const none = await call(t.db, people.outsider, entry.method, entry.path, invented, examples[name]!(w));
    expect([none.status, none.json]).toEqual([real.status, real.json]);
    const nonsense = Object.fromEntries(Object.keys(invented).map((key) => [key, "1' or '1'='1"]));
    const odd = await call(t.db, people.owner, entry.method, entry.path, nonsense, examples[name]!(w));
    expect(odd.status).toBe(404);
  });
});

describe('the description', () => {
  const api = describeApi(registry) as unknown as {
    openapi: string;
    paths: Record<
      string,
      Record<string, { 'x-right': string; 'x-roles': unknown; parameters: { name: string }[] }>
    >;
  };
  it('names every call, with its roles and the parts of its path', () => {
    const named = Object.entries(api.paths).flatMap(([path, calls]) =>
      Object.keys(calls).map((method) => `${method.toUpperCase()} ${path}`)
    );
    expect(named.sort()).toEqual(registry.map((e) => `${e.method} ${e.path}`).sort());
    for (const { method, path, definition } of inLab) {
      const described = api.paths[path]![method.toLowerCase()]!;
      expect(described['x-roles']).toEqual(ALLOWED[definition.right as Right]);
      for (const [, part] of path.matchAll(/\{(\w+)\}/g))
        expect(described.parameters.map((p) => p.name)).toContain(part);
    }
  });
  it('is answered to anybody, as JSON', async () => {
    const answer = await call(t.db, null, 'GET', '/openapi.json');
    expect(answer.status).toBe(200);
    expect(answer.json.openapi).toBe('3.1.0');
    expect(Object.keys(answer.json.paths)).toEqual(
      expect.arrayContaining(['/tasks/{task}/document', '/openapi.json'])
    );
    const put = answer.json.paths['/tasks/{task}/document'].put;
    expect(put.parameters.map((p: { name: string }) => p.name)).toEqual(['task', 'If-Match']);
    expect(Object.keys(put.responses)).toEqual(expect.arrayContaining(['200', '412', '422', '428']));
  });
});
