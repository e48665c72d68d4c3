import { writeFile } from 'node:fs/promises';
import { expect, test, type Page } from '@playwright/test';
import { chooseTheme, expectAccessible, newcomerWithTask } from './support/app';
import { lanterns, openScreen, openWith, pngOf } from './support/forms-tools';
import { stored } from './support/page-tools';

// Two people or a long piece of work in one test: more than the usual minute on a busy machine.
test.slow();

const type = async (page: Page, name: string, text: string) => {
  const field = page.getByRole('textbox', { name, exact: true });
  await field.fill(text);
  await field.blur();
};
const stages = (page: Page) => page.getByRole('button', { name: /^Stage \d+,/ });
const firstCard = async (page: Page, task: Parameters<typeof stored>[1]) =>
  (await stored(page, task)).document.cards[0]!;

/** Colour of the preview at a place in degrees of the default screen (0.6 m wide, 1.2 m away). */
const colourAt = (page: Page, x: number, y: number) =>
  page.getByRole('img', { name: /^The participant’s screen/ }).evaluate(
    (canvas, [right, up]) => {
      const { width, height } = canvas as HTMLCanvasElement;
      const tangent = (degrees: number) => (Math.tan((degrees * Math.PI) / 180) * 1.2 * width) / 0.6;
      const context = (canvas as HTMLCanvasElement).getContext('2d')!;
      const at = [Math.round(width / 2 + tangent(right!)), Math.round(height / 2 - tangent(up!))] as const;
      return [...context.getImageData(at[0], at[1], 1, 1).data.slice(0, 3)];
    },
    [x, y]
  );

test('a card is made of items and a response window, and shown as stages with exact times', async ({
  page
}) => {
  const { task } = await newcomerWithTask(page);
  await openScreen(page, task, 'cards');
  await expect(page.getByText('No trial card yet')).toBeVisible();
  await page.getByRole('button', { name: 'Add a card' }).click();
  await type(page, 'Card’s name', 'lantern');
  await type(page, 'Trial length', '2.25');
  await page.getByRole('button', { name: /^text ‘word’/ }).click();
  await type(page, 'Duration', '0.5');
  await type(page, 'Text', 'LOOK');
  await page.getByRole('button', { name: '+ Shape' }).click();
  await type(page, 'Onset in the trial', '0.5');
  await type(page, 'Duration', '0.75');
  await type(page, 'Position, right of centre', '5');
  await expect(stages(page)).toHaveCount(3);
  expect(await stages(page).evaluateAll((all) => all.map((e) => e.getAttribute('aria-label')))).toEqual([
    'Stage 1, 0 to 0.5 s: text',
    'Stage 2, 0.5 to 1.25 s: shape',
    'Stage 3, 1.25 to 2.25 s: blank'
  ]);

  // The preview is drawn to the screen in degrees: the lantern stands 5° to the right, nothing to the left.
  await stages(page).nth(1).click();
  await expect.poll(() => colourAt(page, 5, 0)).toEqual([0xe0, 0xb3, 0x5a]);
  expect(await colourAt(page, -5, 0)).toEqual([0, 0, 0]);
  expect(await colourAt(page, 7.5, 0)).toEqual([0, 0, 0]);

  await type(page, 'Duration', '0');
  await expect(page.getByRole('main').getByRole('alert')).toContainText(
    'Duration is 0 s, but must be more than 0 s.'
  );
  await type(page, 'Duration', '0.001');
  await expect(page.getByRole('main').getByRole('alert')).toContainText(
    'shorter than one frame of the screen'
  );
  await type(page, 'Duration', '3');
  await page.getByRole('button', { name: 'Make the trial 3.5 s long' }).click();
  await expect.poll(async () => (await firstCard(page, task)).duration).toBe(3_500_000);

  await page.getByRole('button', { name: '+ Tone' }).click();
  await page.getByRole('button', { name: 'Hear this tone' }).click();
  await type(page, 'Frequency', '5');
  await expect(page.getByRole('main').getByRole('alert')).toContainText(
    'Frequency is 5 Hz, but must be 20 Hz or more.'
  );
  await type(page, 'Frequency', '660');
  await page.getByRole('button', { name: '+ Response window' }).click();
  await expect(page.getByText('No response is named yet; name them in the Brief.')).toBeVisible();
  await type(page, 'Opens at', '0.5');
  await page.getByLabel('Takes', { exact: true }).selectOption('all presses');
  await expect
    .poll(async () => (await firstCard(page, task)).windows.map((w) => [w.onset, w.take]))
    .toEqual([[500_000, 'all']]);
  const card = await firstCard(page, task);
  expect(card.items.map((i) => [i.kind, i.modelled])).toEqual([
    ['text', true],
    ['shape', false],
    ['sound', false]
  ]);
  await expectAccessible(page);
});

