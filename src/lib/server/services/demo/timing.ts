/** Order and gaps for a run of the demo lab, by the application's own timing search with a seed. */
import { Search, type SearchRules } from '$lib/engine/search';
import { adoptTrials, type Edit } from '$lib/task/commands';
import { contrastRow, factorsOf } from '$lib/task/compile';
import { RESPONSE, runTimes } from '$lib/task/model';
import type { Profile } from '$lib/task/profile';
import type { TaskDocument } from '$lib/task/schema';
import { toMicros, toSeconds } from '$lib/task/time';

/** Few moves: a demo should leave the search something to gain. */
const MOVES = 400;

export interface Jitter {
  /** Trials of each card, in the order of the document's cards. */
  counts: number[];
  /** Seconds. */
  gapMin: number;
  gapMean: number;
  gapMax: number;
  leadIn: number;
  leadOut: number;
}

/** Fill a run with seeded, jittered trials on a TR/4 grid. */
export function fillRun(
  doc: TaskDocument,
  runId: string,
  profile: Profile,
  { counts, ...gaps }: Jitter,
  seed: string
): Edit {
  const run = doc.runs.find((r) => r.id === runId)!;
  const factors = factorsOf(doc);
  const tr = toSeconds(doc.brief.tr);
  const rules: SearchRules = {
    lengthSeconds: run.volumes * tr,
    volumes: run.volumes,
    tr,
    grid: tr / 4,
    counts,
    durations: doc.cards.map((c) => toSeconds(c.duration)),
    maxInARow: 2,
    ...gaps
  };
  const search = new Search(
    {
      rules,
      response: RESPONSE,
      times: runTimes(doc, run, profile),
      highPass: doc.brief.highPass,
      noise: doc.brief.noise,
      contrasts: doc.brief.contrasts.map((c) => contrastRow(c, factors)),
      modelled: doc.cards.map((card) =>
        card.items
          .filter((item) => item.modelled)
          .map((item) => ({
            offset: toSeconds(item.onset),
            duration: toSeconds(item.duration),
            column: factors.findIndex((f) => f.conditionId === card.condition)
          }))
      )
    },
    seed
  );
  search.step({ iterations: MOVES });
  const { order, onsets } = search.best();
  const trials = order.map((kind, k) => ({ card: doc.cards[kind]!.id, onset: toMicros(onsets[k]!) }));
  return adoptTrials(
    doc,
    runId,
    trials,
    `filled ${run.name} with ${trials.length} jittered trials (seed ‘${seed}’)`
  );
}
