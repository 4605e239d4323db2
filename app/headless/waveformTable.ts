/**
 * Waveforms as a table of comma-separated values (RFC 4180 without a need for quotes): a row for
 * the start and for every step taken. Written as the run goes, in blocks, each of which waits for
 * the disk: memory stays bounded however long the run.
 */
import { closeSync, openSync, writeFileSync } from 'node:fs';
import type { Outcome } from '../../sim-core/index.ts';
import type { Run } from '../../sim-core/solve.ts';
import { nearestNames } from './nearest.ts';

/** Characters gathered before they are written. */
const BLOCK = 64 * 1024;

/** Places of the named signals in the run, or the sentence that refuses one of them. */
export function findSignals(run: Run, names: readonly string[]): Outcome<readonly number[]> {
  const known = run.signals.map((signal) => signal.name);
  const places = names.map((name) => known.indexOf(name));
  const unknown = places.indexOf(-1);
  if (unknown < 0) return { ok: true, value: places };
  const near = nearestNames(names[unknown], known)
    .map((name) => `“${name}”`)
    .join(', ');
  const message = `The design has no signal “${names[unknown].slice(0, 80)}”; the nearest are ${near}.`;
  return { ok: false, problem: { place: '--signals', message } };
}

/** A table that is being written. Its methods throw what the file system throws. */
export class WaveformTable {
  private readonly file: number;
  private readonly signals: readonly number[];
  private block: string;

  constructor(path: string, run: Run, signals: readonly number[]) {
    this.file = openSync(path, 'w');
    this.signals = signals;
    const columns = signals.map((k) => `${run.signals[k].name} (${run.signals[k].unit || '1'})`);
    this.block = `${['time (s)', ...columns].join(',')}\n`;
    this.add(run);
  }

  /** Append the present values as a row. */
  add(run: Run): void {
    let row = `${run.time}`;
    for (const k of this.signals) row += `,${run.value(k)}`;
    this.block += `${row}\n`;
    if (this.block.length >= BLOCK) this.flush();
  }

  private flush(): void {
    writeFileSync(this.file, this.block);
    this.block = '';
  }

  close(): void {
    this.flush();
    closeSync(this.file);
  }
}
