/**
 * `node bids-schema.mjs FOLDER` prints the schema validator's findings as JSON. A process of its own, because that
 * validator's build is meant for browsers and needs `require` and `navigator` to be global.
 */
import { File } from 'node:buffer';
import { readFileSync, readdirSync } from 'node:fs';
import { createRequire } from 'node:module';
import { basename, dirname, join, relative } from 'node:path';

const require = createRequire(import.meta.url);
globalThis.require ??= require;
globalThis.navigator ??= { userAgent: 'node', language: 'en' };
const program = join(dirname(require.resolve('bids-validator/package.json')), 'dist/validator/main.js');
const { fileListToTree, validate } = await import(program);

const folder = process.argv[2];
const files = readdirSync(folder, { recursive: true, withFileTypes: true })
  .filter((entry) => entry.isFile())
  .map((entry) => {
    const path = join(entry.parentPath, entry.name);
    const file = new File([readFileSync(path)], entry.name);
    const value = `${basename(folder)}/${relative(folder, path)}`;
    Object.defineProperty(file, 'webkitRelativePath', { value });
    return file;
  });
const options = { datasetPath: folder, ignoreNiftiHeaders: false, debug: 'ERROR' };
const { issues } = await validate(await fileListToTree(files), options, {});
const found = issues.issues.map(({ code, subCode, severity, location, issueMessage }) => ({
  severity: severity === 'error' ? 'error' : 'warning',
  code: subCode ? `${code}:${subCode}` : code,
  where: location ?? '',
  message: issueMessage ?? ''
}));
process.stdout.write(JSON.stringify(found));
