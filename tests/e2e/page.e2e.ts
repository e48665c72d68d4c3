import { expect, test } from '@playwright/test';
import { newcomerWithTask, ready, signIn, signUp } from './support/app';
import {
  announcement,
  card,
  carry,
  demoDocument,
  drag,
  headerSays,
  middle,
  openPage,
  pointAt,
  SECOND,
  shown,
  stored,
  trial,
  trials
} from './support/page-tools';

const ONSETS = [3, 12, 21, 30, 66, 75, 90];
const START = [
  'follow-lantern 3',
  'follow-chime 12',
  'follow-both 21',
  'follow-lantern 30',
  'follow-chime 66',
  'follow-both 75',
  'follow-lantern 90'
];

test.describe('by mouse', () => {
  test('from the Tray, across lines and into the order, each undone and done again', async ({ page }) => {
    const { task } = await newcomerWithTask(page, { volumes: 120 });
    await openPage(page, task, demoDocument({ onsets: ONSETS }));
    expect(await shown(page)).toEqual(START);

    // Onto a blank: the block's start snaps to TR/4 where the pointer is.
    await drag(page, await middle(card(page, 'follow-chime')), await pointAt(page, 45.05));
    await expect(trials(page)).toHaveCount(8);
    expect(await shown(page)).toContain('follow-chime 45');
    await expect(card(page, 'follow-chime')).toHaveCount(1);
    await expect(announcement(page)).toHaveText('Placed follow-chime at 45.000 s of Run 1.');
    await expect(trial(page, 5)).toBeFocused();

    // Across lines into another blank: it is moved in time, the others stay.
    const first = (await trial(page, 1).boundingBox())!;
    await drag(page, { x: first.x + 1, y: first.y + 10 }, await pointAt(page, 105.1));
    await expect(announcement(page)).toHaveText('Moved 1 trial of Run 1 102.000 s later.');
    expect(await shown(page)).toEqual([
      'follow-chime 12',
      'follow-both 21',
      'follow-lantern 30',
      'follow-chime 45',
      'follow-chime 66',
      'follow-both 75',
      'follow-lantern 90',
      'follow-lantern 105'
    ]);

    // Onto another block: it takes its place in the order, and the gaps go with their trials.
    const onto = (await trial(page, 6).boundingBox())!;
    await drag(page, await middle(trial(page, 1)), { x: onto.x + onto.width - 2, y: onto.y + 10 });
    await expect(announcement(page)).toHaveText('Reordered 1 trial of Run 1.');
    const reordered = (await shown(page)).map((t) => t.split(' ')[0]);
    expect(reordered).toEqual([
      'follow-both',
      'follow-lantern',
      'follow-chime',
      'follow-chime',
      'follow-both',
      'follow-chime',
      'follow-lantern',
      'follow-lantern'
    ]);

    for (let i = 0; i < 3; i++) await page.keyboard.press('Control+z');
    await expect(trials(page)).toHaveCount(7);
    expect(await shown(page)).toEqual(START);
    for (let i = 0; i < 3; i++) await page.keyboard.press('Control+Shift+z');
    await expect(trials(page)).toHaveCount(8);
    expect((await shown(page)).map((t) => t.split(' ')[0])).toEqual(reordered);

    await headerSays(page, /^Saved, no\. \d+$/);
    const { document } = await stored(page, task);
    expect(document.runs[0]!.trials).toHaveLength(8);
  });

  test('several selected trials move together', async ({ page }) => {
    const { task } = await newcomerWithTask(page);
    await openPage(page, task, demoDocument({ onsets: [3, 12, 21] }));
    await trial(page, 1).click();
    await trial(page, 2).click({ modifiers: ['Control'] });
    const box = (await trial(page, 1).boundingBox())!;
    await carry(page, { x: box.x + 1, y: box.y + 10 }, await pointAt(page, 93.05));
    await expect(page.locator('#dnd-action-dragged-el')).toHaveAttribute('data-count', '2');
    await page.mouse.up();
    await expect.poll(() => shown(page)).toEqual(['follow-both 21', 'follow-lantern 93', 'follow-chime 102']);
  });

  test('Escape in the middle of a drag puts everything back', async ({ page }) => {
    const { task } = await newcomerWithTask(page);
    await openPage(page, task, demoDocument({ onsets: ONSETS }));
    const errors: Error[] = [];
    page.on('pageerror', (e) => errors.push(e));
    const curve = page.locator('[data-line="1"] [data-curve]').first();
    const before = await curve.getAttribute('d');
    const box = (await trial(page, 1).boundingBox())!;
    await carry(page, { x: box.x + 3, y: box.y + 10 }, await pointAt(page, 105));
    // The signal already follows, the document does not.
    await expect(curve).not.toHaveAttribute('d', before!);
    await page.keyboard.press('Escape');
    await expect(curve).toHaveAttribute('d', before!);
    await page.mouse.up();
    expect(await shown(page)).toEqual(START);
    await expect(page.getByRole('button', { name: 'Undo' })).toBeDisabled();
    await expect(trial(page, 1)).toBeFocused();
    // And the next drag works.
    await drag(page, { x: box.x + 3, y: box.y + 10 }, await pointAt(page, 105));
    await expect(trial(page, 7)).toHaveAttribute(
      'aria-label',
      /follow-lantern, at 105|follow-lantern, at 104/
    );
    expect(errors).toEqual([]);
  });

  test('a grip changes the gap and moves what follows; figures move while it is held', async ({ page }) => {
    const { task } = await newcomerWithTask(page);
    await openPage(page, task, demoDocument({ onsets: ONSETS }));
    const figures = page.getByRole('complementary', { name: 'Figures of Run 1' });
    const efficiency = figures.locator('dd').first();
    const before = await efficiency.textContent();
    const grip = page.getByRole('slider', { name: 'Gap after trial 2' });
    await expect(grip).toHaveAttribute('aria-valuetext', '7 s');
    const at = await middle(grip);
    const perSecond = (await pointAt(page, 31)).x - (await pointAt(page, 30)).x;
    await page.mouse.move(at.x, at.y);
    await page.mouse.down();
    await page.mouse.move(at.x + 3 * perSecond, at.y, { steps: 8 });
    await expect(grip).toHaveAttribute('aria-valuetext', '10 s');
    await expect(efficiency).not.toHaveText(before!);
    await page.keyboard.press('Escape');
    await expect(grip).toHaveAttribute('aria-valuetext', '7 s');
    await expect(efficiency).toHaveText(before!);
    await page.mouse.up();

    await page.mouse.move(at.x, at.y);
    await page.mouse.down();
    await page.mouse.move(at.x + 3 * perSecond, at.y, { steps: 8 });
    await page.mouse.up();
    await expect
      .poll(() => shown(page))
      .toEqual([
        'follow-lantern 3',
        'follow-chime 12',
        'follow-both 24',
        'follow-lantern 33',
        'follow-chime 69',
        'follow-both 78',
        'follow-lantern 93'
      ]);
    await page.getByRole('button', { name: 'Undo' }).click();
    await expect.poll(() => shown(page)).toEqual(START);
  });
});

