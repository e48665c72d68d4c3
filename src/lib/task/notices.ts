/** Notices: what is wrong or risky with a run, each with its reason, the figure behind it and the spot. */
import { pushOverlap, setVolumes, type Edit } from './commands';
import { compileRun, runLength, type CompiledRun } from './compile';
import { isReckonable } from './model';
import type { Profile } from './profile';
import type { Run, TaskDocument } from './schema';
import { secondsText } from './time';

export interface Notice {
  /** Stable while the cause stays: kind and place. */
  id: string;
  level: 'red' | 'amber';
  title: string;
  /** Why it matters, in plain words. */
  reason: string;
  /** The figure behind it, with its unit. */
  figure: string;
  spot:
    | { at: 'trial'; runId: string; trialId: string }
    | { at: 'run'; runId: string }
    | { at: 'brief' }
    | { at: 'card'; cardId: string }
    | { at: 'profile' };
  /** A one-click mend; it is an ordinary edit and can be undone. */
  mend?: { label: string; edit: () => Edit };
}

/** The part of the engine's design report that notices read. */
export interface ContrastFacts {
  name: string;
  estimable: boolean;
  confounded: readonly string[];
}

/** What the response needs after the last event to be sampled while it falls back, µs. */
export const TAIL = 12_000_000;

type Check = (context: Context) => Notice[];
interface Context {
  doc: TaskDocument;
  run: Run;
  profile: Profile | null;
  contrasts: readonly ContrastFacts[];
  compiled: CompiledRun;
}

/** All notices of a run, the red ones first. `contrasts` come from the engine's report on the same run. */
export function noticesOf(
  doc: TaskDocument,
  run: Run,
  profile: Profile | null,
  contrasts: readonly ContrastFacts[] = [],
  compiled: CompiledRun = compileRun(doc, run)
): Notice[] {
  const context: Context = { doc, run, profile, contrasts, compiled };
  return CHECKS.flatMap((check) => check(context)).sort(
    (a, b) => Number(b.level === 'red') - Number(a.level === 'red')
  );
}

const overlaps: Check = ({ doc, run, compiled }) => {
  let end = -Infinity;
  let last = 0;
  return compiled.trials.flatMap((t): Notice[] => {
    const by = end - t.onset;
    const before = last;
    if (t.end > end) {
      end = t.end;
      last = t.index;
    }
    if (by <= 0) return [];
    return [
      {
        id: `overlap ${t.trial.id}`,
        level: 'red',
        title: `Trial ${before} overlaps trial ${t.index}`,
        reason:
          'The second begins before the first has ended: both would be on screen and their windows compete.',
        figure: `${secondsText(by)} s`,
        spot: { at: 'trial', runId: run.id, trialId: t.trial.id },
        mend: {
          label: `Push what follows by ${secondsText(by)} s`,
          edit: () => pushOverlap(doc, run.id, t.trial.id)
        }
      }
    ];
  });
};

const tooLong: Check = ({ doc, run, compiled }) => {
  const scan = runLength(doc, run);
  const late = compiled.trials.filter((t) => t.end > scan);
  const first = late[0];
  if (!first) return [];
  const end = Math.max(...late.map((t) => t.end));
  const needed = Math.ceil(end / doc.brief.tr);
  return [
    {
      id: 'too long',
      level: 'red',
      title: `${run.name} is longer than its volumes`,
      reason: `${late.length} ${late.length === 1 ? 'trial ends' : 'trials end'} after the scan: the last at ${secondsText(end)} s, the scan at ${secondsText(scan)} s.`,
      figure: `${secondsText(end - scan)} s too long`,
      spot: { at: 'trial', runId: run.id, trialId: first.trial.id },
      mend: { label: `Make it ${needed} volumes`, edit: () => setVolumes(doc, run.id, needed) }
    }
  ];
};

const beforeZero: Check = ({ run, compiled }) => {
  const early = compiled.trials.filter((t) => t.onset < 0);
  const first = early[0];
  if (!first) return [];
  return [
    {
      id: 'before zero',
      level: 'amber',
      title: `${early.length === 1 ? 'A trial begins' : `${early.length} trials begin`} before the first stored volume`,
      reason:
        'It can be shown only if the scanner sends pulses before the first stored volume (dummies with pulses).',
      figure: `${secondsText(first.onset)} s`,
      spot: { at: 'trial', runId: run.id, trialId: first.trial.id }
    }
  ];
};

