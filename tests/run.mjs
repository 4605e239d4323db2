/**
 * `npm test`: everything that is checked, from nothing. Installs, finds or gets a browser, then
 * runs every step even if an earlier one failed, so that one run tells everything. The last line
 * is `N passed, N failed, N skipped`.
 *
 * `npm run check` (--checks) stops before the unit tests.
 */
import { spawn } from 'node:child_process';
import { mkdirSync, readFileSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { join } from 'node:path';
import { alone, installIfNeeded, project } from '../app/headless/install.mjs';

/** Minutes for all steps together; a step that would pass the end is stopped and has failed. */
const allowance = 8;

await installIfNeeded();

const results = join(project, '.results');
const unitReport = join(results, 'unit.json');
const browserReport = join(results, 'e2e.json');
let deadline = Date.now() + allowance * 60_000;
const total = { passed: 0, failed: 0, skipped: 0 };
/** @type {string[]} */
const times = [];

/** @param {string} path @param {string} [bin] */
const tool = (path, bin = '') => join(project, 'node_modules', path, bin);

/**
 * Runs a step to its end, its words shown as they come.
 * @param {string} title
 * @param {string[]} command script and arguments, for this Node
 * @param {Record<string, string>} [environment]
 * @returns {Promise<boolean>} whether it succeeded
 */
async function step(title, command, environment = {}) {
  console.log(`\n── ${title}`);
  const begun = Date.now();
  const child = spawn(process.execPath, command, {
    cwd: project,
    stdio: ['ignore', 'inherit', 'inherit'],
    env: { ...process.env, ...environment },
  });
  const timer = setTimeout(
    () => {
      console.error(`${title}: stopped, the ${allowance} minutes for all steps are over.`);
      child.kill('SIGINT');
      setTimeout(() => child.kill('SIGKILL'), 10_000).unref();
    },
    Math.max(0, deadline - begun),
  );
  const status = await new Promise((resolve) => {
    child.once('close', resolve);
    child.once('error', (error) => {
      console.error(error.message);
      resolve(1);
    });
  });
  clearTimeout(timer);
  const succeeded = status === 0;
  const seconds = ((Date.now() - begun) / 1000).toFixed(1);
  times.push(`${succeeded ? 'ok    ' : 'FAILED'} ${seconds.padStart(6)} s  ${title}`);
  return succeeded;
}

/**
 * A step that counts as one test.
 * @param {Parameters<typeof step>} what
 */
async function check(...what) {
  total[(await step(...what)) ? 'passed' : 'failed']++;
}

/** @param {string} path @returns {any} undefined when the step never wrote its report */
function report(path) {
  try {
    return JSON.parse(readFileSync(path, 'utf8'));
  } catch {
    return undefined;
  }
}

/**
 * Adds a step's tests to the total. A step that failed without a failed test (a file that does
 * not load, no report) counts as one failure, lest the sum look clean.
 * @param {boolean} succeeded
 * @param {number} passed @param {number} failed @param {number} skipped
 */
function add(succeeded, passed, failed, skipped) {
  total.passed += passed;
  total.failed += succeeded ? failed : Math.max(1, failed);
  total.skipped += skipped;
}

/** @returns {Promise<{ path: string } | { reason: string }>} */
async function browserOrReason() {
  // Only now: the finder itself needs what has just been installed.
  const { findBrowser } = await import('./browser.mjs');
  try {
    return { path: await findBrowser() };
  } catch (error) {
    return { reason: String(error instanceof Error ? error.message : error) };
  }
}

/** A port nobody listens on at this moment. @returns {Promise<string>} */
async function freePort() {
  return new Promise((resolve, reject) => {
    const server = createServer();
    server.once('error', reject);
    server.listen(0, '127.0.0.1', () => {
      const { port } = /** @type {import('node:net').AddressInfo} */ (server.address());
      server.close(() => resolve(String(port)));
    });
  });
}

async function staticChecks() {
  await check('format and lint', [
    tool('@biomejs/biome/bin/biome'),
    'check',
    '--error-on-warnings',
    '--max-diagnostics=200',
  ]);
  await check('types', [tool('typescript/bin/tsc'), '-b', '--pretty', 'false']);
  await check('import rules', [join(import.meta.dirname, 'import-rules.mjs')]);
  await check('unused files, exports and packages', [tool('knip/bin/knip.js')]);
}

async function unitTests() {
  const succeeded = await step('unit tests', [
    tool('vitest/vitest.mjs'),
    'run',
    '--reporter=default',
    '--reporter=json',
    `--outputFile.json=${unitReport}`,
  ]);
  const unit = report(unitReport);
  // A file that does not load is a failed suite without tests.
  const unloaded = (unit?.testResults ?? []).filter(
    (/** @type {any} */ file) => file.status === 'failed' && file.assertionResults.length === 0,
  ).length;
  add(
    succeeded,
    unit?.numPassedTests ?? 0,
    (unit?.numFailedTests ?? 0) + unloaded,
    (unit?.numPendingTests ?? 0) + (unit?.numTodoTests ?? 0),
  );
}

/** @param {string} browser path of the program */
async function browserTests(browser) {
  const succeeded = await step(
    'browser tests',
    [tool('@playwright/test/cli.js'), 'test', '--config', 'e2e/playwright.config.ts'],
    { KILOSTACK_BROWSER: browser, KILOSTACK_PORT: await freePort() },
  );
  const stats = report(browserReport)?.stats;
  add(
    succeeded,
    stats?.expected ?? 0,
    (stats?.unexpected ?? 0) + (stats?.flaky ?? 0),
    stats?.skipped ?? 0,
  );
}

async function everything() {
  const browser = await browserOrReason();
  console.log('path' in browser ? `Browser: ${browser.path}` : browser.reason);

  deadline = Date.now() + allowance * 60_000;
  rmSync(results, { recursive: true, force: true });
  mkdirSync(results, { recursive: true });
  await staticChecks();
  await unitTests();
  // Held over both, lest a start elsewhere rebuild the site under the running tests.
  await alone('install', async () => {
    await check('build', [
      tool('vite/bin/vite.js'),
      'build',
      '--config',
      join(project, 'vite.config.ts'),
    ]);
    if ('path' in browser) await browserTests(browser.path);
  });
  if ('reason' in browser) {
    total.failed++;
    times.push(`FAILED           browser tests: ${browser.reason}`);
  }
}

if (process.argv.includes('--checks')) await staticChecks();
// One run at a time: a second would share its reports and its two cores.
else await alone('test', everything);

console.log(`\n${times.join('\n')}`);
console.log('The sum counts each step that is not a test run as one test.');
console.log(`${total.passed} passed, ${total.failed} failed, ${total.skipped} skipped`);
process.exitCode = total.failed > 0 ? 1 : 0;
