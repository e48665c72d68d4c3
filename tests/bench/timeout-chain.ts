/**
 * What onsets look like without a schedule: a page that shows the same pictures by a chain of `setTimeout`, each
 * started when the one before fires. Written for comparison with the player, measured by the same witness.
 */
import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';

/** Runs in the page. `plan`: ms from the trigger key, a picture shown at each for `length` ms. */
function chain(plan: number[], length: number, triggerKey: string): void {
  const canvas = document.querySelector('canvas')!;
  canvas.width = innerWidth;
  canvas.height = innerHeight;
  const pen = canvas.getContext('2d', { alpha: false })!;
  const paint = (colour: string) => {
    pen.fillStyle = '#000000';
    pen.fillRect(0, 0, canvas.width, canvas.height);
    pen.fillStyle = colour;
    pen.fillRect(canvas.width / 3, canvas.height / 3, canvas.width / 4, canvas.height / 4);
  };
  const step = (index: number) => {
    paint('#e0b35a');
    setTimeout(() => {
      paint('#000000');
      if (index + 1 < plan.length)
        setTimeout(() => step(index + 1), plan[index + 1]! - plan[index]! - length);
    }, length);
  };
  paint('#000000');
  window.addEventListener(
    'keydown',
    (event) => {
      if (event.code === triggerKey) setTimeout(() => step(0), plan[0]!);
    },
    { once: true }
  );
}

/** Writes the page and answers its address. */
export function writeChainPage(folder: string, plan: number[], length: number, triggerKey: string): string {
  const path = join(folder, 'chain.html');
  const call = `(${chain.toString()})(${JSON.stringify(plan)},${length},${JSON.stringify(triggerKey)})`;
  const style = 'body{margin:0;background:#000}canvas{display:block}';
  // tsx keeps functions' names by a helper of its own, which is not in the page.
  const script = `const __name=(f)=>f;${call}`;
  writeFileSync(
    path,
    `<!doctype html><meta charset="utf-8"><title>chain</title><style>${style}</style><canvas></canvas><script>${script}</script>`
  );
  return pathToFileURL(path).href;
}
