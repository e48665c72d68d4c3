/** Tasks worth filling forms on, and members of other roles beside the one who made the lab. */
import { deflateSync } from 'node:zlib';
import { crc32 } from 'node:zlib';
import { expect, type Browser, type Page } from '@playwright/test';
import {
  addCard,
  addCondition,
  addContrast,
  addItem,
  addResponse,
  addWindow,
  editItem,
  editWindow,
  placeTrial
} from '../../../src/lib/task/commands';
import { newDocument } from '../../../src/lib/task/create';
import type { Item, TaskDocument } from '../../../src/lib/task/schema';
import { newPerson, ready, signUp, type TaskPlace } from './app';
import { stored } from './page-tools';

/** Two conditions, a card each (word, lantern, chime, an answer), a contrast, and trials in even alternation. */
export function lanterns({ trials = 24, volumes = 120, every = 6 } = {}): TaskDocument {
  let d = newDocument({ title: 'Chime and Lantern', label: 'chimes', tr: 1_500_000, volumes });
  const same = addResponse(d, 'same', 'right-index');
  const different = addResponse(same.document, 'different', 'right-middle');
  d = different.document;
  const cards = ['follow-lantern', 'follow-chime'].map((name) => {
    const condition = addCondition(d, name);
    const card = addCard(condition.document, name, condition.conditionId);
    const shape = addItem(card.document, card.cardId, 'shape');
    const place: Partial<Item> = { name: 'lantern', onset: 500_000, duration: 750_000, x: 5 };
    const placed = editItem(shape.document, card.cardId, shape.itemId, place);
    const window = addWindow(placed.document, card.cardId);
    const change = { onset: 500_000, duration: 1_400_000, correct: same.responseId };
    d = editWindow(window.document, card.cardId, window.windowId, change).document;
    return card.cardId;
  });
  const [a, b] = d.brief.conditions.map((c) => c.id);
  d = addContrast(d, 'lantern − chime', { [a!]: 1, [b!]: -1 }).document;
  for (let i = 0; i < trials; i++)
    d = placeTrial(d, d.runs[0]!.id, cards[i % 2]!, 3_000_000 + i * every * 1_000_000).document;
  return d;
}

/** Puts a document on the server as the next save, and opens one of the task's screens on it. */
export async function openWith(page: Page, task: TaskPlace, screen: string, document: TaskDocument) {
  const { saveNumber } = await stored(page, task);
  const answer = await page.evaluate(
    async ([id, base, body]) => {
      const headers = { 'content-type': 'application/json', 'if-match': `"${base}"` };
      const response = await fetch(`/api/v1/tasks/${id}/document`, { method: 'PUT', headers, body });
      return response.ok ? 'taken' : `${response.status} ${await response.text()}`;
    },
    [task.id, String(saveNumber), JSON.stringify({ document, words: ['made for a test'] })] as const
  );
  expect(answer).toBe('taken');
  await openScreen(page, task, screen);
}

export async function openScreen(page: Page, task: TaskPlace, screen: string) {
  await page.goto(`${task.path}/${screen}`);
  await ready(page);
}

/** A page of somebody else who has the role in the lab; `owner` is a page of the lab's owner. */
export async function asMember(browser: Browser, owner: Page, lab: string, role: string): Promise<Page> {
  const context = await browser.newContext();
  const page = await context.newPage();
  const person = await signUp(page, newPerson(`Probe ${role}`));
  const status = await owner.evaluate(
    async ([id, email, as]) => {
      const headers = { 'content-type': 'application/json' };
      const body = JSON.stringify({ email, role: as });
      return (await fetch(`/api/v1/labs/${id}/members`, { method: 'POST', headers, body })).status;
    },
    [lab, person.email, role] as const
  );
  expect(status).toBe(201);
  return page;
}

/** A picture of one colour, made here: the smallest true PNG of its size. */
export function pngOf(width: number, height: number, [r, g, b]: [number, number, number]): Buffer {
  const chunk = (type: string, data: Buffer) => {
    const body = Buffer.concat([Buffer.from(type), data]);
    const size = Buffer.alloc(4);
    size.writeUInt32BE(data.length);
    const sum = Buffer.alloc(4);
    sum.writeUInt32BE(crc32(body) >>> 0);
    return Buffer.concat([size, body, sum]);
  };
  const head = Buffer.alloc(13);
  head.writeUInt32BE(width, 0);
  head.writeUInt32BE(height, 4);
  head.set([8, 2, 0, 0, 0], 8);
  const row = Buffer.concat([Buffer.from([0]), Buffer.alloc(width * 3, Buffer.from([r, g, b]))]);
  const rows = Buffer.concat(Array.from({ length: height }, () => row));
  const mark = Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]);
  return Buffer.concat([
    mark,
    chunk('IHDR', head),
    chunk('IDAT', deflateSync(rows)),
    chunk('IEND', Buffer.alloc(0))
  ]);
}
