/**
 * Every sentence that the operator reads on paper or in the bundle's text files, in one place: another language is
 * another object of this shape.
 */
import type { BundleKind } from '$lib/player/payload';
import type { Profile } from '$lib/task/profile';
import type { ScanFacts } from './scan-facts';

export interface BundleTexts {
  lang: string;
  /** Shown on every screen and paper; null for a collection bundle. */
  mark(kind: BundleKind): string | null;
  /** Stands in the page until the player has started. */
  notStarted: string;
  noScript: string;
  consoleCard: string;
  runList: string;
  typeAtConsole: string;
  pulseSetting(profile: Profile): string;
  zero(facts: ScanFacts): string;
  labels: Record<
    | 'task'
    | 'study'
    | 'lab'
    | 'revision'
    | 'profile'
    | 'madeAt'
    | 'run'
    | 'volumesToType'
    | 'storedVolumes'
    | 'dummiesWithPulses'
    | 'silentDummies'
    | 'tr'
    | 'total'
    | 'pulses'
    | 'triggerKey'
    | 'participant'
    | 'session'
    | 'order'
    | 'attempt'
    | 'start'
    | 'operator'
    | 'saved'
    | 'remarks',
    string
  >;
  /** Beside the volumes to type; null without dummies. */
  dummiesNote(facts: ScanFacts): string | null;
  silentDummies(count: number): string;
  otherTr(profileTr: number): string;
  runListHelp: string;
  cautions: string[];
  /** Path → what it is, for the read-me. */
  contents(hasStimuli: boolean): [path: string, what: string][];
  readMe(facts: { kind: BundleKind; title: string; mark: string | null; files: [string, string][] }): string;
}

const plural = (count: number, one: string, many: string) => `${count} ${count === 1 ? one : many}`;

export const CAUTIONS = [
  'A research planning tool, not a medical device. It makes no diagnosis.',
  "Only equipment that the site's MR safety officer has cleared enters the scanner room.",
  'Hearing protection for everyone in the room. Set sound with the protection on, starting low: Ebbline does not know the level at the ear.',
  'Local ethics approval and site rules come first.',
  'Ebbline does not replace the alarm ball or the intercom. Stopping the task does not stop the scanner.',
  'The participant may stop at any time.',
  'Ask every volunteer about photosensitive epilepsy before anything flashes.',
  'Enter a participant code only: no name, no birth date.'
];

export const englishTexts: BundleTexts = {
  lang: 'en',
  mark: (kind) =>
    kind === 'PROOF'
      ? 'PROOF, not for collection'
      : kind === 'PRACTICE'
        ? 'PRACTICE, outside the scanner, never counts as a run'
        : null,
  notStarted:
    'If this sentence stays, the task did not start: either this file was changed after it was packed, or the browser is too old. Unpack the bundle again from its zip and open index.html in a current Chromium-based browser.',
  noScript:
    'Scripts are switched off in this browser, so the task cannot run. Allow scripts for local files and open index.html again.',
  consoleCard: 'Console card',
  runList: 'Run list',
  typeAtConsole: 'Type at the scanner console',
  pulseSetting: ({ pulses }) =>
    pulses.mode === 'once'
      ? 'one pulse at the start of the scan'
      : pulses.mode === 'every-volume'
        ? 'one pulse for every volume'
        : `${pulses.perVolume} pulses for every volume (slice or group pulses)`,
  zero: (facts) =>
    facts.zeroPulse === null
      ? `The task starts ${plural(facts.dummiesWithPulses, 'TR', 'TRs')} after the pulse.`
      : facts.zeroPulse === 1
        ? 'The task starts with the first pulse.'
        : `The task starts with pulse ${facts.zeroPulse}.`,
  labels: {
    task: 'Task',
    study: 'Study',
    lab: 'Lab',
    revision: 'Revision',
    profile: 'Scanner profile',
    madeAt: 'Packed (UTC)',
    run: 'Run',
    volumesToType: 'Volumes to type',
    storedVolumes: 'Stored volumes',
    dummiesWithPulses: 'Dummies with pulses',
    silentDummies: 'Silent dummies',
    tr: 'TR',
    total: 'Total (min:s)',
    pulses: 'Pulses',
    triggerKey: 'Trigger key',
    participant: 'Participant',
    session: 'Session',
    order: 'Runs in order',
    attempt: 'Attempt',
    start: 'Started at',
    operator: 'Operator',
    saved: 'Log saved',
    remarks: 'Remarks'
  },
  dummiesNote: ({ dummiesWithPulses }) =>
    dummiesWithPulses
      ? `of which the first ${plural(dummiesWithPulses, 'is a dummy', 'are dummies')} with pulses`
      : null,
  silentDummies: (count) => (count ? `${count}, added by the scanner before the first pulse` : 'none'),
  otherTr: (profileTr) =>
    `The scanner profile's own TR is ${profileTr} s. The task was planned for the TR in the table: set that one, or do not run.`,
  runListHelp:
    'One line for each run. Enter the participant code, never a name. Tick "Log saved" only when the log and the event table are on the disk that goes back to the lab.',
  cautions: CAUTIONS,
  contents: (hasStimuli) => [
    ['index.html', 'the task itself'],
    ['console-card.html', 'to print: what to type at the scanner console'],
    ['run-list.html', 'to print: runs to tick off'],
    ['events/', 'event tables as planned, with their sidecars, and one table for each condition'],
    ...(hasStimuli ? ([['stimuli/', 'the stimulus files']] as [string, string][]) : []),
    ['methods.txt', 'a paragraph for the methods section'],
    ['MANIFEST.json, checksums.sha256', 'what was packed, with the SHA-256 of every file']
  ],
  readMe: ({ kind, title, mark, files }) =>
    [
      mark,
      `${title}: a task to run at the scanner, packed by Ebbline`,
      '',
      'HOW TO RUN IT',
      '1. Unpack the whole zip into a folder on the stimulus computer. Nothing is installed, no network is needed.',
      '2. Open index.html in a Chromium-based browser (for collection), full screen, at 100 % zoom, on the screen that the participant sees.',
      '3. Enter the participant code, the run and your operator code; let the self-check pass.',
      ...(kind === 'PRACTICE'
        ? [
            '4. There is no scanner in a practice: the trigger key starts it.',
            '5. Explain the task, then start.'
          ]
        : [
            '4. Type the numbers of console-card.html at the scanner console.',
            '5. Arm the run, then start the scan. Pulses before arming are shown and not obeyed.'
          ]),
      '6. To end early hold Shift and End for one second; the run is kept as partial.',
      '7. At the end save the log and the event table, and take both back to the lab.',
      '',
      'IF SOMETHING GOES WRONG',
      '- After a crash or a power cut open the same index.html in the same browser: it offers the unfinished run for saving.',
      '- If the page says that it did not start, or that a stimulus was changed, unpack the zip again.',
      '- To check the files: "sha256sum -c checksums.sha256" in this folder (Linux), or compare with "certutil -hashfile FILE SHA256" (Windows). MANIFEST.json holds the same sums.',
      '',
      'CAUTIONS',
      ...CAUTIONS.map((caution) => `- ${caution}`),
      '',
      'WHAT IS IN HERE',
      ...files.map(([path, what]) => `${path}: ${what}`),
      ''
    ]
      .filter((line) => line !== null)
      .join('\n')
};
