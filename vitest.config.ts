import { defineConfig } from 'vitest/config';

/** Each project is a set of tests with the surroundings they need; `--project engine` runs one of them. */
export default defineConfig({
  test: {
    projects: [
      {
        extends: true,
        test: { name: 'engine', include: ['tests/{engine,published,house}/**/*.test.ts'], testTimeout: 60_000 },
      },
      {
        extends: './vite.config.ts',
        test: { name: 'dom', environment: 'jsdom', include: ['tests/dom/**/*.test.{ts,tsx}'], testTimeout: 30_000 },
      },
      {
        extends: true,
        test: {
          name: 'api',
          include: ['tests/{api,faults,fuzz,load,soak}/**/*.test.ts'],
          globalSetup: 'tests/support/cluster.ts',
          testTimeout: 60_000,
          hookTimeout: 60_000,
        },
      },
      {
        extends: true,
        test: {
          name: 'browser',
          include: ['tests/browser/**/*.test.ts'],
          globalSetup: 'tests/support/cluster.ts',
          // After all others and one file at a time: a browser, a server and a worker fill two cores.
          sequence: { groupOrder: 1 },
          fileParallelism: false,
          testTimeout: 90_000,
          hookTimeout: 120_000,
        },
      },
    ],
  },
});
