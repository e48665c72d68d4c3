/**
 * Writes a small BIDS dataset with stub images and runs both BIDS validators on it, offline: the legacy command
 * line and the schema validator that the same package carries for browsers. Beside them stand our own checks, for
 * what neither of the two finds: line ends, byte-order mark, negative durations, columns missing from one side.
 */
import { execFile } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import { mkdirSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { gzipSync } from 'node:zlib';

const require = createRequire(import.meta.url);

export interface BidsRun {
  /** Entities without suffix: `sub-01_task-lantern_run-01`. */
  stem: string;
  /** Text of the event table and of its sidecar. */
  tsv: string;
  sidecar: string;
}

export interface BidsDataset {
  folder: string;
  /** `TaskName` of the image's sidecar. */
  taskName: string;
  /** Seconds; volumes stored. */
  tr: number;
  volumes: number;
  runs: BidsRun[];
  /** File name → bytes, under the dataset's `stimuli/`. */
  stimuli?: Record<string, Uint8Array>;
}

export interface Finding {
  severity: 'error' | 'warning';
  code: string;
  where: string;
  message: string;
}

/** A 4-D NIfTI-1 header with noise as its image; zeros would compress below what the legacy validator takes. */
function stubImage(tr: number, volumes: number): Buffer {
  const header = Buffer.alloc(352);
  header.writeInt32LE(348, 0);
  const dimensions = [4, 4, 4, 4, volumes, 1, 1, 1];
  dimensions.forEach((value, index) => header.writeInt16LE(value, 40 + 2 * index));
  header.writeInt16LE(2, 70); // unsigned char
  header.writeInt16LE(8, 72); // bits per voxel
  const spacing = [1, 3, 3, 3, tr, 0, 0, 0];
  spacing.forEach((value, index) => header.writeFloatLE(value, 76 + 4 * index));
  header.writeFloatLE(352, 108); // where the image begins
  header.writeFloatLE(1, 112); // slope
  header.writeInt8(2 | 8, 123); // millimetres and seconds
  header.writeInt16LE(1, 252); // qform: scanner
  header.write('n+1\0', 344, 'latin1');
  return gzipSync(Buffer.concat([header, randomBytes(64 * volumes)]));
}

export function writeDataset(dataset: BidsDataset): void {
  const { folder, taskName, tr, volumes, runs, stimuli = {} } = dataset;
  const write = (path: string, content: string | Uint8Array) => {
    const full = join(folder, path);
    mkdirSync(dirname(full), { recursive: true });
    writeFileSync(full, content);
  };
  write(
    'dataset_description.json',
    JSON.stringify({
      Name: 'A test of event tables',
      BIDSVersion: '1.8.0',
      DatasetType: 'raw',
      License: 'CC0',
      Authors: ['Marram Lab'],
      HEDVersion: '8.3.0'
    })
  );
  write(
    'README',
    'Event tables written by the application under test, beside images that hold only noise.\n'
  );
  write('.bidsignore', '');
  for (const run of runs) {
    const subject = /^(sub-[A-Za-z0-9]+)/.exec(run.stem)?.[1];
    if (!subject) throw new Error(`A stem begins with sub-<label>, got ${run.stem}.`);
    const session = /_(ses-[A-Za-z0-9]+)/.exec(run.stem)?.[1];
    const base = [subject, session, 'func', run.stem].filter(Boolean).join('/');
    write(`${base}_bold.nii.gz`, stubImage(tr, volumes));
    write(`${base}_bold.json`, JSON.stringify({ TaskName: taskName, RepetitionTime: tr }));
    write(`${base}_events.tsv`, run.tsv);
    write(`${base}_events.json`, run.sidecar);
  }
  for (const [name, bytes] of Object.entries(stimuli)) write(`stimuli/${name}`, bytes);
}

/** What a Node program prints; one that ends with 1 for errors found still prints its report. */
const outputOf = (command: string[]): Promise<string> =>
  new Promise((done, fail) =>
    execFile(process.execPath, command, { maxBuffer: 64 << 20, timeout: 60_000 }, (error, stdout, stderr) =>
      stdout
        ? done(stdout)
        : fail(new Error(`${command[0]} printed nothing: ${error?.message ?? ''}\n${stderr}`))
    )
  );

interface LegacyIssue {
  key: string;
  files?: { file?: { relativePath?: string } | null; evidence?: string | null; reason?: string | null }[];
}

/** The legacy validator, as its command line: about a second. */
export async function legacyFindings(folder: string): Promise<Finding[]> {
  const program = join(dirname(require.resolve('bids-validator/package.json')), 'bin/bids-validator');
  const output = await outputOf([program, folder, '--json']);
  const report = JSON.parse(output) as { issues: { errors: LegacyIssue[]; warnings: LegacyIssue[] } };
  const list = (issues: LegacyIssue[], severity: Finding['severity']) =>
    issues.flatMap((issue) =>
      (issue.files?.length ? issue.files : [{}]).map((file) => ({
        severity,
        code: issue.key,
        where: file.file?.relativePath ?? '',
        message: file.evidence ?? file.reason ?? ''
      }))
    );
  return [...list(report.issues.errors, 'error'), ...list(report.issues.warnings, 'warning')];
}

/** The schema validator, a second or two. */
export async function schemaFindings(folder: string): Promise<Finding[]> {
  const program = join(import.meta.dirname, 'bids-schema.mjs');
  return JSON.parse(await outputOf([program, folder])) as Finding[];
}

/** What neither validator finds. Empty where all is well. */
export function ownFindings(run: BidsRun): Finding[] {
  const found: Finding[] = [];
  const say = (code: string, message: string) =>
    found.push({ severity: 'error', code, where: run.stem, message });
  if (run.tsv.startsWith('\uFEFF') || run.sidecar.startsWith('\uFEFF')) say('BOM', 'a byte-order mark');
  if (run.tsv.includes('\r')) say('CRLF', 'a carriage return');
  if (!run.tsv.endsWith('\n') || run.tsv.endsWith('\n\n'))
    say('LAST_LINE', 'one line end after the last row');
  const [header = '', ...rows] = run.tsv.replace(/^\uFEFF/, '').split(/\r?\n/);
  const columns = header.split('\t');
  if (new Set(columns).size !== columns.length) say('COLUMN_TWICE', header);
  let previous = -Infinity;
  for (const [index, row] of rows.entries()) {
    if (row === '' && index === rows.length - 1) continue;
    const cells = row.split('\t');
    const [onset, duration] = [Number(cells[0]), Number(cells[1])];
    if (cells.length !== columns.length) say('RAGGED', row);
    if (!Number.isFinite(onset)) say('ONSET', row);
    if (cells[1] !== 'n/a' && !(duration >= 0)) say('DURATION', row);
    if (onset < previous) say('NOT_SORTED', row);
    if (!/^-?\d+\.\d{3,}$/.test(cells[0] ?? '')) say('DECIMALS', `at least 3 decimals: ${cells[0]}`);
    previous = onset;
  }
  const described = JSON.parse(run.sidecar.replace(/^\uFEFF/, '')) as Record<string, unknown>;
  const described_ = Object.keys(described).filter((key) => key !== 'StimulusPresentation');
  for (const key of described_) if (!columns.includes(key)) say('DESCRIBED_ABSENT', key);
  for (const key of columns) {
    if (key !== 'onset' && key !== 'duration' && !described_.includes(key)) say('NOT_DESCRIBED', key);
  }
  return found;
}

/** Warnings about fields that only a scanner or a data set's owner could fill in. */
const ABOUT_THE_STUB =
  /KEY_RECOMMENDED|README|PARTICIPANTS|NO_T1W|NO_AUTHORS|TOO_FEW_AUTHORS|SLICE_TIMING|CHECK_FOR_STATIC|HED_VERSION/;

/** Both validators and our own checks on one dataset; errors, and the warnings that concern the event files. */
export async function validateDataset(
  dataset: BidsDataset
): Promise<{ errors: Finding[]; warnings: Finding[] }> {
  writeDataset(dataset);
  const [legacy, schema] = await Promise.all([
    legacyFindings(dataset.folder),
    schemaFindings(dataset.folder)
  ]);
  const all = [...legacy, ...schema, ...dataset.runs.flatMap(ownFindings)];
  return {
    errors: all.filter((one) => one.severity === 'error'),
    warnings: all.filter((one) => one.severity === 'warning' && !ABOUT_THE_STUB.test(one.code))
  };
}

interface HedModule {
  buildSchemasFromVersion(version: string): Promise<unknown>;
  parseHedString(
    text: string,
    schemas: unknown,
    definitions: boolean,
    fullCheck: boolean,
    placeholders: boolean
  ): [unknown, HedIssue[], HedIssue[]];
}
interface HedIssue {
  hedCode: string;
  message: string;
}

/** Problems of one HED string under schema 8.3.0, by the HED community's own validator. */
export async function hedFindings(text: string): Promise<string[]> {
  (globalThis as { require?: NodeJS.Require }).require ??= require;
  const hed = (await import('hed-validator')) as unknown as HedModule;
  const schemas = await hed.buildSchemasFromVersion('8.3.0');
  const [, errors, warnings] = hed.parseHedString(text, schemas, false, false, false);
  return [...errors, ...warnings].map((issue) => `${issue.hedCode}: ${issue.message}`);
}
