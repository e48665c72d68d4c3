/** A lab's home: its studies and tasks, and what was done last. */
import type { Knex } from 'knex';
import { audit, type AuditEntry } from '../db/repositories/audit';
import { packedAt, recentSaves } from '../db/repositories/changes';
import { studies } from '../db/repositories/studies';
import { tasks } from '../db/repositories/tasks';

export interface DeskTask {
  id: string;
  name: string;
  label: string;
  study: { id: string; name: string };
  /** Sealing and sign-off are not part of a draft's life yet, so every task is one. */
  state: 'draft';
  saveNumber: number;
  /** Save that was packed last, or null. */
  packed: number | null;
  updatedAt: Date;
}
export interface DeskChange {
  at: Date;
  actor: string | null;
  words: string;
  /** The task it happened in, if it did. */
  task: { id: string; name: string } | null;
}

const SHOWN = 12;

export async function loadDesk(db: Knex, labId: string, studyId?: string) {
  const [allStudies, allTasks, packed] = await Promise.all([
    studies(db).list(labId),
    tasks(db).list(labId, studyId),
    packedAt(db, labId)
  ]);
  const named = new Map(allStudies.map((study) => [study.id, study]));
  const shown: DeskTask[] = allTasks.flatMap((task) => {
    const study = named.get(task.study);
    if (!study) return []; // its study was removed at this moment
    const { id, name, label, saveNumber, updatedAt } = task;
    return [
      {
        id,
        name,
        label,
        saveNumber,
        updatedAt,
        state: 'draft' as const,
        study: { id: study.id, name: study.name },
        packed: packed.get(id) ?? null
      }
    ];
  });
  return { studies: allStudies, tasks: shown };
}

/** Saves of tasks and acts in the lab, newest first. */
export async function recentChanges(db: Knex, labId: string): Promise<DeskChange[]> {
  const [saves, acts] = await Promise.all([recentSaves(db, labId, SHOWN), audit(db).latest(labId, SHOWN)]);
  const ofTasks: DeskChange[] = saves.map((save) => ({
    at: save.savedAt,
    actor: save.author,
    words: inFew(save.words),
    task: { id: save.task, name: save.name }
  }));
  const ofLab = acts.flatMap((act) => {
    const words = wordsOf(act);
    return words ? [{ at: act.at, actor: act.actor, words, task: null }] : [];
  });
  return [...ofTasks, ...ofLab].sort((a, b) => b.at.getTime() - a.at.getTime()).slice(0, SHOWN);
}

/** The words of a save's edits as the beginning of a sentence. */
function inFew(words: string[]): string {
  const few =
    words.length > 2 ? `${words[0]}, and ${words.length - 1} more edits` : words.join('; ') || 'saved';
  return capital(few);
}
const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1);

/** An audit entry as a sentence; null for what the saves tell already. */
function wordsOf({ action, details }: AuditEntry): string | null {
  const say = (name: string) => String(details[name] ?? '');
  switch (action) {
    case 'lab made':
      return `Made the lab ‘${say('name')}’`;
    case 'lab renamed':
      return `Named the lab ‘${say('name')}’`;
    case 'member added':
      return `Added ${say('email')} as ${say('role')}`;
    case 'member changed':
      return details.role
        ? `Made ${say('email')} ${say('role')}`
        : `Changed what ${say('email')} may sign off`;
    case 'member removed':
      return `Removed ${say('email')}`;
    case 'study made':
      return `Made the study ‘${say('name')}’`;
    case 'study changed':
      return 'Changed a study';
    case 'study removed':
      return `Removed the study ‘${say('name')}’`;
    case 'task made':
      return null;
    case 'task removed':
      return `Removed the task ‘${say('name')}’`;
    default:
      return capital(action);
  }
}
