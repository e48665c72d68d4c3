/** One attempt with a real screen and keyboard: ready → armed → running → over. Gives back what was kept of it. */
import type { Profile } from '$lib/task/profile';
import { makeHeader } from '../header';
import { RunLog } from '../log';
import type { LogEnding } from '../log';
import type { Answer } from '../responses';
import { Runtime, type RunState, type Stage } from '../runtime';
import { buildSchedule } from '../schedule';
import { loadPictures } from './assets';
import { CanvasStage } from './canvas-stage';
import type { AttemptRecord } from './files';
import { HoldToEnd } from './hold-to-end';
import type { CheckOutcome } from './screens/check';
import { startingSoon } from './screens/participant';
import { armedView } from './screens/ready';
import { codeOf, listen, pageNow, pageTime, type Entry, type Sitting } from './session';
import type { Speaker } from './speaker';

/** Feedback of PRACTICE stays this long, ms. */
const FEEDBACK = 700;
/** A timer beside the frames, which stop in a hidden window, ms. */
const TICK = 250;

export interface AttemptOutcome {
  record: AttemptRecord;
  key: string | null;
}

/** Resolves with null when the operator disarms. Rejects with a sentence when a stimulus is missing or altered. */
export async function runAttempt(
  sitting: Sitting,
  entry: Entry,
  check: CheckOutcome,
  speaker: Speaker | null
): Promise<AttemptOutcome | null> {
  const { payload, store, canvas } = sitting;
  const { profile, run } = entry;
  const isPractice = payload.kind === 'PRACTICE';
  const schedule = buildSchedule(payload.document, run, profile, entry.row);
  const pictures = await loadPictures(schedule.assets, payload.assets);
  const canvasStage = new CanvasStage(canvas, profile.screen, pictures);
  canvasStage.fit();
  canvasStage.draw([]);
  await speaker?.wake();
  speaker?.prepare(schedule.items);

  const header = headerOf(sitting, entry, check);
  const key = (await store?.begin(header).catch(() => null)) ?? null;
  const log = new RunLog(header, (line) => key !== null && store?.add(key, line));
  for (const change of entry.overrides) log.add({ type: 'override', page: pageNow(), ...change });

  const stage: Stage = {
    draw: (items) => canvasStage.draw(items),
    sound: (item, at) => speaker?.play(item, at) ?? null,
    silence: () => speaker?.silence()
  };
  return new Promise((done) => {
    let ending: LogEnding | null = null;
    let participantSees = false;
    const runtime = new Runtime({
      schedule,
      profile,
      log,
      stage,
      timing: entry.timing,
      frameInterval: check.frameInterval,
      onState: (state, reason) => change(state, reason),
      onPulse: (news) => {
        armed.pulse(news, runtime.pulses.found);
        if (news.kind === 'interval' && !news.agrees) alarm(tooSlow(news.measured, news.planned));
        if (news.kind === 'stopped') alarm('NO PULSES');
      },
      onAnswer: (answer) => isPractice && feedback(answer)
    });
    const armed = armedView(
      sitting,
      entry,
      check.items,
      runtime.pulses.secondWithin,
      () => turn(true),
      () => runtime.disarm(pageNow())
    );

    const turn = (toParticipant: boolean) => {
      participantSees = toParticipant;
      if (toParticipant) sitting.show('starting-soon', startingSoon(entry));
      else sitting.show('armed', armed.view);
    };
    const change = (state: RunState, reason: string) => {
      if (state === 'running') sitting.show('running', null);
      else if (state === 'armed') turn(participantSees);
      else if (state === 'ready') leave(null);
      else {
        ending = { state: state === 'complete' ? 'complete' : 'partial', reason, page: pageNow() };
        leave(ending);
      }
    };
    let wiped: ReturnType<typeof setTimeout> | undefined;
    const feedback = (answer: Answer) => {
      clearTimeout(wiped);
      const words = { correct: 'Right', wrong: 'Wrong', missing: 'No answer', answered: 'Answered' };
      canvasStage.message(words[answer.verdict]);
      wiped = setTimeout(() => canvasStage.message(''), FEEDBACK);
    };

    const stopListening = listenToRun({
      runtime,
      canvasStage,
      profile,
      onAlarm: (text) => armed.alarm(text),
      onTurn: () => turn(!participantSees)
    });
    let frameHandle = requestAnimationFrame(function each(time) {
      runtime.frame(time / 1000);
      if (!runtime.isOver && runtime.state !== 'ready') frameHandle = requestAnimationFrame(each);
    });
    const timer = setInterval(() => runtime.tick(pageNow()), TICK);

    const leave = (end: LogEnding | null) => {
      stopListening();
      clearInterval(timer);
      clearTimeout(wiped);
      cancelAnimationFrame(frameHandle);
      if (end === null) {
        if (key !== null) void store?.drop(key).catch(() => {});
        return done(null);
      }
      canvasStage.message('');
      const record = { header, entries: log.entries, ending: end };
      const kept = key === null ? Promise.resolve() : (store?.end(key, end) ?? Promise.resolve());
      void kept.catch(() => {}).then(() => done({ record, key }));
    };

    if (isPractice) runtime.startByKey(pageNow());
    else runtime.arm(pageNow());
  });
}

