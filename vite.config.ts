import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import { defineConfig } from 'vitest/config';
import { bundleString } from './scripts/vite-plugin-bundle.ts';

export default defineConfig({
  plugins: [bundleString(), tailwindcss(), sveltekit()],
  // Without this the development server reloads the page in mid-use when it first meets them.
  optimizeDeps: { include: ['tone', 'seedrandom', 'svelte-dnd-action'] },
  test: {
    projects: [
      {
        extends: true,
        test: {
          name: 'unit',
          environment: 'node',
          include: ['tests/unit/**/*.test.ts'],
          server: { deps: { external: [/hed-validator/] } }
        }
      },
      {
        extends: true,
        test: {
          name: 'db',
          environment: 'node',
          include: ['tests/db/**/*.test.ts'],
          globalSetup: ['tests/db/global-setup.ts']
        }
      },
      {
        extends: true,
        test: {
          name: 'long',
          environment: 'node',
          include: ['tests/long/**/*.test.ts'],
          testTimeout: 600_000
        }
      }
    ]
  }
});
