/**
 * Finds a Chromium that really starts, or gets one. A browser that is merely present proves
 * nothing: it may lack a library or a sandbox.
 */
import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { delimiter, join } from 'node:path';
import { chromium } from '@playwright/test';
import { launchArguments } from './launch-arguments.mjs';

const names = ['chromium', 'chromium-browser', 'google-chrome-stable', 'google-chrome'];
const places = [
  '/Applications/Chromium.app/Contents/MacOS/Chromium',
  '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
  'C:\\Program Files\\Google\\Chrome\\Application\\chrome.exe',
];

/** Browsers of the system that exist as files, on the search path first. */
function systemBrowsers() {
  const folders = (process.env.PATH ?? '').split(delimiter).filter(Boolean);
  return [
    ...names.flatMap((name) => folders.map((folder) => join(folder, name))),
    ...places,
  ].filter(existsSync);
}

/**
 * @param {string} executablePath
 * @returns {Promise<boolean>} whether it starts and opens a page
 */
async function starts(executablePath) {
  if (!existsSync(executablePath)) return false;
  try {
    const browser = await chromium.launch({
      executablePath,
      args: launchArguments,
      timeout: 30_000,
    });
    await browser.newPage();
    await browser.close();
    return true;
  } catch (error) {
    const reason = String(error).split('\n').slice(0, 3).join(' ');
    console.error(`${executablePath} does not start: ${reason}`);
    return false;
  }
}

/** @param {string[]} candidates */
async function firstThatStarts(candidates) {
  for (const candidate of new Set(candidates)) if (await starts(candidate)) return candidate;
  return undefined;
}

/** @param {string} program @param {string[]} words */
function run(program, words) {
  console.log(`> ${program} ${words.join(' ')}`);
  const environment = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
  return spawnSync(program, words, { stdio: ['ignore', 2, 2], env: environment }).status === 0;
}

/**
 * @returns {Promise<string>} path of a browser that starts
 * @throws when there is none and none can be had; the message says what to do
 */
export async function findBrowser() {
  const asked = process.env.KILOSTACK_BROWSER;
  if (asked) {
    if (await starts(asked)) return asked;
    throw new Error(`KILOSTACK_BROWSER names ${asked}, which does not start. Correct or unset it.`);
  }

  const present = await firstThatStarts([chromium.executablePath(), ...systemBrowsers()]);
  if (present) return present;

  const isRoot = process.getuid?.() === 0;
  if (isRoot && existsSync('/usr/bin/apt-get')) {
    run('apt-get', ['update', '-qq']);
    run('apt-get', ['install', '-y', '-qq', '-o', 'DPkg::Lock::Timeout=300', 'chromium']);
    const installed = await firstThatStarts(systemBrowsers());
    if (installed) return installed;
  }

  const playwright = join(import.meta.dirname, '../node_modules/@playwright/test/cli.js');
  run(process.execPath, [playwright, 'install', 'chromium']);
  if (await starts(chromium.executablePath())) return chromium.executablePath();

  throw new Error(
    'No Chromium starts on this machine, and none could be installed. Install Chromium or Chrome ' +
      'with your system’s package manager, or set KILOSTACK_BROWSER to the path of one.',
  );
}
