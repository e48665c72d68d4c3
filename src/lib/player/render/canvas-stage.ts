/**
 * Draws the items that are on. A frame without a change costs nothing; nothing is decoded or laid out here, pictures
 * come in ready to draw and the height of capitals is measured once.
 */
import type { Profile } from '$lib/task/profile';
import type { Item } from '$lib/task/schema';
import type { ScheduledItem } from '../schedule';
import { screenGeometry, type Geometry } from './geometry';
import { traceShape } from './shapes';

const FONT = '"Atkinson Hyperlegible", system-ui, sans-serif';
export type Pictures = ReadonlyMap<string, ImageBitmap>;

export class CanvasStage {
  readonly #canvas: HTMLCanvasElement;
  readonly #context: CanvasRenderingContext2D;
  readonly #screen: Profile['screen'];
  readonly #pictures: Pictures;
  #geometry: Geometry;
  /** Height of a capital as a share of the font size. */
  readonly #capital: number;
  #items: readonly ScheduledItem[] = [];
  #message = '';

  constructor(canvas: HTMLCanvasElement, screen: Profile['screen'], pictures: Pictures) {
    const context = canvas.getContext('2d', { alpha: false });
    if (!context) throw new Error('This browser draws no canvas: use a current Chromium-based browser.');
    this.#canvas = canvas;
    this.#context = context;
    this.#screen = screen;
    this.#pictures = pictures;
    this.#geometry = screenGeometry(screen, canvas.width, canvas.height);
    context.font = `100px ${FONT}`;
    this.#capital = context.measureText('H').actualBoundingBoxAscent / 100 || 0.7;
  }

  /** Takes the size of the element in device pixels; to be called when it changes, never in the frame loop. */
  fit(): void {
    const box = this.#canvas.getBoundingClientRect();
    const ratio = window.devicePixelRatio || 1;
    const width = Math.max(1, Math.round(box.width * ratio));
    const height = Math.max(1, Math.round(box.height * ratio));
    if (width !== this.#canvas.width || height !== this.#canvas.height) {
      this.#canvas.width = width;
      this.#canvas.height = height;
    }
    this.#geometry = screenGeometry(this.#screen, width, height);
    this.#paint();
  }

  draw(items: readonly ScheduledItem[]): void {
    this.#items = items;
    this.#paint();
  }

  /** Feedback in PRACTICE, under the centre; empty takes it away. */
  message(text: string): void {
    if (text === this.#message) return;
    this.#message = text;
    this.#paint();
  }

  #paint(): void {
    const c = this.#context;
    const { width, height } = this.#geometry;
    c.setTransform(1, 0, 0, 1, 0, 0);
    c.fillStyle = this.#screen.background;
    c.fillRect(0, 0, width, height);
    const flipX = this.#screen.flipX ? -1 : 1;
    const flipY = this.#screen.flipY ? -1 : 1;
    for (let i = 0; i < this.#items.length; i++) {
      const item = this.#items[i]!.item;
      if (item.kind === 'sound') continue;
      const x = this.#geometry.along(item.x);
      const y = this.#geometry.along(-item.y);
      c.setTransform(flipX, 0, 0, flipY, width / 2 + flipX * x, height / 2 + flipY * y);
      this.#drawItem(c, item);
    }
    if (!this.#message) return;
    c.setTransform(flipX, 0, 0, flipY, width / 2, height / 2 + flipY * height * 0.3);
    this.#drawText(c, this.#message, this.#geometry.extent(0.8), '#dfe7e4');
  }

  #drawItem(c: CanvasRenderingContext2D, item: Exclude<Item, { kind: 'sound' }>): void {
    switch (item.kind) {
      case 'text':
        return this.#drawText(c, item.text, this.#geometry.extent(item.size), item.colour);
      case 'shape':
        c.fillStyle = item.colour;
        c.beginPath();
        traceShape(c, item.shape, this.#geometry.extent(item.size));
        c.fill('evenodd');
        return;
      case 'fixation': {
        const size = this.#geometry.extent(item.size);
        const stroke = Math.max(1, Math.round(size / 8));
        c.fillStyle = item.colour;
        c.fillRect(-size / 2, -stroke / 2, size, stroke);
        c.fillRect(-stroke / 2, -size / 2, stroke, size);
        return;
      }
      case 'picture': {
        const picture = item.asset === null ? undefined : this.#pictures.get(item.asset);
        if (!picture) return;
        const width = this.#geometry.extent(item.width);
        const height = this.#geometry.extent(item.height);
        c.drawImage(picture, -width / 2, -height / 2, width, height);
      }
    }
  }

  #drawText(c: CanvasRenderingContext2D, text: string, capital: number, colour: string): void {
    const size = capital / this.#capital;
    c.font = `${size}px ${FONT}`;
    c.fillStyle = colour;
    c.textAlign = 'center';
    c.textBaseline = 'alphabetic';
    const lines = text.split('\n');
    const line = size * 1.3;
    const top = capital / 2 - ((lines.length - 1) * line) / 2;
    for (let i = 0; i < lines.length; i++) c.fillText(lines[i]!, 0, top + i * line);
  }
}
