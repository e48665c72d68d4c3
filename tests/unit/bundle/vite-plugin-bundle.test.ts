import { mkdtempSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { runInNewContext } from 'node:vm';
import { Worker } from 'node:worker_threads';
import { build } from 'vite';
import { afterAll, describe, expect, it } from 'vitest';
import { bundleString } from '../../../scripts/vite-plugin-bundle';
import iife from './fixtures/answer.ts?bundle=iife';
import worker from './fixtures/worker.ts?bundle=node';

const folder = mkdtempSync(join(tmpdir(), 'ebbline-plugin-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('?bundle=', () => {
  it('gives one classic browser script that needs nothing else', () => {
    expect(iife).not.toMatch(/\bimport\b|\brequire\(/);
    const sandbox: { bundledAnswer?: number } = {};
    runInNewContext(iife, sandbox);
    expect(sandbox.bundledAnswer).toBe(42);
  });

  it('gives a script that a Node worker runs from its text', async () => {
    const thread = new Worker(worker, { eval: true });
    try {
      const answer = await new Promise((resolve, reject) => {
        thread.once('message', resolve);
        thread.once('error', reject);
        thread.postMessage(8);
      });
      expect(answer).toBe(16);
    } finally {
      await thread.terminate();
    }
  });

  it('is the same string in a build', async () => {
    const entry = join(folder, 'entry.ts');
    const fixture = join(import.meta.dirname, 'fixtures/answer.ts');
    writeFileSync(entry, `import code from '${fixture}?bundle=iife';\nexport default code;\n`);
    await build({
      configFile: false,
      root: process.cwd(),
      logLevel: 'silent',
      publicDir: false,
      plugins: [bundleString()],
      build: {
        outDir: join(folder, 'out'),
        emptyOutDir: true,
        lib: { entry, formats: ['es'], fileName: 'built' }
      }
    });
    const [file] = readdirSync(join(folder, 'out'));
    const built = (await import(/* @vite-ignore */ join(folder, 'out', file!))) as { default: string };
    expect(built.default).toBe(iife);
    expect(readFileSync(join(folder, 'out', file!), 'utf8')).toContain('42');
  });

  it('refuses a module that would need a second file', async () => {
    const styled = join(folder, 'styled.ts');
    writeFileSync(styled, `import './style.css';\n`);
    writeFileSync(join(folder, 'style.css'), 'body { color: red }');
    const entry = join(folder, 'needs-two.ts');
    writeFileSync(entry, `import code from './styled.ts?bundle=iife';\nexport default code;\n`);
    const run = build({
      configFile: false,
      root: process.cwd(),
      logLevel: 'silent',
      publicDir: false,
      plugins: [bundleString()],
      build: { write: false, lib: { entry, formats: ['es'], fileName: 'x' } }
    });
    await expect(run).rejects.toThrow(/exactly one script/);
  });
});
