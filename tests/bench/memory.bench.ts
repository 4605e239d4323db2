/**
 * How much memory the engine holds over a long run of the demo.
 *
 *   npm run bench memory                            20,000 drive periods
 *   node app/headless/launch.mjs tests/bench/memory.bench.ts 1000000
 *
 * Fails above the limit, or where what grew so far would lead above it within 10⁶ periods.
 */
import { spawnSync } from 'node:child_process';
import { EXAMPLES } from '../../sim-core/index.ts';
import { Run } from '../../sim-core/solve.ts';

/** Largest resident memory of the process over 10⁶ periods: the engine's, not the bundler's. */
const LIMIT_MB = 200;
const GOAL_PERIODS = 1_000_000;
const SAMPLES = 40;

const total = Number(process.argv[2] ?? 20_000);
if (!Number.isInteger(total) || total < SAMPLES) {
  console.error(`The number of periods must be a whole number from ${SAMPLES}.`);
  process.exit(2);
}
if (process.argv[3] !== 'alone') {
  // The launcher may just have bundled this file here: measure in a process that has not.
  const words = ['--expose-gc', process.argv[1], String(total), 'alone'];
  const { status } = spawnSync(process.execPath, words, { stdio: 'inherit' });
  process.exit(status ?? 1);
}
const { gc } = globalThis;
if (!gc) throw new Error('What is held shows only after a collection: --expose-gc.');
const collect = gc;

const megabytes = (bytes: number): number => bytes / 1e6;

/** What the run holds: objects and arrays that survive a collection, MB. */
function held(): number {
  collect();
  const { heapUsed, external } = process.memoryUsage();
  return megabytes(heapUsed + external);
}

/** Slope of the straight line with the least squares through the points. */
function slope(points: readonly { readonly x: number; readonly y: number }[]): number {
  const mean = (of: (p: { readonly x: number; readonly y: number }) => number): number =>
    points.reduce((sum, p) => sum + of(p), 0) / points.length;
  const x0 = mean((p) => p.x);
  const y0 = mean((p) => p.y);
  return mean((p) => (p.x - x0) * (p.y - y0)) / mean((p) => (p.x - x0) ** 2);
}

const opened = Run.open(EXAMPLES[0].design);
if (!opened.ok) throw new Error(opened.problem.message);
const run = opened.value;
const begun = performance.now();
const points: { x: number; y: number }[] = [];
const every = Math.floor(total / SAMPLES);
let periods = 0;
let peak = 0;
for (const ended of run.advance()) {
  if (!ended) continue;
  periods++;
  // Before the collection, so that it shows the garbage too. The system's own peak would not do:
  // a process begins with what its parent had.
  const resident = periods % 10 === 0 ? megabytes(process.memoryUsage.rss()) : 0;
  peak = Math.max(peak, resident);
  if (periods % every === 0) {
    points.push({ x: periods, y: held() });
    if (points.length % 4 === 0) {
      const { x, y } = points[points.length - 1];
      console.log(
        `${String(x).padStart(8)} periods: ${y.toFixed(2)} MB held, ${peak.toFixed(0)} MB resident at most`,
      );
    }
  }
  if (periods === total) break;
}
if (run.failed) throw new Error(run.failed.message);

const seconds = (performance.now() - begun) / 1000;
// The first half fills the cache of factors and warms up the compiler.
const growth = slope(points.slice(points.length / 2)) * 1e5;
const last = points[points.length - 1];
const expected = peak + Math.max(0, growth * ((GOAL_PERIODS - total) / 1e5));
console.log(
  `${periods} periods of “${run.design.name}” in ${seconds.toFixed(0)} s (${(periods / seconds).toFixed(0)} per second)`,
);
console.log(`held at the end    ${last.y.toFixed(2)} MB`);
console.log(`growth per 10⁵     ${growth.toFixed(3)} MB, over the second half`);
console.log(`peak resident      ${peak.toFixed(0)} MB`);
console.log(`expected at 10⁶    ${expected.toFixed(0)} MB, limit ${LIMIT_MB} MB`);
if (expected > LIMIT_MB) process.exitCode = 1;
