/** Task documents in the store: reading them back, and saving them part by part. */
import type { Knex } from 'knex';
import { z } from 'zod';
import { joinDocument, splitDocument } from '$lib/task/parts';
import type { TaskDocument } from '$lib/task/schema';
import { readDocument } from '$lib/task/upgrade';
import { assets } from '../db/repositories/assets';
import { saves } from '../db/repositories/saves';
import { tasks } from '../db/repositories/tasks';
import type { Task } from '../db/rows';
import { accept, isTaken, notFound, refuse, refuseBrokenText, type Detail } from '../errors';

export const wordsSchema = z.array(z.string().max(500)).max(500);

/** The document of a save; today's format, whatever format was stored. */
export async function documentAt(
  db: Knex,
  labId: string,
  taskId: string,
  number: number
): Promise<TaskDocument> {
  const manifest = await saves(db).manifest(labId, taskId, number);
  if (!manifest) return notFound('save of this task');
  const reading = readDocument(joinDocument(manifest, await saves(db).parts(labId, manifest)));
  if (reading.ok) return reading.document;
  const why = reading.problems.map((p) => `${p.path}: ${p.message}`).join('; ');
  throw new Error(`Save ${number} of task ${taskId} cannot be read: ${why}`);
}

export async function currentDocument(db: Knex, labId: string, taskId: string) {
  const task = (await tasks(db).find(labId, taskId)) ?? notFound('task');
  return { task, document: await documentAt(db, labId, taskId, task.saveNumber) };
}

/** A document from outside, or 422 with every problem's path. */
export function acceptDocument(value: unknown): TaskDocument {
  refuseBrokenText(value);
  const reading = readDocument(value);
  if (reading.ok) return reading.document;
  const { problems } = reading;
  const first = problems[0]!;
  const more = problems.length > 1 ? ` (and ${problems.length - 1} more)` : '';
  return refuse(
    422,
    `The task document breaks a rule at ${first.path || 'its top'}: ${first.message}${more}.`,
    {
      details: problems.slice(0, 100)
    }
  );
}

/** SHA-256 of every stimulus file that a document names, each once. */
export const assetHashes = (document: TaskDocument): string[] => [
  ...new Set(
    document.cards.flatMap((card) =>
      card.items.flatMap((i) => (i.kind === 'picture' && i.asset ? [i.asset] : []))
    )
  )
];

/** 422 naming the item when a document uses a file that is not this lab's. */
export async function checkAssets(db: Knex, labId: string, document: TaskDocument): Promise<void> {
  const named = assetHashes(document);
  if (named.length === 0) return;
  const known = new Set((await assets(db).among(labId, named)).map((a) => a.sha256));
  const details: Detail[] = [];
  document.cards.forEach((card, c) =>
    card.items.forEach((item, i) => {
      if (item.kind === 'picture' && item.asset && !known.has(item.asset))
        details.push({
          path: `cards.${c}.items.${i}.asset`,
          message: `picture ‘${item.name}’ of card ‘${card.name}’ names a file that this lab does not have`
        });
    })
  );
  if (details.length)
    refuse(
      422,
      `${details[0]!.message[0]!.toUpperCase()}${details[0]!.message.slice(1)}: upload it again, then save.`,
      {
        details
      }
    );
}

export interface SaveRequest {
  lab: string;
  task: string;
  /** The save number that the edit was made on. */
  base: number;
  document: unknown;
  /** The edits since then, in words. */
  words: string[];
  /** User id. */
  author: string;
}

/**
 * Autosave: keeps the parts that are new and one row for the save. 412 with where the task stands when somebody saved
 * in between; nothing is written then. Saving what is there already gives the present number again.
 */
export async function saveTask(
  db: Knex,
  request: SaveRequest
): Promise<{ saveNumber: number; savedAt: Date }> {
  const { lab, task: taskId, author } = request;
  const document = acceptDocument(request.document);
  const words = accept(wordsSchema, request.words);
  await checkAssets(db, lab, document);
  const { manifest, parts } = splitDocument(document);
  return withTaskLabel(document.brief.label, () =>
    db.transaction(async (trx) => {
      const task = (await tasks(trx).lock(lab, taskId)) ?? notFound('task');
      if (task.saveNumber !== request.base) return refuseStale(trx, task, request.base);
      const number = task.saveNumber + 1;
      await saves(trx).keepParts(lab, parts);
      const savedAt = await saves(trx).insert(lab, taskId, { number, manifest, author, words });
      await tasks(trx).saved(lab, taskId, {
        number,
        label: document.brief.label,
        name: document.brief.title,
        at: savedAt
      });
      return { saveNumber: number, savedAt };
    })
  );
}

async function refuseStale(db: Knex, task: Task, base: number): Promise<never> {
  const latest = (await saves(db).latest(task.lab, task.id, 1))[0]!;
  const who = latest.author ?? 'somebody whose account is gone';
  return refuse(
    412,
    `This task was saved by ${who} at ${latest.savedAt.toISOString()}: your edit was made on save ${base}, ` +
      `the task is at save ${task.saveNumber}. Nothing of yours was overwritten or lost; choose which to keep.`,
    {
      current: {
        saveNumber: task.saveNumber,
        author: latest.author,
        savedAt: latest.savedAt.toISOString()
      }
    }
  );
}

export async function withTaskLabel<T>(label: string, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (thrown) {
    if (isTaken(thrown, 'tasks_label'))
      refuse(409, `This study has a task with the label ‘${label}’ already. Choose another label.`, {
        details: [{ path: 'label', message: 'is taken in this study' }]
      });
    throw thrown;
  }
}
