/** Background jobs, built after the application (whose adapter empties `build/` first) into `build/jobs/`. */
import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vite';

const source = (path: string) => fileURLToPath(new URL(`./src/lib/${path}`, import.meta.url));

export default defineConfig({
  publicDir: false,
  resolve: { alias: { $lib: source('').replace(/\/$/, '') } },
  build: {
    ssr: true,
    target: 'node20',
    outDir: 'build/jobs',
    emptyOutDir: true,
    rolldownOptions: {
      input: {
        worker: source('server/jobs/worker.ts'),
        'search-thread': source('server/jobs/search-thread.ts')
      },
      output: { entryFileNames: '[name].js', chunkFileNames: 'shared-[hash].js' }
    }
  }
});
