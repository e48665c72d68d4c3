/**
 * What a bundle hands to the player: one JSON value in the page (`<script type="application/json" id="payload">`).
 * Pack writes it, the player checks it on reading; nothing else reaches the runtime.
 */
import { z } from 'zod';
import { profileSchema } from '$lib/task/profile';
import { documentSchema, fingerSchema } from '$lib/task/schema';

export const PAYLOAD_FORMAT = 1;
export const BUNDLE_KINDS = ['PROOF', 'PRACTICE', 'COLLECTION'] as const;

const sha256 = z.string().regex(/^[0-9a-f]{64}$/, 'a SHA-256 in hex');
/** BIDS labels: letters and digits only. */
const label = z.string().regex(/^[A-Za-z0-9]{1,60}$/, 'letters and digits only');

export const planRowSchema = z.strictObject({
  participant: label,
  session: label.nullable(),
  /** Run ids of the document; place in the list + 1 is the run index. */
  runs: z.array(z.string()).min(1).max(50),
  /** Response id → finger for this participant; a response not named keeps the document's finger. */
  responses: z.record(z.string(), fingerSchema),
  seed: z.string().max(200)
});

/** Small files are inline (base64); a large one is a sibling script that puts its base64 into `EBBLINE_DATA[sha256]`. */
export const assetSchema = z.union([
  z.strictObject({ mime: z.string(), file: z.string(), data: z.string() }),
  z.strictObject({ mime: z.string(), file: z.string(), script: z.string() })
]);

export const payloadSchema = z.strictObject({
  format: z.literal(PAYLOAD_FORMAT),
  kind: z.enum(BUNDLE_KINDS),
  document: documentSchema,
  /** SHA-256 of the document with its assets. */
  revision: sha256,
  /** Which autosave a draft was packed from; null for a sealed revision. */
  saveNumber: z.number().int().min(0).nullable(),
  profile: profileSchema,
  profileHash: sha256,
  study: z.strictObject({ label, name: z.string().max(200) }),
  lab: z.string().max(200),
  /** Empty: any participant code may be entered and the runs come in the document's order. */
  plan: z.array(planRowSchema).max(20_000),
  assets: z.record(sha256, assetSchema),
  /** Hash of the player's own script. */
  build: z.string().max(200),
  /** UTC, ISO 8601. */
  madeAt: z.iso.datetime()
});

export type BundleKind = (typeof BUNDLE_KINDS)[number];
export type PlanRow = z.infer<typeof planRowSchema>;
export type PayloadAsset = z.infer<typeof assetSchema>;
export type PlayerPayload = z.infer<typeof payloadSchema>;

export type PayloadReading = { ok: true; payload: PlayerPayload } | { ok: false; problems: string[] };

/** Reads a payload that comes from outside. Never throws: problems come back in words with their place. */
export function readPayload(value: unknown): PayloadReading {
  const read = payloadSchema.safeParse(value, { jitless: true });
  if (!read.success) {
    const problems = read.error.issues
      .slice(0, 20)
      .map((issue) => `${issue.path.map(String).join('.') || 'payload'}: ${issue.message}`);
    return { ok: false, problems };
  }
  const { document, plan } = read.data;
  const known = new Set(document.runs.map((run) => run.id));
  const problems: string[] = [];
  if (!document.runs.length) problems.push('document.runs: a bundle needs at least one run');
  plan.forEach((row, index) =>
    row.runs
      .filter((run) => !known.has(run))
      .forEach((run) => problems.push(`plan.${index}.runs: there is no run ${run} in the document`))
  );
  return problems.length ? { ok: false, problems } : { ok: true, payload: read.data };
}
