import { expect, test, type Page } from '@playwright/test';
import { chooseTheme, expectAccessible, makeLab, ready, signUp } from './support/app';
import { asMember } from './support/forms-tools';

// Two people or a long piece of work in one test: more than the usual minute on a busy machine.
test.slow();

const type = async (page: Page, name: string, text: string) => {
  const field = page.getByRole('textbox', { name, exact: true });
  await field.fill(text);
  await field.blur();
};
const learn = async (page: Page, what: string, key: string) => {
  await page.getByRole('button', { name: new RegExp(`^Learn the key for ${what}`) }).click();
  await page.keyboard.press(key);
};

test('an owner makes a profile, learns its keys by pressing, and saves versions of it', async ({
  page,
  browser
}) => {
  await signUp(page);
  const lab = await makeLab(page);
  await page.goto(`${lab.path}/profiles`);
  await ready(page);
  await expect(page.getByText('No scanner profile yet')).toBeVisible();
  await page.getByRole('link', { name: 'New profile' }).click();
  await ready(page);
  await type(page, 'Name of the profile', 'North scanner');
  await type(page, 'TR', '0');
  await expect(page.getByRole('main').getByRole('alert')).toContainText(
    'TR is 0 s, but must be more than 0 s.'
  );
  await type(page, 'TR', '1.5');

  await learn(page, 'the trigger', '1');
  await expect(page.getByRole('main').getByRole('alert')).toContainText(
    '1 (top row) is already the key of the right index finger. If it were the trigger too, each press would count as a pulse'
  );
  await learn(page, 'the trigger', 't');
  await expect(page.getByRole('button', { name: 'Learn the key for the trigger, now T' })).toBeVisible();
  await learn(page, 'the left index finger', 't');
  await expect(page.getByRole('main').getByRole('alert')).toContainText('T is the trigger key.');
  await learn(page, 'the left index finger', 'b');
  await learn(page, 'the right thumb', 'Shift');
  await expect(page.getByRole('main').getByRole('alert')).toContainText(
    'changes other keys instead of sending one'
  );
  await page.getByRole('button', { name: 'Forget the key of the right little finger' }).click();

  await type(page, 'Acquisition time, TA', '2');
  await expect(page.getByRole('main').getByRole('alert').filter({ hasText: 'does not fit' })).toContainText(
    'Acquisition from 0 s for 2 s does not fit into a TR of 1.5 s'
  );
  await page.getByRole('button', { name: 'Make this profile' }).click();
  await expect(
    page.getByRole('main').getByRole('alert').filter({ hasText: 'What you changed is still here.' })
  ).toBeVisible();
  await type(page, 'Acquisition time, TA', '1.2');
  await page.getByLabel('The scanner sends').selectOption('several pulses in a volume');
  await type(page, 'Pulses in a volume', '12');
  await page.getByLabel('flip left and right').check();
  await page.getByLabel('Display delay measured on').fill('2026-11-30');
  await page.getByRole('button', { name: 'Make this profile' }).click();
  await page.waitForURL(/\/profiles\/[0-9a-f-]{36}$/);
  await expect(page.getByText('version 1', { exact: true })).toBeVisible();

  await type(page, 'Eye to screen', '0.9');
  await page.getByRole('button', { name: 'Save a new version' }).click();
  await expect(page.getByText('version 2', { exact: true })).toBeVisible();
  await page.reload();
  await expect(page.getByRole('textbox', { name: 'Eye to screen' })).toHaveValue('0.9');
  const id = new URL(page.url()).pathname.split('/').at(-1)!;
  const stored = await page.evaluate(async (it) => (await fetch(`/api/v1/profiles/${it}`)).json(), id);
  expect(stored).toMatchObject({
    version: 2,
    profile: {
      name: 'North scanner',
      tr: 1.5,
      triggerKey: 'KeyT',
      acquisitionTime: 1.2,
      pulses: { mode: 'several-per-volume', perVolume: 12 },
      displayDelay: { date: '2026-11-30' },
      screen: { distance: 0.9, flipX: true }
    }
  });
  expect(stored.profile.responseKeys).toContainEqual({ code: 'KeyB', finger: 'left-index' });
  expect(stored.profile.responseKeys.map((k: { finger: string }) => k.finger)).not.toContain('right-little');
  await ready(page);
  await expectAccessible(page);

  const experimenter = await asMember(browser, page, lab.id, 'experimenter');
  await experimenter.goto(`${lab.path}/profiles`);
  await ready(experimenter);
  await expect(experimenter.getByRole('link', { name: 'New profile' })).toHaveCount(0);
  await expectAccessible(experimenter);
  await experimenter.getByRole('link', { name: 'North scanner' }).click();
  await expect(experimenter.getByText('Owners of the lab edit scanner profiles')).toBeVisible();
  await expect(
    experimenter.locator('main').locator('input:enabled, select:enabled, button:enabled')
  ).toHaveCount(0);
  await chooseTheme(experimenter, 'dim');
  await expectAccessible(experimenter);
  expect((await experimenter.goto(`${lab.path}/profiles/new`))?.status()).toBe(403);
  await experimenter.context().close();
});
