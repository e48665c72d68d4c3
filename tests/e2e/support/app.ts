/** What a person does in the application, in words: sign up, make a lab, a study, a task. */
import { AxeBuilder } from '@axe-core/playwright';
import { expect, type Page } from '@playwright/test';

export interface Person {
  name: string;
  email: string;
  password: string;
}
export interface LabPlace {
  /** Address of the Desk, `/labs/…`. */
  path: string;
  id: string;
}
export interface TaskPlace {
  /** Address of the task, `/labs/…/tasks/…`, without the page's name behind it. */
  path: string;
  id: string;
  lab: string;
}

let count = 0;
/** Somebody nobody has seen before. */
export function newPerson(name = 'Ada Probe'): Person {
  const mark = `${Date.now().toString(36)}-${process.pid}-${++count}`;
  return { name, email: `probe-${mark}@marram.example`, password: `tide table ${mark}` };
}

/** Waits until the page's own script runs, so that no click is lost on server-rendered buttons. */
export async function ready(page: Page) {
  await page.waitForLoadState('networkidle');
}

export async function signUp(page: Page, person: Person = newPerson()): Promise<Person> {
  await page.goto('/sign-up');
  await ready(page);
  await page.getByLabel('Your name').fill(person.name);
  await page.getByLabel('E-mail address').fill(person.email);
  await page.getByLabel('Password').fill(person.password);
  await page.getByRole('button', { name: 'Make my account' }).click();
  await page.waitForURL('**/labs');
  return person;
}

export async function signIn(page: Page, person: Pick<Person, 'email' | 'password'>) {
  await page.goto('/sign-in');
  await ready(page);
  await page.getByLabel('E-mail address').fill(person.email);
  await page.getByLabel('Password').fill(person.password);
  await page.getByRole('button', { name: 'Sign in' }).click();
}

export async function signOut(page: Page) {
  await page.getByRole('button', { name: 'Sign out' }).click();
  await page.waitForURL((url) => url.pathname === '/');
}

export async function makeLab(page: Page, name = 'Probe Lab'): Promise<LabPlace> {
  await page.goto('/labs');
  await ready(page);
  await page.getByLabel('Name of the lab').fill(name);
  await page.getByRole('button', { name: 'Make the lab' }).click();
  await page.waitForURL(/\/labs\/[0-9a-f-]{36}$/);
  const path = new URL(page.url()).pathname;
  return { path, id: path.split('/')[2]! };
}

/** Makes a study and stays on the form for its first task. Returns the study's address. */
export async function makeStudy(
  page: Page,
  lab: LabPlace,
  name = 'Attention between senses'
): Promise<string> {
  await page.goto(`${lab.path}/studies/new`);
  await ready(page);
  await page.getByLabel('Name of the study').fill(name);
  await page.getByRole('button', { name: 'Make the study' }).click();
  await page.waitForURL('**/new-task');
  return new URL(page.url()).pathname.replace(/\/new-task$/, '');
}

export interface TaskWish {
  title?: string;
  tr?: number | string;
  volumes?: number | string;
}

/** Makes a task in a study and waits for its brief. */
export async function makeTask(page: Page, study: string, wish: TaskWish = {}): Promise<TaskPlace> {
  if (!page.url().endsWith(`${study}/new-task`)) await page.goto(`${study}/new-task`);
  await ready(page);
  await page.getByLabel('Title').fill(wish.title ?? 'Chime and Lantern');
  await page.getByLabel('TR', { exact: true }).fill(String(wish.tr ?? 1.5));
  await page.getByLabel('Volumes of a run').fill(String(wish.volumes ?? 300));
  await page.getByRole('button', { name: 'Make the task' }).click();
  await page.waitForURL(/\/tasks\/[0-9a-f-]{36}\/brief$/);
  const path = new URL(page.url()).pathname.replace(/\/brief$/, '');
  const [, , lab, , id] = path.split('/');
  return { path, id: id!, lab: lab! };
}

/** A new person with a lab, a study and an empty task: what most tests start from. */
export async function newcomerWithTask(page: Page, wish: TaskWish = {}) {
  const person = await signUp(page);
  const lab = await makeLab(page);
  const study = await makeStudy(page, lab);
  const task = await makeTask(page, study, wish);
  return { person, lab, study, task };
}

/** Fails with the list of what a person with a screen reader or low vision would stumble over (WCAG 2.2 A and AA). */
export async function expectAccessible(page: Page) {
  const { violations } = await new AxeBuilder({ page })
    .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'])
    .analyze();
  expect(
    violations.map(
      ({ id, nodes }) => `${id}: ${nodes.map((node) => `${node.target} ${node.failureSummary}`).join('; ')}`
    )
  ).toEqual([]);
}

/** Sets the theme as the switch does. */
export async function chooseTheme(page: Page, theme: 'auto' | 'light' | 'dim') {
  await page.getByLabel('Theme').selectOption(theme);
}
