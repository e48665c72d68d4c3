import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join, resolve } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { checkRooms, importsOf } from '../../../scripts/check-rooms.mjs';

const made: string[] = [];
afterAll(() => made.forEach((folder) => rmSync(folder, { recursive: true, force: true })));

/** A small project with the given files. */
function project(files: Record<string, string>): string {
  const root = mkdtempSync(join(tmpdir(), 'ebbline-rooms-'));
  made.push(root);
  for (const [name, text] of Object.entries(files)) {
    mkdirSync(dirname(join(root, name)), { recursive: true });
    writeFileSync(join(root, name), text);
  }
  return root;
}

describe('directions between rooms', () => {
  it('are kept by this project', () => {
    expect(checkRooms(resolve(import.meta.dirname, '../../..'))).toEqual([]);
  });

  it('let a later room import an earlier one', () => {
    const root = project({
      'src/lib/engine/a.ts': 'export const a = 1;',
      'src/lib/task/b.ts': "import { a } from '$lib/engine/a';\nexport const b = a;",
      'src/routes/+page.svelte': '<script lang="ts">\n  import { b } from \'$lib/task/b.ts\';\n</script>{b}'
    });
    expect(checkRooms(root)).toEqual([]);
  });

  it('forbid an earlier room to import a later one, even as a type or from a component', () => {
    const root = project({
      'src/lib/engine/a.ts': "import type { B } from '../task/b';\nexport type A = B;",
      'src/lib/task/b.ts': 'export type B = 1;',
      'src/lib/server/db.ts': 'export const db = 1;',
      'src/lib/components/C.svelte': '<script lang="ts">import { db } from \'$lib/server/db\';</script>{db}'
    });
    const problems = checkRooms(root);
    expect(problems).toHaveLength(2);
    expect(problems.join('\n')).toContain('engine may not know task');
    expect(problems.join('\n')).toContain('components may not know server');
  });

  it('forbid frameworks where they must not be', () => {
    const root = project({
      'src/lib/server/config.ts': "import { env } from '$env/dynamic/private';\nexport const e = env;",
      'src/lib/player/clock.ts': "import { readFileSync } from 'node:fs';\nexport const r = readFileSync;",
      'src/lib/editor/pack.ts': "import code from '../player/clock.ts?bundle=iife';\nexport const c = code;"
    });
    const problems = checkRooms(root).join('\n');
    expect(problems).toContain('config.ts imports $env/dynamic/private');
    expect(problems).toContain('clock.ts imports node:fs');
    expect(problems).toContain('script strings are for the server alone');
  });

  it('find a circle and name it, but allow two files to share types', () => {
    const circle = project({
      'src/lib/engine/a.ts': "import { b } from './b';\nexport const a = () => b;",
      'src/lib/engine/b.ts': "import { a } from './a';\nexport const b = () => a;"
    });
    expect(checkRooms(circle)).toEqual([
      'Imports run in a circle: src/lib/engine/a.ts → src/lib/engine/b.ts → src/lib/engine/a.ts.'
    ]);
    const types = project({
      'src/lib/engine/a.ts': "import type { B } from './b';\nexport type A = B | 1;",
      'src/lib/engine/b.ts': "import type { A } from './a';\nexport type B = { a: A };"
    });
    expect(checkRooms(types)).toEqual([]);
  });
});

describe('reading imports', () => {
  it('sees all forms and no comments', () => {
    const text = [
      "import a, { b } from './a';",
      "import type { C } from './c';",
      "export * from './d';",
      "import './e.css';",
      "const f = await import('./f');",
      "new Worker(new URL('./g.worker.ts', import.meta.url));",
      "// import x from './no';",
      "/* import y from './no'; */",
      "import {\n  h,\n  i\n} from './h';"
    ].join('\n');
    expect(importsOf(text).map((one) => one.name)).toEqual([
      './a',
      './c',
      './d',
      './e.css',
      './h',
      './f',
      './g.worker.ts'
    ]);
    expect(importsOf(text).find((one) => one.name === './c')?.type).toBe(true);
  });
});
