/**
 * `npm run bench` measures every part, `npm run bench -- PART …` some. Prints a table and writes
 * `bench-results.json`; ends with 1 if a part failed or a promised figure was not met.
 */
import { existsSync, writeFileSync } from 'node:fs';
import { cpus } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { benchTable } from './table';
import { isMet, type BenchPart, type BenchRow } from './types';

/** In this order; the player first, while the machine is quiet. */
const PARTS = ['player', 'engine', 'search', 'synthetic'];

async function loadPart(name: string): Promise<BenchPart> {
  const module = (await import(pathToFileURL(pathOf(name)).href)) as { default: BenchPart };
  return module.default;
}
const pathOf = (name: string) => join(import.meta.dirname, 'parts', `${name}.ts`);

const known = PARTS.filter((name) => existsSync(pathOf(name)));
const wanted = process.argv.slice(2);
const unknown = wanted.filter((name) => !known.includes(name));
if (unknown.length) {
  console.error(`There is no part ${unknown.join(', ')}: choose from ${known.join(', ')}.`);
  process.exit(2);
}

const rows: BenchRow[] = [];
let failed = 0;
for (const name of wanted.length ? wanted : known) {
  console.error(`measuring ${name} …`);
  try {
    rows.push(...(await (await loadPart(name)).run()));
  } catch (error) {
    failed += 1;
    console.error(`${name} failed:`, error);
  }
}
console.log(benchTable(rows));
const machine = { processor: cpus()[0]?.model ?? 'unknown', cores: cpus().length, node: process.version };
writeFileSync(
  'bench-results.json',
  JSON.stringify({ at: new Date().toISOString(), machine, rows }, null, 2) + '\n'
);
const missed = rows.filter((row) => !isMet(row)).length;
console.log(
  `\n${rows.length} figures, ${missed} short of their aim, ${failed} parts failed; written to bench-results.json`
);
process.exitCode = missed || failed ? 1 : 0;
