/**
 * Holds the directions between the rooms of src/lib: each imports only from rooms before it, and no imports run in a
 * circle.   node scripts/check-rooms.mjs
 */
import { existsSync, readFileSync, readdirSync, statSync } from 'node:fs';
import { dirname, join, posix, relative, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';

const SCREENS = ['components', 'charts', 'editor'];
const PURE = ['engine', 'task', 'player', 'bundle', 'returns'];

/** What each room may import from, besides itself. */
export const MAY_IMPORT = {
  ...Object.fromEntries(PURE.map((room, at) => [room, PURE.slice(0, at)])),
  components: PURE,
  charts: [...PURE, 'components'],
  editor: [...PURE, 'components', 'charts'],
  server: PURE,
  routes: [...PURE, ...SCREENS, 'server'],
  hooks: [...PURE, 'server']
};

/** Modules a room must not know, by the start of their name, with the reason. */
const FORBIDDEN = [
  ...['engine', 'task', 'bundle', 'returns', 'player'].flatMap((room) => [
    { room, name: /^svelte/, why: 'it must run without Svelte' },
    { room, name: /^\$(app|env)\//, why: 'it must run outside SvelteKit' },
    { room, name: /^node:/, why: 'it must run in the browser as well' }
  ]),
  {
    room: 'server',
    name: /^\$(app|env)\//,
    why: 'it must run in jobs and tests; only hooks and routes know SvelteKit'
  },
  { room: 'server', name: /^svelte(\/|$)/, why: 'the server draws nothing' },
  ...['components', 'charts', 'editor'].map((room) => ({
    room,
    name: /^(knex|pg|pg-boss|lucia|node:)/,
    why: 'it runs in the browser'
  }))
];

/** All modules a source text imports, with those imported as types only marked. */
export function importsOf(text) {
  const code = text.replace(/\/\*[\s\S]*?\*\//g, '').replace(/^\s*\/\/.*$/gm, '');
  const found = [];
  const statement = /(?:^|[\n;>])\s*(import|export)\s+(type\s+)?(?:[\w*{}\s,$]+?\sfrom\s*)?(['"])([^'"]+)\3/g;
  for (const [, , type, , name] of code.matchAll(statement)) found.push({ name, type: Boolean(type) });
  for (const [, , name] of code.matchAll(/\bimport\(\s*(['"])([^'"]+)\1\s*\)/g))
    found.push({ name, type: false });
  for (const [, , name] of code.matchAll(/new URL\(\s*(['"])(\.[^'"]+)\1\s*,\s*import\.meta\.url/g))
    found.push({ name, type: false });
  return found;
}

/** Room of a file by its path under the project, or null for what belongs to none (app.d.ts, tests). */
export function roomOf(path) {
  const parts = path.split('/');
  if (parts[0] !== 'src') return null;
  if (parts[1] === 'routes') return 'routes';
  if (parts[1] === 'lib' && parts.length > 3) return parts[2];
  return parts[1]?.startsWith('hooks') ? 'hooks' : null;
}

/** The file an import means, as a path under the project; null for packages. */
export function resolveImport(root, from, name) {
  const bare = name.split('?')[0];
  const target = bare.startsWith('$lib/')
    ? posix.join('src/lib', bare.slice(5))
    : bare.startsWith('.')
      ? posix.join(posix.dirname(from), bare)
      : null;
  if (!target) return null;
  const tries = [
    target,
    `${target}.ts`,
    `${target}.svelte.ts`,
    `${target}/index.ts`,
    target.replace(/\.js$/, '.ts')
  ];
  return tries.find((path) => existsSync(join(root, path)) && statSync(join(root, path)).isFile()) ?? target;
}

/** Every broken rule of the sources under `root`, as sentences; empty when all is well. */
export function checkRooms(root) {
  const files = sourcesUnder(root);
  const problems = [];
  const graph = new Map();
  for (const file of files) {
    const room = roomOf(file);
    const found = importsOf(readFileSync(join(root, file), 'utf8'));
    graph.set(file, new Set());
    for (const { name, type } of found) {
      const target = resolveImport(root, file, name);
      if (!target) {
        const rule = FORBIDDEN.find((one) => one.room === room && one.name.test(name));
        if (rule) problems.push(`${file} imports ${name}: ${rule.why}.`);
        continue;
      }
      // A script string is built apart and imports nothing at run time.
      if (/\?bundle=/.test(name)) {
        if (room !== 'server')
          problems.push(`${file} imports ${name}: script strings are for the server alone.`);
      } else if (!type) graph.get(file).add(target);
      const other = roomOf(target);
      if (!room || !other || room === other) continue;
      if (!MAY_IMPORT[room])
        problems.push(`${file}: the room ${room} is not in the plan; name it in check-rooms.`);
      else if (!MAY_IMPORT[room].includes(other))
        problems.push(`${file} imports ${name}: ${room} may not know ${other}.`);
    }
  }
  return [...new Set([...problems, ...circles(graph)])];
}

function sourcesUnder(root) {
  return readdirSync(join(root, 'src'), { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile() && /\.(ts|svelte)$/.test(entry.name) && !entry.name.endsWith('.d.ts'))
    .map((entry) => relative(root, join(entry.parentPath ?? entry.path, entry.name)))
    .sort();
}

/** Circles of imports that exist at run time, each named once. */
function circles(graph) {
  const state = new Map();
  const path = [];
  const found = [];
  const visit = (file) => {
    state.set(file, 'open');
    path.push(file);
    for (const next of graph.get(file) ?? []) {
      if (state.get(next) === 'open')
        found.push(`Imports run in a circle: ${[...path.slice(path.indexOf(next)), next].join(' → ')}.`);
      else if (!state.has(next)) visit(next);
    }
    path.pop();
    state.set(file, 'done');
  };
  for (const file of graph.keys()) if (!state.has(file)) visit(file);
  return found;
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const root = resolve(dirname(fileURLToPath(import.meta.url)), '..');
  const problems = checkRooms(root);
  for (const problem of problems) console.error(problem);
  console.log(
    problems.length
      ? `${problems.length} rules between rooms are broken.`
      : 'The rooms keep their directions.'
  );
  process.exit(problems.length ? 1 : 0);
}