/** The title is the one place that an operator sees beside a run and the participant does not. */
const alarm = (text: string): void => {
  document.title = text;
};
const tooSlow = (measured: number, planned: number): string =>
  `SCANNER ${measured.toFixed(2)} s, PLANNED ${planned.toFixed(2)} s: stop or go on?`;

function headerOf(sitting: Sitting, entry: Entry, check: CheckOutcome) {
  const { payload } = sitting;
  const ratio = window.devicePixelRatio || 1;
  return makeHeader({
    kind: payload.kind,
    simulated: false,
    document: payload.document,
    revision: payload.revision,
    saveNumber: payload.saveNumber,
    profile: entry.profile,
    profileHash: payload.profileHash,
    build: payload.build,
    lab: payload.lab,
    study: payload.study.label,
    run: entry.run,
    runIndex: entry.runIndex,
    row: entry.row,
    participant: entry.participant,
    session: entry.session,
    attempt: entry.attempt,
    operator: entry.operator,
    timing: entry.timing,
    browser: navigator.userAgent,
    screen: {
      width: Math.round(screen.width * ratio),
      height: Math.round(screen.height * ratio),
      pixelRatio: ratio,
      refreshRate: 1 / check.frameInterval
    },
    check: check.items,
    started: new Date(),
    zone: Intl.DateTimeFormat().resolvedOptions().timeZone
  });
}

interface Ears {
  runtime: Runtime;
  profile: Profile;
  canvasStage: CanvasStage;
  onAlarm: (text: string) => void;
  onTurn: () => void;
}

/** Keys, focus, visibility and full screen, until the returned function is called. */
function listenToRun({ runtime, profile, canvasStage, onAlarm, onTurn }: Ears): () => void {
  const isTaken = (code: string) =>
    code === profile.triggerKey || profile.responseKeys.some((k) => k.code === code);
  const hold = new HoldToEnd(() => runtime.abort(pageNow(), 'ended by the operator'));
  let lock: WakeLockSentinel | null = null;
  const title = document.title;
  const stayAwake = () =>
    void navigator.wakeLock
      ?.request('screen')
      .then((got) => (lock = got))
      .catch(() => onAlarm('The browser does not keep the screen awake: see that no screen saver starts.'));
  stayAwake();
  const focus = (state: 'lost' | 'back') => () => {
    runtime.focus(state, pageNow());
    const isLost = state === 'lost';
    alarm(isLost ? 'KEYS ARE LOST: click this window' : title);
    onAlarm(isLost ? 'Another window receives the keys: click into this one.' : '');
    if (isLost) hold.letGo();
  };
  const off = [
    listen(
      'keydown',
      (event) => {
        const code = codeOf(event);
        const page = pageTime(event);
        event.preventDefault();
        runtime.keyDown(code, page, event.repeat);
        if (event.repeat) return;
        hold.down(code, event.shiftKey);
        if (isTaken(code)) return;
        if (code === 'KeyF' && !document.fullscreenElement)
          void document.documentElement.requestFullscreen?.().catch(() => {});
        if (runtime.state !== 'armed') return;
        if (code === 'Backspace') runtime.disarm(page);
        else if (code === 'KeyV') onTurn();
      },
      true
    ),
    listen(
      'keyup',
      (event) => {
        hold.up(codeOf(event));
        runtime.keyUp(codeOf(event), pageTime(event));
      },
      true
    ),
    listen('blur', focus('lost')),
    listen('focus', focus('back')),
    listen('resize', () => canvasStage.fit()),
    listen('contextmenu', (event) => event.preventDefault()),
    listen('beforeunload', (event) => event.preventDefault()),
    listenOn(document, 'visibilitychange', () => {
      const isHidden = document.visibilityState === 'hidden';
      runtime.focus(isHidden ? 'hidden' : 'visible', pageNow());
      if (!isHidden) stayAwake();
    }),
    listenOn(document, 'fullscreenchange', () =>
      runtime.focus(document.fullscreenElement ? 'full-screen' : 'left-full-screen', pageNow())
    )
  ];
  return () => {
    hold.letGo();
    off.forEach((end) => end());
    document.title = title;
    void lock?.release();
  };
}

function listenOn(target: Document, type: string, act: () => void): () => void {
  target.addEventListener(type, act);
  return () => target.removeEventListener(type, act);
}
