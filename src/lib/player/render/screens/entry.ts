/** Who, which run, by whose clock; and what lies here unsaved from before. */
import type { Profile } from '$lib/task/profile';
import type { PlanRow, PlayerPayload } from '../../payload';
import { field, h } from '../dom';
import type { Entry, Override, Sitting } from '../session';
import { codeOf } from '../session';
import { unsavedRuns } from './unsaved';
import { frame, heading } from './frame';

const LABEL = /^[A-Za-z0-9]{1,60}$/;

interface Fields {
  participant: HTMLInputElement;
  session: HTMLInputElement;
  run: HTMLSelectElement;
  operator: HTMLInputElement;
  timing: HTMLSelectElement;
  trigger: HTMLInputElement;
  level: HTMLInputElement;
  flipX: HTMLInputElement;
  flipY: HTMLInputElement;
}

/** Asks what to run. `suggest`: what was run last, to be offered with the next run. */
export async function askEntry(sitting: Sitting, suggest: Entry | null): Promise<Entry> {
  const { payload } = sitting;
  const fields = makeFields(payload, suggest);
  const error = h('p', { class: 'error', role: 'alert' });
  const unsaved = await unsavedRuns(sitting);
  return new Promise((done) => {
    /** The repeat that the operator has been asked about already. */
    let confirmed = '';
    const submit = async (event: Event) => {
      event.preventDefault();
      const read = readFields(payload, fields);
      if (typeof read === 'string') return void (error.textContent = read);
      const entry = { ...read, attempt: (await attemptsOf(sitting, read)) + 1 };
      const asked = `${entry.participant} ${entry.session} ${entry.run.id} ${entry.attempt}`;
      if (entry.attempt > 1 && payload.kind !== 'PRACTICE' && confirmed !== asked) {
        confirmed = asked;
        error.textContent = `sub-${entry.participant} has begun this run before: this would be attempt ${entry.attempt}, in the same order. Press Continue again to go on.`;
        return;
      }
      done(entry);
    };
    const form = h(
      'form',
      { submit: (e) => void submit(e), novalidate: true },
      heading(payload.document.brief.title, 'Who, and which run?'),
      payload.kind === 'COLLECTION' ? null : h('p', {}, kindSentence(payload.kind)),
      error,
      knownCodes(payload),
      ...formRows(fields),
      h('p', { class: 'buttons' }, h('button', { class: 'main', type: 'submit' }, 'Continue'))
    );
    sitting.show('entry', frame({ payload, main: [form, h('section', {}, unsaved, cautions())] }));
  });
}

/** The plan's participants, offered while typing. */
const knownCodes = ({ plan }: PlayerPayload): HTMLElement =>
  h(
    'datalist',
    { id: 'known' },
    ...[...new Set(plan.map((row) => row.participant))].map((value) => h('option', { value }))
  );

const kindSentence = (kind: PlayerPayload['kind']): string =>
  kind === 'PROOF'
    ? 'This is a PROOF: to try the task with, not to collect data with. Every log says so.'
    : 'This is PRACTICE, outside the scanner: it starts by key, tells right from wrong and never counts as a run.';

function makeFields(payload: PlayerPayload, suggest: Entry | null): Fields {
  const { profile, document: doc, plan } = payload;
  const known = [...new Set(plan.map((row) => row.participant))];
  const next = suggest ? Math.min(suggest.runIndex, suggest.runCount - 1) : 0;
  const count = plan.length ? Math.max(...plan.map((row) => row.runs.length)) : doc.runs.length;
  const run = h('select');
  for (let i = 0; i < count; i++) {
    const name = plan.length ? `Run ${i + 1}` : `${i + 1}: ${doc.runs[i]!.name}`;
    run.append(h('option', { value: i, selected: i === next }, name));
  }
  const timing = h('select', {}, h('option', { value: 'free-run' }, "this computer's clock, from time zero"));
  if (profile.pulses.mode !== 'once' && payload.kind !== 'PRACTICE')
    timing.append(h('option', { value: 'pulse-locked' }, 'a line through the pulses (pulse-locked)'));
  const text = (value: string, more = {}) =>
    h('input', { type: 'text', autocomplete: 'off', spellcheck: 'false', value, ...more });
  const trigger = text(profile.triggerKey, { id: 'trigger-key' });
  trigger.addEventListener('keydown', (event) => {
    if (event.key === 'Tab' || event.key === 'Shift') return;
    event.preventDefault();
    trigger.value = codeOf(event);
  });
  const box = (checked: boolean) => h('input', { type: 'checkbox', checked });
  return {
    participant: text(suggest?.participant ?? (known.length === 1 ? known[0]! : ''), {
      'data-focus': true,
      list: known.length ? 'known' : null
    }),
    session: text(suggest?.session ?? ''),
    run,
    operator: text(suggest?.operator ?? ''),
    timing,
    trigger,
    level: text(String(profile.soundLevel), { inputmode: 'numeric' }),
    flipX: box(profile.screen.flipX),
    flipY: box(profile.screen.flipY)
  };
}