test('the keyboard does the same, and says what it did', async ({ page }) => {
  const { task } = await newcomerWithTask(page, { volumes: 120 });
  await openPage(page, task, demoDocument());
  await card(page, 'follow-lantern').focus();
  await page.keyboard.press('Enter');
  await expect(announcement(page)).toHaveText('Placed follow-lantern at 0 s.');
  await card(page, 'follow-chime').focus();
  await page.keyboard.press('Enter');
  await page.keyboard.press('Enter');
  // The usual gap of an empty run is one TR; onsets go to the nearest point of the grid.
  await expect
    .poll(() => shown(page))
    .toEqual(['follow-lantern 0', 'follow-chime 3.375', 'follow-chime 6.75']);

  await trial(page, 1).focus();
  await page.keyboard.press('ArrowRight');
  await expect(trial(page, 2)).toBeFocused();
  await page.keyboard.press('Alt+ArrowRight');
  await expect(announcement(page)).toHaveText('Trial 2, follow-chime now at 3.75 s.');
  await expect(trial(page, 2)).toBeFocused();
  await page.keyboard.press('Alt+Shift+ArrowLeft');
  await expect(announcement(page)).toHaveText('Moved before follow-lantern: now Trial 1, follow-chime of 3.');
  await expect.poll(() => shown(page)).toEqual(['follow-chime 0', 'follow-lantern 3', 'follow-chime 6.75']);

  // Tab goes from the trial to the grip of its gap, and Escape back.
  await page.keyboard.press('Tab');
  const grip = page.getByRole('slider', { name: 'Gap after trial 1' });
  await expect(grip).toBeFocused();
  await page.keyboard.press('ArrowRight');
  await expect(announcement(page)).toHaveText('Gap after trial 1: 1.375 s.');
  await expect(grip).toBeFocused();
  await page.keyboard.press('Escape');
  await expect(trial(page, 1)).toBeFocused();

  await page.keyboard.press('Shift+ArrowRight');
  await page.keyboard.press('Control+d');
  await expect(trials(page)).toHaveCount(5);
  await expect(announcement(page)).toHaveText('2 trials made by duplication.');
  await page.keyboard.press('Delete');
  await expect(trials(page)).toHaveCount(3);
  await expect(announcement(page)).toHaveText('2 trials removed.');
  await page.keyboard.press('Control+a');
  await expect(page.locator('[data-trial][aria-selected=true]')).toHaveCount(3);
  await page.keyboard.press('Delete');
  await expect(trials(page)).toHaveCount(0);
  await page.keyboard.press('Control+z');
  await expect(trials(page)).toHaveCount(3);
  // One tab stop among all trials.
  await expect(page.locator('[role=option][tabindex="0"]')).toHaveCount(1);
});

