/**
 * Brings node_modules up to the lock file, when it is not there yet. Node built-ins only: this
 * runs before anything is installed.
 */
import { spawnSync } from 'node:child_process';
import { linkSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { fileURLToPath } from 'node:url';

/** The project's own folder. */
export const project = fileURLToPath(new URL('../../', import.meta.url));

/**
 * A package as a lock file lists it.
 * @typedef {{ version?: string, integrity?: string, optional?: boolean,
 *   os?: string[], cpu?: string[], libc?: string[] }} Locked
 */

/**
 * @param {string} path
 * @returns {Record<string, Locked> | undefined} undefined when there is no such lock file
 */
function lockedPackages(path) {
  let text;
  try {
    text = readFileSync(path, 'utf8');
  } catch {
    return undefined;
  }
  return JSON.parse(text).packages;
}

/**
 * Whether a platform's name is admitted by a package's list, where `!name` shuts one out.
 * @param {string[] | undefined} list
 * @param {string} name
 */
function admits(list, name) {
  if (list === undefined) return true;
  if (list.includes(`!${name}`)) return false;
  return list.every((entry) => entry.startsWith('!')) || list.includes(name);
}

/**
 * Whether npm must have installed this package here. An optional package that names no platform
 * may hang below one that was left out, so its absence proves nothing.
 * @param {Locked} entry
 */
function belongsHere(entry) {
  if (!entry.optional) return true;
  if (!entry.os && !entry.cpu) return false;
  const report = /** @type {{ header: { glibcVersionRuntime?: string } }} */ (
    process.report.getReport()
  );
  const libc = report.header.glibcVersionRuntime ? 'glibc' : 'musl';
  return (
    admits(entry.os, process.platform) &&
    admits(entry.cpu, process.arch) &&
    (process.platform !== 'linux' || admits(entry.libc, libc))
  );
}

/** Whether what npm says it installed is what the lock file asks for. */
function installIsCurrent() {
  const wanted = lockedPackages(join(project, 'package-lock.json'));
  const present = lockedPackages(join(project, 'node_modules', '.package-lock.json'));
  if (!wanted || !present) return false;
  for (const [path, entry] of Object.entries(wanted)) {
    if (path === '') continue;
    const installed = present[path];
    if (!installed) {
      if (belongsHere(entry)) return false;
    } else if (installed.version !== entry.version || installed.integrity !== entry.integrity) {
      return false;
    }
  }
  return Object.keys(present).every((path) => path in wanted);
}

/** @param {number} pid */
function isRunning(pid) {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    // EPERM: it runs, but belongs to someone else.
    return /** @type {NodeJS.ErrnoException} */ (error).code === 'EPERM';
  }
}

/** Longer than any install or test run takes: a lock this old (ms) was left behind. */
const abandoned = 30 * 60_000;

/**
 * Runs `work` while no other process of this project does work of the same kind: two first starts
 * must not install into one tree. The lock is a file that holds its owner's process number; one
 * left by a process that has died is taken over.
 * @template T
 * @param {'install' | 'test'} kind `install` covers whatever writes node_modules or dist
 * @param {() => T | Promise<T>} work
 * @returns {Promise<T>}
 */
export async function alone(kind, work) {
  const lock = join(project, `.${kind}.lock`);
  const mine = `${lock}.${process.pid}`;
  writeFileSync(mine, String(process.pid));
  try {
    let told = false;
    for (;;) {
      try {
        // A link appears with its content or not at all, so no one reads an empty lock.
        linkSync(mine, lock);
        break;
      } catch (error) {
        if (/** @type {NodeJS.ErrnoException} */ (error).code !== 'EEXIST') throw error;
      }
      let owner;
      let age;
      try {
        owner = Number(readFileSync(lock, 'utf8'));
        age = Date.now() - statSync(lock).mtimeMs;
      } catch {
        continue; // given back in between
      }
      if (!isRunning(owner) || age > abandoned) {
        rmSync(lock, { force: true });
        continue;
      }
      if (!told) console.error(`Waiting for process ${owner}, which holds .${kind}.lock`);
      told = true;
      await pause(250);
    }
  } finally {
    rmSync(mine, { force: true });
  }
  try {
    return await work();
  } finally {
    rmSync(lock, { force: true });
  }
}

/**
 * Installs if needed. All of npm's words go to stderr, so that a caller's stdout stays its own.
 * Ends the process with npm's status when npm fails.
 */
export async function installIfNeeded() {
  if (Number(process.versions.node.split('.')[0]) < 20) {
    console.error(`Kilostack needs Node.js 20 or newer; this is ${process.versions.node}.`);
    process.exit(1);
  }
  if (installIsCurrent()) return;
  const status = await alone('install', () => {
    if (installIsCurrent()) return 0;
    console.error('Installing packages…');
    // Both kinds are named because NODE_ENV=production or a user's npmrc may leave them out.
    const words = ['ci', '--include=dev', '--include=optional'];
    // npm names its own script when it started us; on Windows a bare `npm` is not a program.
    const script = process.env.npm_execpath;
    const byScript = script?.endsWith('.js') === true;
    const { status, error } = spawnSync(
      byScript ? process.execPath : 'npm',
      byScript ? [script, ...words] : words,
      { cwd: project, stdio: ['ignore', 2, 2], shell: !byScript && process.platform === 'win32' },
    );
    if (error) console.error(`npm could not be started: ${error.message}`);
    return status ?? 1;
  });
  if (status !== 0) {
    console.error('The packages could not be installed; npm says why above.');
    process.exit(status);
  }
}
