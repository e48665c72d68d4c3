/** Packing a draft: seal a snapshot, gather its files and the player, make the zip. */
import type { Knex } from 'knex';
import { bundleFileName, packBundle, playerBuildOf } from '$lib/bundle/pack';
import { PackError, type PackInput } from '$lib/bundle/types';
import { hashOf } from '$lib/task/canonical';
import { defaultProfile } from '$lib/task/profile';
import type { Lab } from '../db/rows';
import { refuse } from '../errors';
import { readAsset } from './assets';
import { assetHashes, currentDocument } from './documents';
import { getProfile } from './profiles';
import { notePacking, sealSnapshot } from './revisions';
import { getStudy } from './studies';

export interface PackRequest {
  lab: Lab;
  task: string;
  kind: 'PROOF' | 'PRACTICE';
  /** Scanner profile; by default the one that the brief names, else the plain defaults. */
  profile?: string | undefined;
  by: string;
}

/** The player as one script, with its hash; made when the application is built. */
async function player(): Promise<{ script: string; build: string }> {
  const { default: script } = await import('$lib/player/standalone.ts?bundle=iife');
  return { script, build: playerBuildOf(script) };
}

export async function packDraft(
  db: Knex,
  request: PackRequest
): Promise<{ name: string; bytes: Uint8Array }> {
  const { lab, by, kind } = request;
  const { task, document } = await currentDocument(db, lab.id, request.task);
  const chosen = request.profile ?? document.brief.profile;
  const stored = chosen ? await getProfile(db, lab.id, chosen) : null;
  const profile = stored?.profile ?? defaultProfile();
  const study = await getStudy(db, lab.id, task.study);
  const revision = await sealSnapshot(db, lab.id, task.id, { document, saveNumber: task.saveNumber }, by);
  const assets = [];
  for (const sha256 of assetHashes(document)) {
    const { mime, name, bytes } = await readAsset(db, lab.id, sha256);
    assets.push({ sha256, mime, file: name, bytes });
  }
  const { script, build } = await player();
  const input: PackInput = {
    kind,
    document,
    revision: revision.hash,
    saveNumber: task.saveNumber,
    profile,
    profileHash: stored?.hash ?? hashOf(profile),
    lab: lab.name,
    study: { label: study.label, name: study.name },
    assets,
    playerScript: script,
    playerBuild: build,
    madeAt: new Date().toISOString()
  };
  const bytes = await packed(input);
  await notePacking(db, lab.id, by, {
    task: task.id,
    revision: revision.hash,
    kind,
    profile: input.profileHash,
    player: build
  });
  return { name: bundleFileName(input), bytes };
}

async function packed(input: PackInput): Promise<Uint8Array> {
  try {
    return await packBundle(input);
  } catch (thrown) {
    if (thrown instanceof PackError) return refuse(422, thrown.message);
    throw thrown;
  }
}
