/** When the sources last changed: what is built later than that need not be built again. */
import { readdirSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { project } from './install.mjs';

/**
 * The latest time of change (milliseconds since 1970) below the project's paths named. A folder
 * counts as well as its files: its own time moves when a file in it is deleted or renamed.
 * @param {string[]} paths relative to the project; one that does not exist is passed over
 * @returns {number}
 */
export function newestChange(paths) {
  let newest = 0;
  /** @param {string} path */
  const visit = (path) => {
    const entry = statSync(path, { throwIfNoEntry: false });
    if (!entry) return;
    newest = Math.max(newest, entry.mtimeMs);
    if (entry.isDirectory()) for (const name of readdirSync(path)) visit(join(path, name));
  };
  for (const path of paths) visit(join(project, path));
  return newest;
}
