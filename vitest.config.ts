import { defineConfig } from 'vitest/config';

/** `core` needs nothing but Node; `window` drives a real window and needs a display (tests/helpers/electron-runtime.mjs). */
export default defineConfig({
  test: {
    projects: [
      {
        test: {
          name: 'core',
          environment: 'node',
          include: ['tests/**/*.test.ts'],
          exclude: ['tests/flows/**', 'node_modules/**'],
          testTimeout: 60_000,
          hookTimeout: 120_000,
        },
      },
      {
        test: {
          name: 'window',
          environment: 'node',
          include: ['tests/flows/**/*.flow.test.ts'],
          fileParallelism: false,
          maxWorkers: 1,
          testTimeout: 60_000,
          hookTimeout: 120_000,
          globalSetup: ['tests/helpers/window-setup.mjs'],
        },
      },
    ],
  },
});
