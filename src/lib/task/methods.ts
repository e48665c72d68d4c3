/** A paragraph for the methods section, from what the task and the profile say; nothing is made up. */
import { compileRun } from './compile';
import type { Profile } from './profile';
import type { TaskDocument } from './schema';
import { clockText, secondsText, toSeconds } from './time';

export function methodsText(doc: TaskDocument, profile: Profile, revision: string, version: string): string {
  const { brief } = doc;
  const runs = doc.runs.map((run) => {
    const { trials, events } = compileRun(doc, run);
    const counts = brief.conditions
      .map((c) => ({ name: c.name, n: events.filter((e) => e.conditionId === c.id).length }))
      .filter((c) => c.n > 0)
      .map((c) => `${c.n} ${c.name}`)
      .join(', ');
    return `${run.name} had ${run.volumes} stored volumes (${clockText(run.volumes * brief.tr)}) and ${trials.length} trials${counts ? ` (modelled events: ${counts})` : ''}.`;
  });
  const { screen } = profile;
  const before = profile.pulsesBeforeZero + profile.silentDummies;
  return [
    `The task ‘${brief.title}’ was planned and run with Ebbline ${version} (content SHA-256 ${revision}).`,
    `TR was ${secondsText(brief.tr)} s. ${runs.join(' ')}`,
    before
      ? `${before} dummy volumes (${profile.pulsesBeforeZero} with a pulse) preceded the first stored volume, at which time zero lies.`
      : 'Time zero lies at the first stored volume.',
    `Predicted responses were the double gamma of Friston et al. (1998, Magn Reson Med 39:41–52), convolved in closed form and taken ${profile.sliceReference * 100} % into each acquisition; the high-pass cutoff was ${brief.highPass} s and the assumed noise AR(1) with ${brief.noise.rho} at ${brief.noise.rhoTr} s.`,
    `Stimuli were shown on a screen of ${screen.width} m × ${screen.height} m at ${screen.distance} m (${screen.resolution.width} × ${screen.resolution.height} pixels, ${screen.refreshRate} Hz); each item was drawn in the frame nearest to its planned time. Key times are the browser’s; a USB device adds 1–8 ms (common practice, not measured here).`,
    profile.displayDelay.date
      ? `The measured display delay of ${secondsText(Math.round(profile.displayDelay.seconds * 1e6))} s (${profile.displayDelay.date}) is included in onsets.`
      : 'No display delay was measured.',
    doc.cards.some((c) => c.items.some((i) => i.kind === 'sound'))
      ? profile.soundDelay.date
        ? `The measured sound delay was ${toSeconds(Math.round(profile.soundDelay.seconds * 1e6))} s (${profile.soundDelay.date}).`
        : 'No sound delay was measured.'
      : ''
  ]
    .filter(Boolean)
    .join('\n\n');
}
