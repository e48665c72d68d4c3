/** The player's one script, made as the application's build makes it. */
import { resolve } from 'node:path';
import { bundleModule } from '../../../scripts/vite-plugin-bundle';

const root = resolve(import.meta.dirname, '../../..');
let made: Promise<string> | null = null;

export const playerScript = (): Promise<string> =>
  (made ??= bundleModule(resolve(root, 'src/lib/player/standalone.ts'), 'iife', root).then(
    ({ code }) => code
  ));
