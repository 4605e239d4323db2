/**
 * `npm run bench [word]`: runs every benchmark beside this file, or those whose name holds the
 * word. Each gets a process of its own, so that none inherits another's heap or compiled code.
 */
import { spawnSync } from 'node:child_process';
import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { project } from '../../app/headless/install.mjs';

const word = process.argv[2] ?? '';
const benches = readdirSync(import.meta.dirname)
  .filter((name) => name.endsWith('.bench.ts') && name.includes(word))
  .sort();
if (benches.length === 0) {
  console.error(word ? `No benchmark's name holds "${word}".` : 'There is no benchmark.');
  process.exit(1);
}

const launcher = join(project, 'app', 'headless', 'launch.mjs');
let failed = 0;
for (const name of benches) {
  console.log(`\n${name}`);
  const { status } = spawnSync(process.execPath, ['--expose-gc', launcher, `tests/bench/${name}`], {
    cwd: project,
    stdio: 'inherit',
  });
  if (status !== 0) failed++;
}
if (failed > 0) console.error(`\n${failed} of ${benches.length} benchmarks failed.`);
process.exit(failed > 0 ? 1 : 0);