test('the table takes exact numbers and says what is wrong with others', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openPage(page, task, demoDocument({ onsets: [3, 12, 21] }));
  await trial(page, 2).focus();
  await page.keyboard.press('Enter');
  // The drag library keeps an empty alert of its own.
  const problem = page.getByRole('alert').filter({ hasText: /./ });
  const cell = (row: number, column: number) =>
    page.getByRole('row').nth(row).getByRole('gridcell').nth(column);
  await expect(cell(2, 0)).toBeFocused();
  await page.keyboard.press('Enter');
  const field = page.getByRole('textbox', { name: 'Onset, s of trial 2' });
  await field.fill('twelve');
  await field.press('Enter');
  await expect(problem).toHaveText('‘twelve’ is no time. Give seconds as a plain number, such as 62.25.');
  await field.fill('12.0000005');
  await field.press('Enter');
  await expect(problem).toContainText('finer than a microsecond');
  await field.fill('99999999');
  await field.press('Enter');
  await expect(problem).toContainText('within 6 hours');
  await field.fill('30.123456');
  await field.press('Enter');
  await expect(problem).toHaveCount(0);
  // It is the third trial now, and still the one in hand.
  await expect(cell(3, 0)).toHaveText('30.123456');
  await expect(cell(3, 0)).toBeFocused();

  await page.keyboard.press('ArrowUp');
  await page.keyboard.press('ArrowRight');
  await page.keyboard.type('4.5');
  await page.keyboard.press('Enter');
  await expect(cell(2, 1)).toHaveText('4.500');
  await expect(cell(3, 0)).toHaveText('27.500');
  await page.keyboard.press('ArrowRight');
  await page.keyboard.press('Enter');
  await page.getByRole('combobox', { name: 'Card of trial 2' }).selectOption('follow-lantern');
  await page.keyboard.press('Enter');
  await expect(cell(2, 3)).toHaveText('follow-lantern');
  await page.keyboard.press('Delete');
  await expect(page.getByRole('row')).toHaveCount(3);
  for (let i = 0; i < 4; i++) await page.keyboard.press('Control+z');
  await expect(cell(2, 0)).toHaveText('12.000');
  await headerSays(page, /^Saved, no\./);
  expect((await stored(page, task)).document.runs[0]!.trials.map((t) => t.onset / SECOND)).toEqual([
    3, 12, 21
  ]);
});

