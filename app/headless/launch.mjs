/**
 * Runs a TypeScript entry of this project in Node:
 *
 *   node app/headless/launch.mjs <entry.ts> [arguments of the entry]
 *
 * The entry is bundled once per state of the sources and kept below node_modules/.cache; a start
 * from there loads no build tool. Stdout belongs to the entry alone.
 */
import { existsSync, mkdirSync, readdirSync, renameSync, rmSync, statSync } from 'node:fs';
import { basename, join, resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { installIfNeeded, project } from './install.mjs';
import { newestChange } from './sources.mjs';

const [entry, ...rest] = process.argv.slice(2);
if (entry === undefined) {
  console.error('Usage: node app/headless/launch.mjs <entry.ts> [arguments of the entry]');
  process.exit(2);
}

await installIfNeeded();

const name = basename(entry).replace(/\.ts$/, '');
const kept = join(project, 'node_modules', '.cache', 'kilostack');
const stamp = newestChange(['app', 'sim-core', 'tests/bench', 'package-lock.json']);
const home = join(kept, `${name}-${Math.ceil(stamp)}`);
const bundle = join(home, 'entry.js');

if (!existsSync(bundle)) {
  const { build } = await import('vite');
  // Built aside and moved into place: two first runs must not read each other's half.
  const aside = join(kept, `${name}-building-${process.pid}`);
  mkdirSync(kept, { recursive: true });
  await build({
    configFile: false,
    root: project,
    publicDir: false,
    logLevel: 'warn',
    build: {
      ssr: resolve(project, entry),
      outDir: aside,
      emptyOutDir: true,
      target: 'node20',
      minify: false,
      sourcemap: true,
      // Constants stay constants: the solver's loops are twice as fast when the compiler may
      // rely on the arrays of its working store never being exchanged.
      rolldownOptions: {
        output: { entryFileNames: 'entry.js', format: 'es', topLevelVar: false },
      },
    },
  });
  try {
    renameSync(aside, home);
  } catch (error) {
    // Another run was quicker with the same bundle.
    rmSync(aside, { recursive: true, force: true });
    if (!existsSync(bundle)) throw error;
  }
  // Bundles of earlier sources; a young one may still be starting in another process.
  for (const old of readdirSync(kept)) {
    const path = join(kept, old);
    if (!old.startsWith(`${name}-`) || path === home) continue;
    const age = Date.now() - (statSync(path, { throwIfNoEntry: false })?.mtimeMs ?? 0);
    if (age > 3_600_000) rmSync(path, { recursive: true, force: true });
  }
}

// npm runs scripts in the project's folder; files named by the user are relative to the user's.
const { INIT_CWD, npm_lifecycle_event: script } = process.env;
if (script === 'predict' && INIT_CWD) process.chdir(INIT_CWD);

// In place: a module may hold the array itself, as `import { argv } from 'node:process'` does.
process.argv.splice(0, process.argv.length, process.execPath, bundle, ...rest);
process.setSourceMapsEnabled(true);
await import(pathToFileURL(bundle).href);