function formRows(f: Fields): HTMLElement[] {
  return [
    h(
      'div',
      { class: 'pair' },
      field('Participant code', f.participant, 'Letters and digits; never a name.'),
      field('Session', f.session, 'Leave empty if there is only one.')
    ),
    h('div', { class: 'pair' }, field('Run', f.run), field('Operator code', f.operator)),
    field('Onsets follow', f.timing),
    h(
      'details',
      {},
      h('summary', {}, 'Change the profile for this sitting'),
      field('Trigger key', f.trigger, 'Press the key in this field.'),
      field('Loudest sound, dB full scale', f.level),
      h('p', {}, h('label', {}, f.flipX, 'Flip the picture left to right')),
      h('p', {}, h('label', {}, f.flipY, 'Flip the picture upside down'))
    )
  ];
}

/** The entry as typed, or what is wrong with it and how to mend it. */
function readFields(payload: PlayerPayload, f: Fields): Omit<Entry, 'attempt'> | string {
  const participant = f.participant.value.trim().replace(/^sub-/, '');
  const session = f.session.value.trim().replace(/^ses-/, '');
  if (!LABEL.test(participant))
    return participant
      ? `‘${participant}’ is no participant code: use letters and digits only, at most 60.`
      : 'Enter a participant code: letters and digits, for example 07.';
  if (session && !LABEL.test(session))
    return `‘${session}’ is no session: use letters and digits only, or leave it empty.`;
  const row = planRow(payload.plan, participant, session || null);
  if (typeof row === 'string') return row;
  const runs = row ? row.runs : payload.document.runs.map((r) => r.id);
  const index = Number(f.run.value);
  const run = payload.document.runs.find((r) => r.id === runs[index]);
  if (!run) return `sub-${participant} has ${runs.length} runs in the plan: choose one of them.`;
  const changed = withOverrides(payload.profile, f);
  if (typeof changed === 'string') return changed;
  return {
    participant,
    session: session || row?.session || null,
    run,
    runIndex: index + 1,
    runCount: runs.length,
    row,
    operator: f.operator.value.trim().slice(0, 60),
    timing: f.timing.value === 'pulse-locked' ? 'pulse-locked' : 'free-run',
    ...changed
  };
}

function planRow(
  plan: readonly PlanRow[],
  participant: string,
  session: string | null
): PlanRow | null | string {
  if (!plan.length) return null;
  const rows = plan.filter((row) => row.participant === participant);
  if (!rows.length) {
    const known = [...new Set(plan.map((row) => row.participant))].slice(0, 8).join(', ');
    return `sub-${participant} is not in this bundle's plan. It knows ${known}${plan.length > 8 ? ', …' : ''}.`;
  }
  const row = session === null && rows.length === 1 ? rows[0] : rows.find((r) => r.session === session);
  return (
    row ??
    `The plan has for sub-${participant} the sessions ${rows.map((r) => r.session ?? '(none)').join(', ')}.`
  );
}

function withOverrides(profile: Profile, f: Fields): { profile: Profile; overrides: Override[] } | string {
  const level = Number(f.level.value);
  if (f.level.value.trim() === '' || !(level >= -90 && level <= 0))
    return `The loudest sound is ‘${f.level.value}’: give a number from −90 to 0 dB full scale.`;
  const triggerKey = f.trigger.value.trim();
  if (!/^[A-Za-z0-9]{1,30}$/.test(triggerKey))
    return 'Press the trigger key in its field: it is empty or no key.';
  const flipX = f.flipX.checked;
  const flipY = f.flipY.checked;
  const overrides: Override[] = [];
  const note = (what: string, from: unknown, to: unknown) => {
    if (from !== to) overrides.push({ what, from, to });
  };
  note('triggerKey', profile.triggerKey, triggerKey);
  note('soundLevel', profile.soundLevel, level);
  note('screen.flipX', profile.screen.flipX, flipX);
  note('screen.flipY', profile.screen.flipY, flipY);
  const screen = { ...profile.screen, flipX, flipY };
  return { profile: { ...profile, triggerKey, soundLevel: level, screen }, overrides };
}

async function attemptsOf(sitting: Sitting, entry: Omit<Entry, 'attempt'>): Promise<number> {
  const attempts = (await sitting.store?.attempts()) ?? [];
  return attempts.filter(
    ({ header }) =>
      header.participant === entry.participant &&
      header.session === entry.session &&
      header.run.id === entry.run.id &&
      header.run.index === entry.runIndex
  ).length;
}

const cautions = (): HTMLElement =>
  h(
    'div',
    { class: 'soft' },
    h('h2', {}, 'Before you begin'),
    h(
      'p',
      {},
      'A research planning tool, not a medical device. Only equipment that your MR safety officer has cleared enters the scanner room; hearing protection for everyone in it.'
    ),
    h(
      'p',
      {},
      'This does not replace the alarm ball or the intercom; the participant may stop at any time. Ask about photosensitive epilepsy. Set sound with the protection on, starting low.'
    )
  );