test('runs are added, edited, copied and removed, and a removed one comes back', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openPage(page, task, demoDocument({ onsets: [3] }));
  await page.getByRole('button', { name: 'Duplicate' }).click();
  await expect(page.getByRole('button', { name: /^Run 2/ })).toHaveAttribute('aria-current', 'true');
  await expect(trials(page)).toHaveCount(1);
  await page.getByRole('button', { name: 'Edit', exact: true }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByLabel('Name').fill('Evening “run”');
  for (const bad of ['0', '-3', '2.5', 'many', '', '20001']) {
    await dialog.getByLabel('Volumes').fill(bad);
    await dialog.getByRole('button', { name: 'Done' }).click();
    await expect(dialog.getByText('Give a whole number from 1 to 20,000.')).toBeVisible();
  }
  await dialog.getByLabel('Volumes').fill('20');
  await dialog.getByRole('button', { name: 'Done' }).click();
  await expect(dialog).toBeHidden();
  await expect(page.getByRole('button', { name: /^Evening “run” 20 volumes · 0:30/ })).toBeVisible();
  await page.getByRole('button', { name: 'Remove', exact: true }).click();
  await page.getByRole('button', { name: 'Remove the run' }).click();
  await expect(page.getByRole('button', { name: /^Evening/ })).toHaveCount(0);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(page.getByRole('button', { name: /^Evening/ })).toBeVisible();
});

test('Notices give reason and figure, lead to the spot and mend it', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openPage(page, task, demoDocument({ onsets: [3, 4.5, 30], volumes: 20 }));
  const notices = page.getByRole('region', { name: /^Notices/ });
  await expect(notices).toContainText('Trial 1 overlaps trial 2: 0.500 s');
  await expect(notices).toContainText('Run 1 is longer than its volumes');
  await notices.getByRole('button', { name: 'Show' }).first().click();
  await expect(trial(page, 2)).toBeFocused();
  await notices.getByRole('button', { name: /^Push what follows/ }).click();
  await expect(notices).not.toContainText('overlaps');
  await page.keyboard.press('Control+z');
  await expect(notices).toContainText('Trial 1 overlaps trial 2');
});

