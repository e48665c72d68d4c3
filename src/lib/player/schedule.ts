/**
 * Document + run + profile + plan → what happens when, in absolute seconds from time zero.
 * Each time is divided from its own whole µs; nothing is summed on the way.
 */
import { compileRun, itemDuration, runLength } from '$lib/task/compile';
import type { Profile } from '$lib/task/profile';
import type { Item, ResponseWindow, Run, TaskDocument } from '$lib/task/schema';
import { toSeconds } from '$lib/task/time';
import { mapResponses, type MappedResponse } from './fingers';
import type { PlanRow } from './payload';

export interface ScheduledItem {
  /** Place in `items`. */
  order: number;
  trialId: string;
  /** 1-based, by onset. */
  trial: number;
  item: Item;
  conditionId: string | null;
  /** Seconds from time zero. */
  onset: number;
  end: number;
  /** Drawing order: later trials over earlier ones, later items of a card over earlier ones. */
  layer: number;
}

export interface ScheduledWindow {
  trialId: string;
  trial: number;
  conditionId: string | null;
  window: ResponseWindow;
  /** Seconds from time zero. */
  trialOnset: number;
  onset: number;
  end: number;
  /** Ids of the responses that count. */
  allowed: ReadonlySet<string>;
}

export interface Schedule {
  runId: string;
  /** Planned TR, seconds. */
  tr: number;
  volumes: number;
  /** End of the last stored volume, seconds. */
  scan: number;
  /** When the run is over: the scan's end, or that of the last item or window if later. */
  end: number;
  items: ScheduledItem[];
  windows: ScheduledWindow[];
  responses: MappedResponse[];
  /** SHA-256 of every picture shown. */
  assets: string[];
}

/** The whole timetable of a run, sorted by onset. Units: seconds from time zero. */
export function buildSchedule(
  doc: TaskDocument,
  run: Run,
  profile: Profile,
  row?: Pick<PlanRow, 'responses'> | null
): Schedule {
  const responses = mapResponses(doc, profile, row);
  const everyResponse = responses.map((r) => r.id);
  const items: ScheduledItem[] = [];
  const windows: ScheduledWindow[] = [];
  let layer = 0;
  for (const { trial, card, index, onset } of compileRun(doc, run).trials) {
    const of = { trialId: trial.id, trial: index, conditionId: card.condition };
    for (const item of card.items) {
      const start = onset + item.onset;
      const end = toSeconds(start + itemDuration(item, card, trial));
      items.push({ ...of, order: 0, item, onset: toSeconds(start), end, layer: layer++ });
    }
    for (const window of card.windows) {
      const start = onset + window.onset;
      windows.push({
        ...of,
        window,
        trialOnset: toSeconds(onset),
        onset: toSeconds(start),
        end: toSeconds(start + window.duration),
        allowed: new Set(window.allowed.length ? window.allowed : everyResponse)
      });
    }
  }
  items.sort((a, b) => a.onset - b.onset || a.layer - b.layer);
  items.forEach((item, order) => (item.order = order));
  windows.sort((a, b) => a.onset - b.onset || a.trial - b.trial);
  const scan = toSeconds(runLength(doc, run));
  const end = [...items, ...windows].reduce((latest, x) => Math.max(latest, x.end), scan);
  const assets = items.flatMap(({ item }) => (item.kind === 'picture' && item.asset ? [item.asset] : []));
  return {
    runId: run.id,
    tr: toSeconds(doc.brief.tr),
    volumes: run.volumes,
    scan,
    end,
    items,
    windows,
    responses,
    assets: [...new Set(assets)]
  };
}
