/** `npm start`: installs and builds what is missing or out of date, then serves the page. */
import { statSync, utimesSync } from 'node:fs';
import { join } from 'node:path';
import { alone, installIfNeeded, project } from './headless/install.mjs';
import { newestChange } from './headless/sources.mjs';

await installIfNeeded();
const { build, preview } = await import('vite');

const configFile = join(project, 'vite.config.ts');
const built = join(project, 'dist', 'index.html');

const sources = ['app', 'sim-core', 'public', 'vite.config.ts', 'package-lock.json'];
const isCurrent = () =>
  (statSync(built, { throwIfNoEntry: false })?.mtimeMs ?? 0) > newestChange(sources);

if (!isCurrent()) {
  await alone('install', async () => {
    if (isCurrent()) return;
    console.log('Building…');
    const begun = new Date();
    await build({ configFile, logLevel: 'warn' });
    // Dated from its beginning: an edit made while it ran must count as later.
    utimesSync(built, begun, begun);
  });
}

// Without strictPort a busy port moves on to the next free one.
const server = await preview({ configFile });
console.log(`Kilostack runs at ${server.resolvedUrls?.local[0]}  (Ctrl+C stops it)`);
