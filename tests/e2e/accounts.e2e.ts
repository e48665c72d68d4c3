/** Accounts, sessions, roles and the demo lab, as people meet them. */
import { expect, test, type Browser, type Page } from '@playwright/test';
import {
  expectAccessible,
  makeLab,
  makeStudy,
  makeTask,
  newPerson,
  newcomerWithTask,
  ready,
  signIn,
  signOut,
  signUp,
  type Person
} from './support/app';

/** Another person in a browser of their own. */
async function elsewhere(browser: Browser, baseURL: string | undefined): Promise<Page> {
  return (await browser.newContext({ baseURL })).newPage();
}

test('signs up, in and out; a wrong password is told apart from nothing', async ({ page }) => {
  const person = await signUp(page);
  await expect(page.getByText('You are in no lab yet')).toBeVisible();
  await signOut(page);
  await page.goto('/labs');
  await expect(page).toHaveURL(/\/sign-in\?next=%2Flabs$/);

  await signIn(page, { email: person.email, password: 'not the password' });
  await expect(page.getByRole('alert')).toContainText('do not belong together');
  await expect(page.getByLabel('E-mail address')).toHaveValue(person.email);
  await expect(page.getByLabel('Password')).toHaveValue('not the password');
  await signIn(page, { email: 'nobody-at-all@marram.example', password: 'not the password' });
  await expect(page.getByRole('alert')).toContainText('do not belong together');

  await page.goto('/sign-in?next=%2Faccount');
  await ready(page);
  await page.getByLabel('E-mail address').fill(person.email.toUpperCase());
  await page.getByLabel('Password').fill(person.password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page).toHaveURL(/\/account$/);
});

