/** `events/`: for each run the planned event table with its sidecar, and a table for each condition. */
import { conditionTsvs, eventsTsv, plannedEvents, type StimFiles } from '$lib/task/events';
import { eventsSidecar, sidecarText } from '$lib/task/sidecar';
import { plainName, uniqueName } from './names';
import { softwareVersion, type PackInput } from './types';

/** Path → text. Without `sub-`: a plan belongs to the task; a performed table names its participant. */
export function plannedTables(input: PackInput, stimFiles: StimFiles): Record<string, string> {
  const { document, profile, revision } = input;
  const sidecar = sidecarText(
    eventsSidecar(document, { profile, revision, softwareVersion: softwareVersion(input) })
  );
  const files: Record<string, string> = {};
  document.runs.forEach((run, place) => {
    const stem = `task-${document.brief.label}_run-${place + 1}`;
    files[`events/${stem}_events.tsv`] = eventsTsv(plannedEvents(document, run, stimFiles));
    files[`events/${stem}_events.json`] = sidecar;
    const taken = new Set<string>();
    conditionTsvs(document, run).forEach(({ trialType, text }, index) => {
      const name = plainName(trialType) || `condition-${index + 1}`;
      files[`events/conditions/${uniqueName(`${stem}_${name}.tsv`, taken)}`] = text;
    });
  });
  return files;
}
