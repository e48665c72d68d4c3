/**
 * Task + profile + player → the zip that goes to the stimulus computer. No DOM, no server, no clock and no random
 * numbers: the same input gives the same bytes.
 */
import JSZip from 'jszip';
import { PAYLOAD_FORMAT, readPayload, type PlayerPayload } from '$lib/player/payload';
import { PLAYER_CSS } from '$lib/player/render/style';
import { sha256Hex } from '$lib/task/canonical';
import { methodsText } from '$lib/task/methods';
import { consoleCard } from './console-card';
import { CHECKSUMS_FILE, checksumsText, makeManifest, MANIFEST_FILE, sortedPaths } from './manifest';
import { bundlePage } from './page';
import { runList } from './run-list';
import { packStimuli, type PackedStimuli } from './stimuli';
import { plannedTables } from './tables';
import { englishTexts, type BundleTexts } from './texts';
import { PackError, softwareVersion, type PackInput } from './types';

/** The date that every entry of the zip bears: the first that a zip can hold. */
const ENTRY_DATE = new Date(Date.UTC(1980, 0, 1));
/** Packed already; to deflate them again takes time and saves nothing. */
const COMPRESSED = /\.(png|jpe?g|gif|webp|avif|mp3|ogg|mp4|webm)$/;

/** `playerBuild` of a player script. */
export const playerBuildOf = (script: string): string => sha256Hex(script);

/** File name that the zip is offered under. */
export const bundleFileName = (input: Pick<PackInput, 'document' | 'kind' | 'revision'>): string =>
  `task-${input.document.brief.label}_${input.kind}_${input.revision.slice(0, 8)}.zip`;

/** Every file of the bundle, path → bytes, MANIFEST.json included. Throws `PackError` with the way out. */
export function bundleFiles(input: PackInput, texts: BundleTexts = englishTexts): Record<string, Uint8Array> {
  if (playerBuildOf(input.playerScript) !== input.playerBuild)
    throw new PackError(
      `The player's build is given as ${input.playerBuild}, but its script has SHA-256 ${playerBuildOf(input.playerScript)}: pass the script that the build names.`
    );
  const stimuli = packStimuli(input.document, input.assets);
  const payload = makePayload(input, stimuli);
  const player = { script: input.playerScript, css: input.playerCss ?? PLAYER_CSS };
  const mark = texts.mark(input.kind);
  const methods = methodsText(input.document, input.profile, input.revision, softwareVersion(input));
  const content: Record<string, Uint8Array | string> = {
    'index.html': bundlePage(payload, player, texts),
    'console-card.html': consoleCard(input, texts),
    'run-list.html': runList(input, texts),
    'methods.txt': [mark, methods].filter(Boolean).join('\n\n') + '\n',
    ...plannedTables(input, stimuli.names),
    ...stimuli.files
  };
  content['README.txt'] = texts.readMe({
    kind: input.kind,
    title: input.document.brief.title,
    mark,
    files: texts.contents(Object.keys(stimuli.names).length > 0)
  });
  const encoder = new TextEncoder();
  const files: Record<string, Uint8Array> = {};
  for (const path of sortedPaths(content)) {
    const data = content[path]!;
    files[path] = typeof data === 'string' ? encoder.encode(data) : data;
  }
  files[CHECKSUMS_FILE] = encoder.encode(checksumsText(files));
  files[MANIFEST_FILE] = encoder.encode(JSON.stringify(makeManifest(input, files), null, 2) + '\n');
  return files;
}

/** The bundle as one zip. */
export async function packBundle(input: PackInput, texts: BundleTexts = englishTexts): Promise<Uint8Array> {
  const files = bundleFiles(input, texts);
  const zip = new JSZip();
  for (const path of sortedPaths(files)) {
    const compression = COMPRESSED.test(path) ? 'STORE' : 'DEFLATE';
    zip.file(path, files[path]!, { date: ENTRY_DATE, createFolders: false, compression });
  }
  return zip.generateAsync({ type: 'uint8array', platform: 'DOS', compressionOptions: { level: 6 } });
}

function makePayload(input: PackInput, stimuli: PackedStimuli): PlayerPayload {
  const payload: PlayerPayload = {
    format: PAYLOAD_FORMAT,
    kind: input.kind,
    document: input.document,
    revision: input.revision,
    saveNumber: input.saveNumber,
    profile: input.profile,
    profileHash: input.profileHash,
    study: input.study,
    lab: input.lab,
    plan: input.plan ?? [],
    assets: stimuli.assets,
    build: input.playerBuild,
    madeAt: input.madeAt
  };
  // What the player would refuse at the scanner is refused here, where it can still be mended.
  const read = readPayload(payload);
  if (!read.ok) throw new PackError(`The player would refuse this bundle: ${read.problems.join('; ')}.`);
  return read.payload;
}
