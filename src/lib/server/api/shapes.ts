/** What the API's answers look like. */
import { z } from 'zod';
import { profileSchema } from '$lib/task/profile';
import { documentSchema } from '$lib/task/schema';
import { roleSchema } from '../services/labs';
import { moment } from './endpoint';

export const list = <T extends z.ZodType>(item: T) =>
  z.object({ items: z.array(item), next: z.string().nullable() });
/** Lists here are short enough to come whole. */
export const whole = <T>(items: T[]) => ({ items, next: null });

const id = z.uuid();
export const labParam = z.object({ lab: z.string() });
export const studyParam = z.object({ study: z.string() });
export const taskParam = z.object({ task: z.string() });
export const profileParam = z.object({ profile: z.string() });

export const meShape = z.object({ id, email: z.string(), name: z.string() });
export const labShape = z.object({ id, name: z.string(), demo: z.boolean() });
export const labWithRoleShape = labShape.extend({ role: roleSchema });
export const memberShape = z.object({
  id,
  email: z.string(),
  name: z.string(),
  role: roleSchema,
  deputy: z.boolean(),
  since: moment
});
export const studyShape = z.object({ id, lab: id, label: z.string(), name: z.string() });
export const taskShape = z.object({
  id,
  lab: id,
  study: id,
  label: z.string(),
  name: z.string(),
  saveNumber: z.number().int(),
  updatedAt: moment
});
export const profileShape = z.object({
  id,
  version: z.number().int(),
  hash: z.string(),
  savedAt: moment,
  profile: profileSchema
});
export const saveShape = z.object({ saveNumber: z.number().int(), savedAt: moment });
export const documentShape = z.object({ saveNumber: z.number().int(), document: documentSchema });
export const assetShape = z.object({
  sha256: z.string(),
  mime: z.string(),
  size: z.number().int(),
  name: z.string(),
  note: z.string(),
  redistributable: z.boolean()
});
export const rehearsalShape = z.object({
  id,
  saveNumber: z.number().int(),
  run: z.string(),
  author: z.string().nullable(),
  at: moment,
  report: z.unknown()
});
export const revisionShape = z.object({
  id,
  task: id,
  hash: z.string(),
  saveNumber: z.number().int(),
  sealedAt: moment
});
export const runParam = z.object({ task: z.string(), run: z.string() });
