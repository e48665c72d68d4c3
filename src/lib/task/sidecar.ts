/** The event table's sidecar: what every column means (BIDS 1.10, tabular files and events). */
import { factorsOf } from './compile';
import { textCell } from './events';
import type { Profile } from './profile';
import type { TaskDocument } from './schema';

export interface SidecarContext {
  profile: Profile;
  /** SHA-256 of the task's content, for `Code`. */
  revision: string;
  softwareVersion: string;
  /** As the browser says it; n/a in planned tables. */
  operatingSystem?: string;
}

export function eventsSidecar(doc: TaskDocument, context: SidecarContext): Record<string, unknown> {
  const { screen } = context.profile;
  const factors = factorsOf(doc);
  const byId = new Map(doc.brief.conditions.map((c) => [c.id, c]));
  const levels = Object.fromEntries(
    factors.map((f) => {
      const condition = byId.get(f.conditionId)!;
      const what = condition.description.trim() || `Trials of the condition ${condition.name}`;
      return [textCell(f.name), f.item === null ? what : `${what} (item: ${f.item})`];
    })
  );
  const hed = Object.fromEntries(
    factors.flatMap((f) => {
      const text = byId.get(f.conditionId)!.hed.trim();
      return text ? [[textCell(f.name), text]] : [];
    })
  );
  return {
    onset: {
      Description:
        'Time at which the item was estimated to be on screen or audible, from the first stored volume.',
      Units: 's'
    },
    duration: { Description: 'Time the item lasted.', Units: 's' },
    trial_type: {
      Description: 'Condition of a modelled event; n/a for items that are not modelled.',
      Levels: levels,
      ...(Object.keys(hed).length ? { HED: hed } : {})
    },
    response_time: {
      Description:
        'Time of the response from the onset of this row; negative if before it, n/a if there was none.',
      Units: 's'
    },
    stim_file: { Description: 'File shown, under stimuli/ of the dataset; n/a where the item has no file.' },
    item: { Description: 'Name of the item on its trial card.' },
    trial: { Description: 'Number of the trial in the run, from 1, in order of planned onset.' },
    response: { Description: 'Named response given; n/a if there was none.' },
    correct: {
      Description: 'Whether the response was the correct one of its window.',
      Levels: {
        correct: 'the correct response was given',
        wrong: 'another response was given',
        missing: 'no response was given within the window'
      }
    },
    planned_onset: { Description: 'Onset as planned, from the first stored volume.', Units: 's' },
    StimulusPresentation: {
      OperatingSystem: context.operatingSystem ?? 'n/a',
      SoftwareName: 'Ebbline',
      SoftwareVersion: context.softwareVersion,
      Code: `urn:sha256:${context.revision}`,
      ScreenDistance: screen.distance,
      ScreenSize: [screen.width, screen.height],
      ScreenRefreshRate: screen.refreshRate,
      ScreenResolution: [screen.resolution.width, screen.resolution.height]
    }
  };
}

/** The sidecar as text, ending in a line feed. */
export const sidecarText = (sidecar: Record<string, unknown>): string =>
  JSON.stringify(sidecar, null, 2) + '\n';
