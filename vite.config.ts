import vue from '@vitejs/plugin-vue';
import { defineConfig } from 'vitest/config';

const apiPort = process.env.FEEDERWRIGHT_API_PORT ?? '7401';
const api = { target: `http://127.0.0.1:${apiPort}`, changeOrigin: false };

/** Functions of their arguments and no more: these tests may share one process, which loads the engine once. */
const pureTests = [
  'tests/workers/engine/**/*.test.ts',
  'tests/shared/**/*.test.ts',
  'tests/db/demo/**/*.test.ts',
];

export default defineConfig({
  plugins: [vue()],
  build: {
    outDir: 'dist/client',
    emptyOutDir: true,
    // A strict content security policy forbids data: scripts and inline styles; fonts and images stay files.
    assetsInlineLimit: 0,
    chunkSizeWarningLimit: 700,
  },
  server: { host: '127.0.0.1', proxy: { '/api': api } },
  test: {
    projects: [
      {
        extends: true,
        test: {
          name: 'code',
          include: ['tests/**/*.test.ts'],
          exclude: pureTests,
          globalSetup: ['tests/support/global-setup.ts'],
          testTimeout: 150_000,
          hookTimeout: 120_000,
          maxWorkers: 2,
        },
      },
      {
        extends: true,
        test: {
          name: 'engine',
          include: pureTests,
          testTimeout: 90_000,
          isolate: false,
          maxWorkers: 2,
        },
      },
      {
        extends: true,
        test: {
          name: 'browser',
          include: ['tests/e2e/**/*.e2e.ts'],
          globalSetup: ['tests/support/browser-setup.ts'],
          testTimeout: 120_000,
          hookTimeout: 120_000,
          maxWorkers: 1,
          fileParallelism: false,
        },
      },
    ],
  },
});
