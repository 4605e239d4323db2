/**
 * The base case by a general-purpose library for differential-algebraic equations, in C: see
 * peer/baseCase.c. Built where a C compiler and the library (Debian: libsundials-dev) are found.
 */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { type Design, GROUPS } from '../../sim-core/index.ts';
import { windingOf } from '../../sim-core/plant/transformer.ts';
import { type Course, courseOf } from './course.ts';

/** One run of the peer. */
export interface PeerRun {
  readonly course: Course;
  /** Seconds computed between rest and the end, without the set-up. */
  readonly user: number;
  readonly steps: number;
}

/** The peer, built. */
export interface Peer {
  /** Solve a design of doublers from rest at a relative tolerance. */
  run(design: Design, tolerance: number, periods: number): PeerRun;
  /** Delete what was built. */
  close(): void;
}

const LIBRARIES = [
  'sundials_ida',
  'sundials_nvecserial',
  'sundials_sunlinsolklu',
  'sundials_sunmatrixsparse',
  'klu',
  'm',
];

/** Build the peer, or say in a sentence why there is none. */
export function buildPeer(): Peer | string {
  const home = mkdtempSync(join(tmpdir(), 'kilostack-peer-'));
  const program = join(home, 'baseCase');
  const { CC: compiler = 'cc' } = process.env;
  const built = spawnSync(
    compiler,
    [
      '-O3',
      '-march=native',
      '-I/usr/include/suitesparse',
      resolve('tests/bench/peer/baseCase.c'),
      '-o',
      program,
      ...LIBRARIES.map((name) => `-l${name}`),
    ],
    { encoding: 'utf8' },
  );
  const close = (): void => rmSync(home, { recursive: true, force: true });
  if (built.status !== 0) {
    close();
    const why = built.error ? 'no C compiler' : built.stderr.split('\n')[0] || `${compiler} failed`;
    return `peer not present (${why})`;
  }
  return {
    close,
    run(design, tolerance, periods) {
      const { status, stdout, stderr } = spawnSync(program, [String(tolerance), String(periods)], {
        input: valuesOf(design),
        maxBuffer: 1 << 28,
      });
      if (status !== 0) throw new Error(`The peer failed: ${stderr}`);
      const [user, steps] = stderr.toString().split(' ').map(Number);
      const numbers = new Float64Array(Uint8Array.from(stdout).buffer);
      return { course: courseOf(numbers), user, steps };
    },
  };
}

/** Every number of a design by its place, and every winding's with what it overrides. */
function valuesOf(design: Design): string {
  const lines: string[] = [];
  const list = (place: string, values: object): void => {
    for (const [key, value] of Object.entries(values)) {
      if (typeof value === 'number') lines.push(`${place}.${key}\t${value}`);
    }
  };
  for (const group of Object.keys(GROUPS) as (keyof typeof GROUPS)[]) list(group, design[group]);
  for (let k = 1; k <= design.sections.count; k++) list(`winding ${k}`, windingOf(design, k));
  return `${lines.join('\n')}\n`;
}
