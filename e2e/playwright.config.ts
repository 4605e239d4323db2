/** Browser tests, run against the built site as the preview server serves it. */
import { fileURLToPath } from 'node:url';
import { defineConfig } from '@playwright/test';
import { launchArguments } from '../tests/launch-arguments.mjs';

const project = fileURLToPath(new URL('..', import.meta.url));
// tests/run.mjs names a port that is free; the number here serves a run by hand.
const port = Number(process.env.KILOSTACK_PORT ?? 4273);
const address = `http://127.0.0.1:${port}/`;

export default defineConfig({
  testDir: '.',
  testMatch: '**/*.spec.ts',
  outputDir: '../.results/e2e',
  // Two cores: what measures the page runs by itself, after the rest.
  workers: 2,
  projects: [
    { name: 'tasks', testIgnore: '**/speed.spec.ts' },
    { name: 'speed', testMatch: '**/speed.spec.ts', dependencies: ['tasks'] },
  ],
  retries: 0,
  forbidOnly: true,
  timeout: 60_000,
  reporter: [['list'], ['json', { outputFile: '../.results/e2e.json' }]],
  use: {
    baseURL: address,
    // A trace of every test takes half as long again: ask for one by hand, with --trace on.
    trace: 'off',
    screenshot: 'only-on-failure',
    launchOptions: {
      executablePath: process.env.KILOSTACK_BROWSER,
      args: launchArguments,
    },
  },
  webServer: {
    command: `node node_modules/vite/bin/vite.js preview --port ${port} --strictPort`,
    cwd: project,
    url: address,
    reuseExistingServer: false,
  },
});