test('the preview plays at real speed and comes back to the start', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'cards', lanterns());
  const before = Date.now();
  await page.getByRole('button', { name: 'Play', exact: true }).click();
  await expect(page.getByRole('button', { name: 'Stop', exact: true })).toBeVisible();
  await expect(stages(page).nth(1)).toHaveAttribute('aria-current', 'step');
  await expect(page.getByRole('button', { name: 'Play', exact: true })).toBeVisible();
  expect(Date.now() - before).toBeGreaterThan(1900);
  await expect(stages(page).nth(0)).toHaveAttribute('aria-current', 'step');
});

test('a picture is uploaded; what is none is refused in plain words and the card stays as it was', async ({
  page
}, info) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'cards', lanterns());
  await page.getByRole('button', { name: '+ Picture' }).click();
  const chooser = page.locator('input[type=file]');
  const give = (name: string, buffer: Buffer, mimeType = 'image/png') =>
    chooser.setInputFiles({ name, mimeType, buffer });
  const alert = page.getByRole('main').getByRole('alert');

  await give(
    'drawing.svg',
    Buffer.from('<svg xmlns="http://www.w3.org/2000/svg"><script>1</script></svg>'),
    'image/svg+xml'
  );
  await expect(alert).toContainText(/SVG/);
  await give('notes.png', Buffer.from('this is no picture at all'));
  await expect(alert).toContainText(/PNG, JPEG, GIF or WebP/);
  await give('empty.png', Buffer.alloc(0));
  await expect(alert).toContainText('‘empty.png’ is empty (0 bytes)');
  const huge = info.outputPath('huge.png');
  await writeFile(huge, Buffer.concat([pngOf(4, 4, [1, 2, 3]), Buffer.alloc(21_000_000)]));
  await chooser.setInputFiles(huge);
  await expect(alert).toContainText(/larger than the 20\.0 MB allowed here/, { timeout: 30_000 });
  await expect(alert).toContainText('The card is as it was.');
  await expect(page.getByText('No picture chosen yet.')).toBeVisible();

  await give('harbour.png', pngOf(80, 40, [200, 40, 90]));
  await expect(page.getByRole('img', { name: 'Picture harbour.png' })).toBeVisible();
  await expect(alert).toHaveCount(0);
  // The shape of the file is kept: twice as wide as high.
  await expect
    .poll(async () => (await firstCard(page, task)).items.at(-1))
    .toMatchObject({ kind: 'picture', file: 'harbour.png', width: 6, height: 3 });
  await expect.poll(() => colourAt(page, 2, 1)).toEqual([200, 40, 90]);
});

test('a card in use asks before it goes with its trials; copy and undo', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'cards', lanterns());
  const cards = page.getByRole('navigation', { name: 'Trial cards' }).getByRole('listitem');
  await page.getByRole('button', { name: 'Copy', exact: true }).click();
  await expect(cards).toHaveCount(3);
  // The copy stands on no run, so it goes without a question.
  await page.getByRole('button', { name: 'Remove', exact: true }).click();
  await expect(cards).toHaveCount(2);
  await cards.nth(1).getByRole('button').click();
  await page.getByRole('button', { name: 'Remove', exact: true }).click();
  const question = page.getByRole('dialog', { name: 'Remove the card ‘follow-chime’?' });
  await expect(question).toContainText('It is used by 12 trials on Run 1; these trials go with it.');
  await question.getByRole('button', { name: 'Remove' }).click();
  await expect(cards).toHaveCount(1);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(cards).toHaveCount(2);
  await expect.poll(async () => (await stored(page, task)).document.runs[0]!.trials.length).toBe(24);
  await chooseTheme(page, 'dim');
  await expectAccessible(page);
});

test('responses that count and the correct one', async ({ page }) => {
  const { task } = await newcomerWithTask(page);
  await openWith(page, task, 'cards', lanterns());
  await page.getByRole('button', { name: /^answer correct: same/ }).click();
  await page.getByRole('checkbox', { name: 'same' }).uncheck();
  await expect(page.getByLabel('Correct response')).toHaveValue('');
  await page.getByRole('checkbox', { name: 'different' }).click();
  await expect(page.getByRole('main').getByRole('alert')).toContainText('At least one response must count');
  await expect(page.getByRole('checkbox', { name: 'different' })).toBeChecked();
  await page.getByLabel('Correct response').selectOption('different');
  await expect
    .poll(async () => {
      const { document } = await stored(page, task);
      const window = document.cards[0]!.windows[0]!;
      const name = (id: string | null) => document.brief.responses.find((r) => r.id === id)?.name;
      return [window.allowed.map(name), name(window.correct)];
    })
    .toEqual([['different'], 'different']);
});
