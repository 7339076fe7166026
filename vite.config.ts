import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import { defineConfig } from 'vitest/config';

export default defineConfig({
  plugins: [tailwindcss(), sveltekit()],
  server: { host: '127.0.0.1', watch: { ignored: ['**/data/**'] } },
  test: {
    projects: [
      {
        extends: true,
        test: {
          name: 'unit',
          environment: 'node',
          include: [
            'tests/{spectra,identity,domain,ui,standards,architecture,scripts,reference}/**/*.test.ts'
          ],
          setupFiles: ['tests/support/fixedSeed.ts'],
          testTimeout: 30_000
        }
      },
      {
        extends: true,
        test: {
          name: 'server',
          environment: 'node',
          include: ['tests/server/**/*.test.ts'],
          setupFiles: ['tests/support/fixedSeed.ts'],
          fileParallelism: false,
          testTimeout: 60_000,
          hookTimeout: 120_000
        }
      },
      {
        extends: true,
        test: {
          name: 'bench',
          environment: 'node',
          include: ['tests/bench/**/*.bench.ts'],
          benchmark: { include: ['tests/bench/**/*.bench.ts'] },
          testTimeout: 600_000,
          fileParallelism: false
        }
      }
    ]
  }
});
