/** One run of a task: import from an event table, planned tables, the numbers of its design. */
import type { Knex } from 'knex';
import { z } from 'zod';
import { driftCount } from '$lib/engine/noise/drift';
import { designReport } from '$lib/engine/design/report';
import { settingFor } from '$lib/engine/design/setting';
import { eventsTsv, plannedEvents } from '$lib/task/events';
import { decodeTable, importEventTable, type ImportReport } from '$lib/task/import';
import { designInput } from '$lib/task/model';
import { noticesOf } from '$lib/task/notices';
import { defaultProfile, type Profile } from '$lib/task/profile';
import { MAX_VOLUMES, type Run, type TaskDocument } from '$lib/task/schema';
import { eventsSidecar, sidecarText } from '$lib/task/sidecar';
import { profiles } from '../db/repositories/profiles';
import { notFound, refuse } from '../errors';
import { currentDocument, saveTask } from './documents';
import { revisionHash } from './revisions';

export const importQuery = z.object({
  volumes: z.coerce.number().int().min(1).max(MAX_VOLUMES).optional(),
  name: z.string().trim().min(1).max(60).optional()
});

export interface Imported {
  saveNumber: number;
  run: string;
  report: ImportReport;
}

/** An event table becomes a run of its own; a table that cannot be read changes nothing. */
export async function importRun(
  db: Knex,
  where: { lab: string; task: string; author: string },
  bytes: Uint8Array,
  options: z.infer<typeof importQuery>
): Promise<Imported> {
  const text = decodeTable(bytes);
  if (!text.ok) return refuse(422, text.message);
  const { task, document } = await currentDocument(db, where.lab, where.task);
  const result = importEventTable(document, text.text, options);
  if (!result.ok) return refuse(422, result.message);
  const { edit, report } = result;
  const request = { ...where, base: task.saveNumber, document: edit.document, words: [edit.words] };
  const { saveNumber } = await saveTask(db, request);
  return { saveNumber, run: edit.runId, report };
}

interface RunInTask {
  document: TaskDocument;
  run: Run;
  profile: Profile | null;
}

async function runOf(db: Knex, labId: string, taskId: string, runId: string): Promise<RunInTask> {
  const { document } = await currentDocument(db, labId, taskId);
  const run = document.runs.find((r) => r.id === runId) ?? notFound('run');
  const wanted = document.brief.profile;
  const profile = wanted ? ((await profiles(db).find(labId, wanted))?.profile ?? null) : null;
  return { document, run, profile };
}

/** The planned event table. No stimulus files go with it, so `stim_file` is n/a. */
export async function plannedTable(db: Knex, labId: string, taskId: string, runId: string): Promise<string> {
  const { document, run } = await runOf(db, labId, taskId, runId);
  return eventsTsv(plannedEvents(document, run));
}

export async function plannedSidecar(
  db: Knex,
  labId: string,
  taskId: string,
  runId: string
): Promise<string> {
  const { document, profile } = await runOf(db, labId, taskId, runId);
  return sidecarText(
    eventsSidecar(document, {
      profile: profile ?? defaultProfile(),
      revision: revisionHash(document),
      softwareVersion: 'n/a (planned table)'
    })
  );
}

export const designQuery = z.object({
  response: z.enum(['double-gamma'], 'double-gamma').default('double-gamma'),
  basis: z.enum(['canonical'], 'canonical').default('canonical'),
  noise: z.enum(['task', 'white'], 'task (as the brief says) or white').default('task')
});

/** Volumes × columns that are still reckoned within a request; more would keep everybody else waiting. */
const MAX_CELLS = 5_000_000;
const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);

/** Regressors, nuisance, efficiency, inflation, correlations and notices of a run. Seconds; null: not finite. */
export async function runDesign(
  db: Knex,
  labId: string,
  taskId: string,
  runId: string,
  query: z.infer<typeof designQuery>
) {
  const { document, run, profile } = await runOf(db, labId, taskId, runId);
  const input = designInput(document, run, profile ?? defaultProfile());
  const columns = input.columns.length + 1 + driftCount(run.volumes, input.tr, input.highPass);
  if (columns * run.volumes > MAX_CELLS)
    refuse(
      422,
      `A design of ${run.volumes} volumes and ${columns} columns is too large to be reckoned here (${MAX_CELLS.toLocaleString('en')} cells at most). Raise the high-pass cutoff of ${input.highPass} s or take fewer volumes.`
    );
  const design = { ...input, noise: query.noise === 'white' ? ({ kind: 'white' } as const) : input.noise };
  const report = designReport(design);
  const plain = (column: { name: string; values: Float64Array }) => ({
    name: column.name,
    values: Array.from(column.values)
  });
  return {
    tr: input.tr,
    volumes: run.volumes,
    sampling: Array.from(input.times),
    regressors: input.columns.map(plain),
    nuisance: settingFor(design).nuisance.map(plain),
    contrasts: report.contrasts.map((c) => ({
      name: c.name,
      weights: [...c.weights],
      estimable: c.estimable,
      efficiency: c.efficiency,
      confounded: [...c.confounded]
    })),
    vif: report.vif.map((v) => ({ name: v.name, value: finite(v.value) })),
    vifConditions: report.vifConditions.map((v) => ({ name: v.name, value: finite(v.value) })),
    correlations: report.correlations.map((row) => row.map(finite)),
    condition: finite(report.condition),
    notices: noticesOf(document, run, profile, report.contrasts).map((n) => ({
      id: n.id,
      level: n.level,
      title: n.title,
      reason: n.reason,
      figure: n.figure,
      spot: n.spot
    }))
  };
}