test('never leads to another site after sign-in', async ({ page }) => {
  const person = await signUp(page);
  await signOut(page);
  await page.goto('/sign-in?next=%2F%2Fmarram.example%2Ftrap');
  await ready(page);
  await page.getByLabel('E-mail address').fill(person.email);
  await page.getByLabel('Password').fill(person.password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL('**/labs');
});

test('refuses a sign-up with words for each field, and keeps what was typed', async ({ page }) => {
  const taken = await signUp(page);
  await signOut(page);
  await page.goto('/sign-up');
  await ready(page);
  // The browser's own checks are left out, as somebody without them would see it.
  await page
    .locator('form[method="POST"]')
    .last()
    .evaluate((form: HTMLFormElement) => (form.noValidate = true));
  await page.getByLabel('Your name').fill('Ada');
  await page.getByLabel('E-mail address').fill('no address');
  await page.getByLabel('Password').fill('short');
  await page.getByRole('button', { name: 'Make my account' }).click();
  await expect(page.getByText('‘no address’ was given; expected an e-mail address')).toBeVisible();
  await expect(page.getByText('Expected a password of at least 10 characters')).toBeVisible();
  await expect(page.getByLabel('Your name')).toHaveValue('Ada');

  await page.getByLabel('E-mail address').fill(taken.email);
  await page.getByLabel('Password').fill('long enough to do');
  await page.getByRole('button', { name: 'Make my account' }).click();
  await expect(page.getByRole('alert')).toContainText(`an account for ${taken.email} already`);
});

test('slows guessing: after ten failed tries even the right password must wait', async ({ page }) => {
  const person = await signUp(page);
  await signOut(page);
  await page.goto('/sign-in');
  await ready(page);
  await page.getByLabel('E-mail address').fill(person.email);
  for (let attempt = 1; attempt <= 10; attempt++) {
    await page.getByLabel('Password').fill(`guess number ${attempt}`);
    const answered = page.waitForResponse((response) => response.request().method() === 'POST');
    await page.getByRole('button', { name: 'Sign in' }).click();
    await answered;
    await expect(page.getByRole('alert')).toContainText('do not belong together');
  }
  await page.getByLabel('Password').fill(person.password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('alert')).toContainText(
    'Too many failed sign-ins for this account: 10 within 15 minutes'
  );
});

test('changes a password and ends the sessions elsewhere', async ({ page, browser, baseURL }) => {
  const person = await signUp(page);
  const other = await elsewhere(browser, baseURL);
  await signIn(other, person);
  await other.waitForURL('**/labs');

  await page.goto('/account');
  await ready(page);
  await page.getByLabel('Present password').fill('something else');
  await page.getByLabel('New password').fill('a new tide table');
  await page.getByRole('button', { name: 'Change the password' }).click();
  await expect(page.getByRole('alert')).toContainText('present password is not right');

  await page.getByLabel('Present password').fill(person.password);
  await page.getByLabel('New password').fill('too short');
  await page.getByRole('button', { name: 'Change the password' }).click();
  await expect(page.getByText('at least 10 characters; this one has 9').first()).toBeVisible();

  await page.getByLabel('New password').fill('a new tide table');
  await page.getByRole('button', { name: 'Change the password' }).click();
  await expect(page.getByText('Your password was changed')).toBeVisible();

  await other.goto('/labs');
  await expect(other).toHaveURL(/\/sign-in/);
  await signIn(other, person);
  await expect(other.getByRole('alert')).toContainText('do not belong together');
  await signIn(other, { email: person.email, password: 'a new tide table' });
  await other.waitForURL('**/labs');
  // The browser that changed it is still signed in.
  await page.goto('/labs');
  await expect(page.getByRole('heading', { name: 'My labs' })).toBeVisible();
  await other.context().close();
});

test('a session that ended during work leads to sign-in and back to the form', async ({ page }) => {
  const person = await signUp(page);
  const lab = await makeLab(page, 'Tidal Lab');
  await page.goto(`${lab.path}/studies/new`);
  await ready(page);
  await page.getByLabel('Name of the study').fill('Slack water');
  await page.context().clearCookies();
  await page.getByRole('button', { name: 'Make the study' }).click();
  await expect(page).toHaveURL(/\/sign-in\?next=/);
  await page.getByLabel('E-mail address').fill(person.email);
  await page.getByLabel('Password').fill(person.password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('heading', { name: 'New study' })).toBeVisible();
});

test('an outsider is told the same as for a lab that does not exist', async ({ page, browser, baseURL }) => {
  const { lab, study, task } = await newcomerWithTask(page);
  const outsider = await elsewhere(browser, baseURL);
  await signUp(outsider);
  const nowhere = '/labs/00000000-0000-4000-8000-000000000000';
  const missing = await outsider.goto(nowhere);
  expect(missing?.status()).toBe(404);
  const words = await outsider.getByRole('main').innerText();
  for (const path of [lab.path, `${lab.path}/members`, study, `${study}/new-task`, `${task.path}/brief`]) {
    const answer = await outsider.goto(path);
    expect(answer?.status(), path).toBe(404);
    expect((await outsider.getByRole('main').innerText()).replace('study', 'lab'), path).toBe(words);
  }
  // A member of another lab gains nothing by its own lab in the address.
  const own = await makeLab(outsider, 'Other Lab');
  const crossed = await outsider.goto(`${own.path}/tasks/${task.id}/brief`);
  expect(crossed?.status()).toBe(404);
  const crossedStudy = await outsider.goto(`${own.path}/studies/${study.split('/').pop()}`);
  expect(crossedStudy?.status()).toBe(404);
  await outsider.context().close();
});

test('roles: operator and reader see, and are refused what they may not do', async ({
  page,
  browser,
  baseURL
}) => {
  const { lab, study } = await newcomerWithTask(page);
  for (const role of ['operator', 'reader'] as const) {
    const other = await elsewhere(browser, baseURL);
    const person = await signUp(other, newPerson(`Some ${role}`));
    await addMember(page, lab.path, person, role);
    await expect(page.getByText(`Some ${role} is now ${role} of Probe Lab.`)).toBeVisible();

    await other.goto(lab.path);
    await expect(other.getByRole('heading', { name: 'Probe Lab' })).toBeVisible();
    await expect(other.getByText(`You are ${role} of this lab.`)).toBeVisible();
    await expect(other.getByRole('link', { name: 'New study' })).toHaveCount(0);
    await expect(other.getByRole('link', { name: 'New task' })).toHaveCount(0);
    for (const path of [`${lab.path}/studies/new`, `${study}/new-task`]) {
      const answer = await other.goto(path);
      expect(answer?.status(), path).toBe(403);
      await expect(other.getByRole('main')).toContainText(`Your role in Probe Lab is ${role}`);
    }
    // Not by a form of one's own either.
    for (const [path, form] of [
      [`${lab.path}/members?/add`, { email: person.email, role: 'owner' }],
      [`${lab.path}/studies/new`, { name: 'Sneaked in', label: 'sneaked' }],
      [`${study}?/remove`, {}]
    ] as const) {
      const answer = await other.request.post(path, {
        form,
        headers: { origin: new URL(other.url()).origin }
      });
      expect(answer.status(), path).toBe(403);
    }
    await other.goto(`${lab.path}/members`);
    await expect(other.getByText('Add somebody')).toHaveCount(0);
    await other.context().close();
  }
  await page.goto(study);
  await expect(page.getByRole('heading', { name: 'Attention between senses' })).toBeVisible();
});

test('members: unknown address, change of role, last owner kept, removal', async ({
  page,
  browser,
  baseURL
}) => {
  await signUp(page, newPerson('First Owner'));
  const lab = await makeLab(page);
  await addMember(page, lab.path, newPerson(), 'reader');
  await expect(page.getByRole('alert')).toContainText('Ask them to sign up first');

  const other = await elsewhere(browser, baseURL);
  const person = await signUp(other, newPerson('Second Person'));
  await addMember(page, lab.path, person, 'reader');
  await expect(page.getByText('Second Person is now reader')).toBeVisible();

  const mine = page.getByRole('listitem').filter({ hasText: '(you)' });
  await mine.getByLabel('Role of First Owner').selectOption('reader');
  await mine.getByRole('button', { name: 'Change' }).click();
  await expect(page.getByRole('alert')).toContainText('this is its last one');

  const theirs = page.getByRole('listitem').filter({ hasText: 'Second Person' });
  await theirs.getByLabel('Role of Second Person').selectOption('experimenter');
  await theirs.getByRole('button', { name: 'Change' }).click();
  await expect(page.getByText('Second Person is now experimenter.')).toBeVisible();
  await other.goto(`${lab.path}/studies/new`);
  await expect(other.getByRole('heading', { name: 'New study' })).toBeVisible();

  await theirs.getByRole('button', { name: 'Remove' }).click();
  const dialog = page.getByRole('dialog', { name: 'Remove this member?' });
  await expect(dialog).toBeVisible();
  await page.keyboard.press('Escape');
  await expect(dialog).toBeHidden();
  await theirs.getByRole('button', { name: 'Remove' }).click();
  await dialog.getByRole('button', { name: 'Remove' }).click();
  await expect(page.getByText('Second Person was removed')).toBeVisible();
  expect((await other.goto(lab.path))?.status()).toBe(404);
  await other.context().close();
});

test('a new task: label from the title, and clear words for a TR that cannot be', async ({ page }) => {
  await signUp(page);
  const lab = await makeLab(page);
  const study = await makeStudy(page, lab, 'Bad input');
  await page.getByLabel('Title').fill('Chime & “Lantern” 2');
  await expect(page.getByLabel('BIDS label')).toHaveValue(/^chime[A-Za-z]*2$/i);
  for (const [tr, words] of [
    ['0', '0 is too small: TR must be more than 0 seconds.'],
    ['-2', '-2 is too small: TR must be more than 0 seconds.'],
    ['two', '‘two’ is not a number of seconds: write digits, for example 1.5.'],
    ['1,5', '‘1,5’ has a comma: write it with a point, 1.5.'],
    ['1e3', '‘1e3’ is not a number of seconds'],
    ['61', '61 is too large: TR must be at most 60 seconds.']
  ] as const) {
    await page.getByLabel('TR', { exact: true }).fill(tr);
    await page.getByRole('button', { name: 'Make the task' }).click();
    await expect(page.getByRole('alert')).toContainText(words);
    await expect(page.getByLabel('TR', { exact: true })).toBeFocused();
    await expect(page.getByLabel('TR', { exact: true })).toHaveValue(tr);
  }
  await page.getByLabel('TR', { exact: true }).fill('1.5');
  await page.getByLabel('Volumes of a run').fill('12.5');
  await page.getByRole('button', { name: 'Make the task' }).click();
  await expect(page.getByRole('alert')).toContainText('12.5 is not a whole number of volumes.');
  await makeTask(page, study, { title: 'Chime and Lantern', volumes: 300 });
  await page.goto(lab.path);
  await expect(page.getByRole('row', { name: /Chime and Lantern/ })).toContainText('draft');
});

test('names with quotes, markup, emoji and right-to-left text are shown as they are', async ({ page }) => {
  let isRun = false;
  page.on('dialog', (dialog) => {
    isRun = true;
    void dialog.dismiss();
  });
  const hostile = `O'Brien "lab" </script><img src=x onerror=alert(1)> 🌊 مختبر`;
  await signUp(page, newPerson(hostile.slice(0, 100)));
  const lab = await makeLab(page, hostile);
  await expect(page.getByRole('heading', { level: 1 })).toHaveText(hostile);
  const study = await makeStudy(page, lab, hostile);
  await makeTask(page, study, { title: hostile });
  await page.goto(lab.path);
  await expect(page.getByRole('row').filter({ hasText: hostile })).toHaveCount(1);
  expect(isRun).toBe(false);
});

test('the demo lab opens with one button and shows its passwords once', async ({
  page,
  browser,
  baseURL
}) => {
  await page.goto('/');
  await ready(page);
  await page.getByRole('button', { name: 'Open the demo lab' }).click();
  const table = page.getByRole('table', { name: 'Accounts of the demo lab' });
  await expect(table.getByRole('row')).toHaveCount(5, { timeout: 30_000 });
  const cells = await table
    .getByRole('row')
    .filter({ hasText: 'operator' })
    .getByRole('cell')
    .allInnerTexts();
  const [, email, password] = cells as [string, string, string];
  expect(email).toMatch(/@marram\.example$/);
  expect(password.length).toBeGreaterThanOrEqual(12);
  await page.getByRole('link', { name: 'Go to the demo lab' }).click();
  await expect(page.getByRole('heading', { name: 'Marram Lab' })).toBeVisible();
  await expect(page.getByRole('row', { name: /Chime and Lantern/ })).toBeVisible();

  await page.goto('/');
  await expect(page.getByRole('table')).toHaveCount(0);
  await expect(page.getByText(password)).toHaveCount(0);

  const operator = await elsewhere(browser, baseURL);
  await signIn(operator, { email, password });
  await operator
    .getByRole('main')
    .getByRole('link', { name: /Marram Lab/ })
    .click();
  await expect(operator.getByText('You are operator of this lab.')).toBeVisible();
  await operator.context().close();
});

for (const theme of ['light', 'dim'] as const)
  test(`the screens are accessible in the ${theme} theme, and the choice is kept`, async ({ page }) => {
    test.setTimeout(240_000); // axe takes seconds for each of seven screens, many on a busy machine
    const { lab, study } = await newcomerWithTask(page);
    await page.goto('/labs');
    await ready(page);
    await page.getByLabel('Theme').selectOption(theme);
    for (const place of placesOf(lab.path, study)) {
      await page.goto(place);
      await expect(page.locator('html')).toHaveAttribute('data-theme', theme);
      await expectAccessible(page);
    }
  });

test('the screens fit a phone', async ({ page }) => {
  const { lab, study } = await newcomerWithTask(page);
  await page.setViewportSize({ width: 390, height: 800 });
  for (const place of placesOf(lab.path, study)) {
    await page.goto(place);
    const over = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth);
    expect(over, `${place} is wider than a phone`).toBeLessThanOrEqual(0);
  }
});

test('works by keyboard: the skip link, then a form sent with Enter', async ({ page }) => {
  await page.goto('/sign-up');
  await ready(page);
  await page.keyboard.press('Tab');
  await expect(page.getByRole('link', { name: 'Skip to the content' })).toBeFocused();
  await page.keyboard.press('Enter');
  const person = newPerson();
  await page.keyboard.press('Tab');
  await expect(page.getByLabel('Your name')).toBeFocused();
  for (const text of [person.name, person.email, person.password]) {
    await page.keyboard.type(text);
    await page.keyboard.press(text === person.password ? 'Enter' : 'Tab');
  }
  await page.waitForURL('**/labs');
});

const placesOf = (lab: string, study: string) => [
  '/',
  '/labs',
  '/account',
  lab,
  `${lab}/members`,
  study,
  `${study}/new-task`
];

async function addMember(page: Page, labPath: string, person: Person, role: string) {
  await page.goto(`${labPath}/members`);
  await ready(page);
  await page.getByLabel('E-mail address').fill(person.email);
  await page.getByLabel('Role', { exact: true }).selectOption(role);
  await page.getByRole('button', { name: 'Add', exact: true }).click();
}