const shortTail: Check = ({ doc, run, compiled }) => {
  const last = compiled.events.reduce((end, e) => Math.max(end, e.onset + e.duration), -Infinity);
  const scan = runLength(doc, run);
  const tail = scan - last;
  if (compiled.events.length === 0 || tail >= TAIL || tail < 0) return [];
  const needed = Math.ceil((last + TAIL) / doc.brief.tr);
  const event = compiled.events.at(-1)!;
  return [
    {
      id: 'short tail',
      level: 'amber',
      title: 'The scan ends before the last response has',
      reason:
        'The response peaks about 5 s after an event and falls back by about 12 s; what is not scanned is lost.',
      figure: `${secondsText(tail)} s after the last modelled event, 12 s wanted`,
      spot: { at: 'trial', runId: run.id, trialId: event.trialId },
      mend: { label: `Make it ${needed} volumes`, edit: () => setVolumes(doc, run.id, needed) }
    }
  ];
};

const keyClash: Check = ({ profile }) => {
  const clash = profile?.responseKeys.find((k) => k.code === profile.triggerKey);
  if (!profile || !clash) return [];
  return [
    {
      id: 'key clash',
      level: 'red',
      title: 'A response key is also the trigger key',
      reason: `A press of ${clash.finger.replace('-', ' ')} could not be told from a pulse. Give the scanner profile another key.`,
      figure: clash.code,
      spot: { at: 'profile' }
    }
  ];
};

const noKey: Check = ({ doc, profile }) => {
  if (!profile) return [];
  const fingers = new Set(profile.responseKeys.map((k) => k.finger));
  return doc.brief.responses
    .filter((r) => !fingers.has(r.finger))
    .map((r) => ({
      id: `no key ${r.id}`,
      level: 'red' as const,
      title: `Response ‘${r.name}’ has no key`,
      reason: `It is given with the ${r.finger.replace('-', ' ')}, for which the scanner profile has learned no key.`,
      figure: r.finger.replace('-', ' '),
      spot: { at: 'brief' as const }
    }));
};

const sharedFinger: Check = ({ doc }) => {
  const { responses } = doc.brief;
  return responses.flatMap((r, i): Notice[] => {
    const other = responses.slice(0, i).find((o) => o.finger === r.finger);
    if (!other) return [];
    return [
      {
        id: `shared finger ${r.id}`,
        level: 'red',
        title: `Responses ‘${other.name}’ and ‘${r.name}’ share a finger`,
        reason: 'One press could mean either. Give each response a finger of its own.',
        figure: r.finger.replace('-', ' '),
        spot: { at: 'brief' }
      }
    ];
  });
};

const cannotEstimate: Check = ({ contrasts }) =>
  contrasts
    .filter((c) => !c.estimable)
    .map((c) => ({
      id: `not estimable ${c.name}`,
      level: 'red' as const,
      title: `‘${c.name}’ cannot be estimated`,
      reason: c.confounded.length
        ? `On this run ${c.confounded.join(', ')} cannot be told apart, or have no trials.`
        : 'No trial of this run contributes to it.',
      figure: 'efficiency 0',
      spot: { at: 'brief' as const }
    }));

const noPicture: Check = ({ doc, compiled }) => {
  const used = new Set(compiled.trials.map((t) => t.card.id));
  return doc.cards
    .filter((c) => used.has(c.id))
    .flatMap((card) =>
      card.items
        .filter((i) => i.kind === 'picture' && i.asset === null)
        .map((item) => ({
          id: `no picture ${item.id}`,
          level: 'red' as const,
          title: `${card.name}: ‘${item.name}’ has no picture`,
          reason: 'Nothing would be shown. Upload a picture on the card, or remove the item.',
          figure: 'no file',
          spot: { at: 'card' as const, cardId: card.id }
        }))
    );
};

const tooLarge: Check = ({ doc, run }) =>
  isReckonable(doc, run)
    ? []
    : [
        {
          id: 'too large',
          level: 'amber',
          title: `${run.name} is too large for its design numbers`,
          reason:
            'So long a scan with so short a high-pass cutoff has too many drift columns. Split the run, or raise the cutoff.',
          figure: `${run.volumes.toLocaleString('en')} volumes, cutoff ${doc.brief.highPass} s`,
          spot: { at: 'run', runId: run.id }
        }
      ];

const CHECKS: readonly Check[] = [
  overlaps,
  tooLong,
  keyClash,
  noKey,
  sharedFinger,
  cannotEstimate,
  noPicture,
  beforeZero,
  shortTail,
  tooLarge
];
