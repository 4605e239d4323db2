/**
 * Checks the import rules of .dependency-cruiser.cjs, and that they were checked on something: a
 * compiler the tool cannot use makes it read no file at all and pass.
 */
import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { cruise, format } from 'dependency-cruiser';
import extractOptions from 'dependency-cruiser/config-utl/extract-depcruise-options';
import extractTsConfig from 'dependency-cruiser/config-utl/extract-ts-config';
import { project } from '../app/headless/install.mjs';

process.chdir(project);
const rooms = ['app', 'sim-core', 'tests', 'e2e'];
const { output } = await cruise(
  rooms,
  await extractOptions('./.dependency-cruiser.cjs'),
  undefined,
  {
    tsConfig: extractTsConfig('./tsconfig.json'),
  },
);
if (typeof output === 'string') throw new Error('the cruise returned text in place of a result');

const report = await format(output, { outputType: 'err-long' });
console.log(report.output);

const read = new Set(output.modules.map((module) => module.source));
const unread = rooms
  .flatMap((room) => readdirSync(room, { recursive: true }).map((path) => join(room, String(path))))
  .map((path) => path.replaceAll('\\', '/'))
  .filter((path) => /\.tsx?$/.test(path) && !read.has(path));
if (unread.length > 0) console.error(`Not read, so not checked: ${unread.join(', ')}`);

process.exitCode = output.summary.error > 0 || unread.length > 0 || read.size === 0 ? 1 : 0;
