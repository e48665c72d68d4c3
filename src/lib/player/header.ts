/** The log's first line: what was run, with what, where and by whom. */
import { hashOf } from '$lib/task/canonical';
import type { Profile } from '$lib/task/profile';
import type { Run, TaskDocument } from '$lib/task/schema';
import { toSeconds } from '$lib/task/time';
import type { CheckItem } from './self-check';
import { mapResponses } from './fingers';
import { LOG_FORMAT, type LogHeader, type ScreenFacts, type Timing } from './log-lines';
import type { PlanRow } from './payload';

export interface HeaderInput {
  kind: LogHeader['kind'];
  simulated: boolean;
  document: TaskDocument;
  revision?: string;
  saveNumber?: number | null;
  profile: Profile;
  profileHash?: string;
  build?: string;
  lab?: string;
  study?: string;
  run: Run;
  /** 1-based; the place in the plan's list, else in the document. */
  runIndex?: number;
  row: PlanRow | null;
  participant?: string;
  session?: string | null;
  attempt?: number;
  operator?: string;
  timing: Timing;
  browser?: string;
  screen?: ScreenFacts | null;
  check?: CheckItem[];
  started: Date;
  zone?: string;
}

export function makeHeader(i: HeaderInput): LogHeader {
  const { profile, document: doc, row } = i;
  const tr = toSeconds(doc.brief.tr);
  return {
    type: 'header',
    format: LOG_FORMAT,
    kind: i.kind,
    simulated: i.simulated,
    revision: i.revision ?? hashOf(doc),
    saveNumber: i.saveNumber ?? null,
    profile: { name: profile.name, hash: i.profileHash ?? hashOf(profile) },
    build: i.build ?? '',
    lab: i.lab ?? '',
    study: i.study ?? '',
    task: doc.brief.label,
    participant: i.participant ?? row?.participant ?? 'rehearsal',
    session: i.session ?? row?.session ?? null,
    run: { id: i.run.id, name: i.run.name, index: i.runIndex ?? doc.runs.indexOf(i.run) + 1 },
    attempt: i.attempt ?? 1,
    operator: i.operator ?? '',
    order: row ? 'plan' : 'document',
    seed: row?.seed ?? '',
    responses: mapResponses(doc, profile, row),
    triggerKey: profile.triggerKey,
    pulses: {
      ...profile.pulses,
      beforeZero: profile.pulsesBeforeZero,
      acquisitionTime: Math.min(tr, profile.acquisitionTime ?? tr)
    },
    tr,
    volumes: i.run.volumes,
    timing: i.timing,
    delays: {
      display: profile.displayDelay.seconds,
      sound: profile.soundDelay.seconds,
      device: profile.deviceDelay.seconds
    },
    browser: i.browser ?? '',
    screen: i.screen ?? null,
    check: i.check ?? [],
    started: {
      utc: i.started.toISOString(),
      offsetMinutes: -i.started.getTimezoneOffset(),
      zone: i.zone ?? '',
      caveat: "By this computer's own clock, which nobody has checked."
    }
  };
}