test.describe('saving', () => {
  test('waits while the server is away, outlives a reload, and goes out afterwards', async ({ page }) => {
    const { task } = await newcomerWithTask(page);
    await openPage(page, task, demoDocument({ onsets: [3] }));
    const { saveNumber } = await stored(page, task);
    const puts = '**/api/v1/tasks/*/document';
    await page.route(puts, (route) =>
      route.request().method() === 'PUT' ? route.abort() : route.continue()
    );
    await card(page, 'follow-both').focus();
    await page.keyboard.press('Enter');
    await headerSays(page, 'Waiting for the server');
    await expect(page.getByText('kept in this browser')).toBeVisible();
    expect((await stored(page, task)).saveNumber).toBe(saveNumber);

    await page.reload();
    await ready(page);
    await expect(trials(page)).toHaveCount(2);
    await headerSays(page, 'Waiting for the server');
    await page.unroute(puts);
    await page.getByRole('button', { name: 'Try now' }).click();
    await headerSays(page, `Saved, no. ${saveNumber + 1}`);
    expect((await stored(page, task)).document.runs[0]!.trials).toHaveLength(2);
    await page.reload();
    await ready(page);
    await expect(trials(page)).toHaveCount(2);
    await headerSays(page, `Saved, no. ${saveNumber + 1}`);
  });

  test('meets a second tab with a choice in which nothing is lost', async ({ page, context }) => {
    const { task } = await newcomerWithTask(page);
    await openPage(page, task, demoDocument({ onsets: [3] }));
    const { saveNumber } = await stored(page, task);
    const second = await context.newPage();
    await second.goto(`${task.path}/page`);
    await ready(second);

    await card(page, 'follow-both').focus();
    await page.keyboard.press('Enter');
    await headerSays(page, `Saved, no. ${saveNumber + 1}`);

    await second.bringToFront();
    await card(second, 'follow-chime').focus();
    await second.keyboard.press('Enter');
    const dialog = second.getByRole('dialog', { name: 'Two versions of this task' });
    await expect(dialog).toContainText(`saved no. ${saveNumber + 1}`);
    await dialog.getByRole('button', { name: 'Decide later' }).click();
    await headerSays(second, 'Not saved: a newer save exists');

    // Even a reload keeps what was not saved, and asks again.
    await second.reload();
    await ready(second);
    expect(await shown(second)).toEqual(['follow-lantern 3', 'follow-chime 6.375']);
    const again = second.getByRole('dialog', { name: 'Two versions of this task' });
    const download = second.waitForEvent('download');
    await again.getByRole('button', { name: 'Download mine, go on with theirs' }).click();
    const file = await (await download).createReadStream();
    const chunks: Buffer[] = [];
    for await (const chunk of file) chunks.push(chunk as Buffer);
    const mine = JSON.parse(Buffer.concat(chunks).toString('utf8'));
    expect(mine.runs[0].trials).toHaveLength(2);
    await headerSays(second, `Saved, no. ${saveNumber + 1}`);
    expect(await shown(second)).toEqual(['follow-lantern 3', 'follow-both 6.375']);

    // The other choice: mine becomes the newest, theirs stays under its number.
    await card(second, 'follow-chime').focus();
    await second.keyboard.press('Enter');
    await headerSays(second, `Saved, no. ${saveNumber + 2}`);
    await page.bringToFront();
    await page.getByRole('button', { name: 'Undo' }).click();
    await page
      .getByRole('dialog', { name: 'Two versions of this task' })
      .getByRole('button', { name: 'Save mine as the newest' })
      .click();
    await headerSays(page, `Saved, no. ${saveNumber + 3}`);
    expect((await stored(page, task)).document.runs[0]!.trials).toHaveLength(1);
  });

  test('keeps an edit through an ended session', async ({ page, context }) => {
    const { person, task } = await newcomerWithTask(page);
    await openPage(page, task, demoDocument({ onsets: [3] }));
    const { saveNumber } = await stored(page, task);
    await context.clearCookies();
    await card(page, 'follow-both').focus();
    await page.keyboard.press('Enter');
    await headerSays(page, 'Not saved: signed out');
    await expect(page.getByText('Your session has ended')).toBeVisible();
    const [tab] = await Promise.all([
      context.waitForEvent('page'),
      page.getByRole('link', { name: 'Sign in in a new tab' }).click()
    ]);
    await signIn(tab, person);
    await tab.waitForURL('**/labs');
    await page.bringToFront();
    await page.getByRole('button', { name: 'I have signed in: save now' }).click();
    await headerSays(page, `Saved, no. ${saveNumber + 1}`);
    expect((await stored(page, task)).document.runs[0]!.trials).toHaveLength(2);
  });
});

test('a reader sees everything and changes nothing', async ({ page, browser }) => {
  const { lab, task } = await newcomerWithTask(page);
  await openPage(page, task, demoDocument({ onsets: ONSETS }));
  const context = await browser.newContext();
  const theirs = await context.newPage();
  const reader = await signUp(theirs);
  const status = await page.evaluate(
    async ([id, email]) =>
      (
        await fetch(`/api/v1/labs/${id}/members`, {
          method: 'POST',
          headers: { 'content-type': 'application/json' },
          body: JSON.stringify({ email, role: 'reader' })
        })
      ).status,
    [lab.id, reader.email] as const
  );
  expect(status).toBe(201);
  await theirs.goto(`${task.path}/page`);
  await ready(theirs);
  expect(await shown(theirs)).toEqual(START);
  await expect(theirs.getByRole('group', { name: 'Trial cards' })).toHaveCount(0);
  await expect(theirs.getByRole('button', { name: /Undo|Duplicate|Import|Add run/ })).toHaveCount(0);
  await drag(theirs, await middle(trial(theirs, 1)), await pointAt(theirs, 105));
  await trial(theirs, 2).focus();
  await theirs.keyboard.press('Delete');
  await theirs.keyboard.press('Alt+ArrowRight');
  expect(await shown(theirs)).toEqual(START);
  await headerSays(theirs, /to read$/);
  await context.close();
});
