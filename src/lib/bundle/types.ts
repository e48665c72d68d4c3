/** What Pack takes in and what it refuses. */
import type { BundleKind, PlanRow } from '$lib/player/payload';
import type { Profile } from '$lib/task/profile';
import type { TaskDocument } from '$lib/task/schema';

export interface PackAsset {
  /** SHA-256 of the bytes, hex: how the document names the file. */
  sha256: string;
  mime: string;
  /** The file's own name as uploaded; any text. */
  file: string;
  bytes: Uint8Array;
}

export interface PackInput {
  kind: BundleKind;
  document: TaskDocument;
  /** Content hash of the task with its assets. */
  revision: string;
  /** Autosave a draft was packed from; null for a sealed revision. */
  saveNumber: number | null;
  profile: Profile;
  profileHash: string;
  lab: string;
  study: { label: string; name: string };
  plan?: PlanRow[];
  assets: PackAsset[];
  /** The player as one classic script. */
  playerScript: string;
  /** Instead of the player's own style sheet. */
  playerCss?: string;
  /** SHA-256 of `playerScript`. */
  playerBuild: string;
  /** UTC, ISO 8601. Passed in, so that the same input gives the same bytes. */
  madeAt: string;
}

/** Why a task cannot be packed: what was found, what is expected, how to mend it. */
export class PackError extends Error {
  override name = 'PackError';
}

/** As sidecars and the methods paragraph name the program that will run the task. */
export const softwareVersion = (input: PackInput): string => `player ${input.playerBuild.slice(0, 12)}`;
