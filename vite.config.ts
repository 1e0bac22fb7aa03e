import { availableParallelism } from 'node:os';
import tailwindcss from '@tailwindcss/vite';
import react from '@vitejs/plugin-react';
import { defineConfig, type TestProjectInlineConfiguration } from 'vitest/config';

const withDatabase = { globalSetup: ['tests/support/global-setup.ts'] };
const setupFiles = ['tests/support/console.ts'];

const project = (
  name: string,
  folder: string,
  more: TestProjectInlineConfiguration['test'] = {},
): TestProjectInlineConfiguration => ({
  extends: true,
  test: {
    name,
    include: [`tests/${folder}/**/*.test.{ts,tsx}`],
    env: { TZ: 'UTC' },
    setupFiles,
    ...more,
  },
});

export default defineConfig({
  plugins: [react(), tailwindcss()],
  publicDir: 'src/public',
  build: { outDir: 'dist', emptyOutDir: true },
  test: {
    // Tests wait for their database about as long as they reckon: two at once also where there are two cores.
    maxWorkers: Math.max(2, availableParallelism() - 1),
    projects: [
      project('unit', 'unit'),
      // The same in a zone off by three quarters of an hour: nothing may depend on the machine's zone.
      project('unit-elsewhere', 'unit', { env: { TZ: 'Pacific/Chatham' } }),
      project('reference', 'reference', {
        ...withDatabase,
        testTimeout: 60_000,
        hookTimeout: 60_000,
      }),
      project('integration', 'integration', {
        ...withDatabase,
        testTimeout: 60_000,
        hookTimeout: 60_000,
      }),
      project('browser', 'browser', {
        ...withDatabase,
        testTimeout: 120_000,
        hookTimeout: 120_000,
        fileParallelism: false,
      }),
    ],
  },
});
