/** What stands between a task and its bundle, before the server is asked. */
import { EngineError } from '$lib/engine/errors';
import { designReport } from '$lib/engine/design/report';
import { designInput } from '$lib/task/model';
import { noticesOf, type Notice } from '$lib/task/notices';
import type { Profile } from '$lib/task/profile';
import type { Run, TaskDocument } from '$lib/task/schema';

export interface RunReadiness {
  run: Run;
  red: Notice[];
  amber: Notice[];
}

/** Notices of every run with the profile that is chosen for the bundle. */
export const readinessOf = (document: TaskDocument, profile: Profile): RunReadiness[] =>
  document.runs.map((run) => {
    const notices = noticesOf(document, run, profile, factsOf(document, run, profile));
    return {
      run,
      red: notices.filter((n) => n.level === 'red'),
      amber: notices.filter((n) => n.level === 'amber')
    };
  });

function factsOf(document: TaskDocument, run: Run, profile: Profile) {
  try {
    return designReport(designInput(document, run, profile)).contrasts;
  } catch (error) {
    // Numbers that no design can be made of have notices of their own.
    if (error instanceof EngineError) return [];
    throw error;
  }
}

/** Why a bundle of this task would be refused or useless, in sentences; empty when it may be packed. */
export function packProblems(document: TaskDocument): string[] {
  const problems: string[] = [];
  if (document.runs.every((run) => run.trials.length === 0)) {
    problems.push('No run has a trial yet; place some on the Page first.');
  }
  for (const card of document.cards) {
    for (const item of card.items) {
      if (item.kind === 'picture' && item.asset === null) {
        problems.push(
          `The card ‘${card.name}’ has a picture item, ‘${item.name}’, with no picture chosen; choose one on the card or remove the item.`
        );
      }
    }
  }
  return problems;
}

/** The file name that the server proposes, or a plain one. */
export function fileNameOf(disposition: string | null, fallback: string): string {
  const match = /filename="?([^";]+)"?/.exec(disposition ?? '');
  return match?.[1] ?? fallback;
}
