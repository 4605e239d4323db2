/**
 * The course of a run from rest, at its own step ends, and how far one course lies from another.
 */
import type { Design } from '../../sim-core/index.ts';
import { assemble, type Plant } from '../../sim-core/plant/assemble.ts';
import { Probes } from '../../sim-core/readings/meter.ts';
import { type Accuracy, Transient } from '../../sim-core/transient/transient.ts';

/** Output voltage (V) and primary current (A) against time (s), which rises. */
export interface Course {
  readonly time: Float64Array;
  readonly output: Float64Array;
  readonly primary: Float64Array;
}

/** Two errors, in %. */
export interface CourseError {
  /** Worst error of the output voltage over the whole course, beside the largest output. */
  readonly output: number;
  /** Root mean square error of the primary current over the last two periods, beside its own. */
  readonly primary: number;
}

/** A transient from rest, its voltages found. */
export function fromRest(plant: Plant, accuracy: Accuracy): Transient {
  const transient = new Transient(plant.network, plant.pattern, accuracy);
  const failure = transient.prime();
  if (failure) throw new Error(`${failure.kind}: ${failure.name}`);
  return transient;
}

/** Step on until so many more whole periods have passed. */
export function advance(transient: Transient, periods: number): void {
  for (const end = transient.periods + periods; transient.periods < end; ) {
    const failure = transient.step();
    if (failure) throw new Error(`${failure.kind}: ${failure.name}`);
  }
}

/** A course from samples [time, output, primary, time, …]. */
export function courseOf(samples: ArrayLike<number>): Course {
  const every = (offset: number): Float64Array =>
    Float64Array.from({ length: samples.length / 3 }, (_, k) => samples[3 * k + offset]);
  return { time: every(0), output: every(1), primary: every(2) };
}

/** Reads the output voltage and the primary current of a transient. */
export function probesOf(plant: Plant, transient: Transient): Probes {
  const terms = (name: string) => {
    const signal = plant.signals.find((s) => s.name === name);
    if (!signal) throw new Error(`no signal is named "${name}"`);
    return signal.terms;
  };
  return new Probes(transient.stepper, [terms('output voltage'), terms('primary current')]);
}

/** Run a design from rest and keep every step's end. */
export function courseFromRest(design: Design, accuracy: Accuracy, periods: number): Course {
  const plant = assemble(design);
  const transient = fromRest(plant, accuracy);
  const probes = probesOf(plant, transient);
  const samples: number[] = [];
  while (transient.periods < periods) {
    const failure = transient.step();
    if (failure) throw new Error(`${failure.kind}: ${failure.name}`);
    probes.read();
    samples.push(transient.time, probes.values[0], probes.values[1]);
  }
  return courseOf(samples);
}

/**
 * Error of a course against a finer one. Compared at the course's own step ends only, where the
 * finer course is drawn straight between its own: so what a plot draws between steps is no error.
 */
export function errorOf(course: Course, finer: Course, period: number): CourseError {
  const end = finer.time[finer.time.length - 1];
  let worst = 0;
  let largest = 0;
  let missed = 0;
  let square = 0;
  let at = 0;
  let before = 0;
  for (let k = 0; k < course.time.length; k++) {
    const time = course.time[k];
    while (at < finer.time.length - 1 && finer.time[at] < time) at++;
    const left = Math.max(0, at - 1);
    const width = finer.time[at] - finer.time[left];
    const share = width > 0 ? Math.min(1, (time - finer.time[left]) / width) : 1;
    const between = (y: Float64Array): number => y[left] + share * (y[at] - y[left]);
    const output = between(finer.output);
    worst = Math.max(worst, Math.abs(course.output[k] - output));
    largest = Math.max(largest, Math.abs(output));
    if (time > end - 2 * period * (1 + 1e-9)) {
      const primary = between(finer.primary);
      // Each step counts by its length: finely stepped stretches are not counted twice.
      missed += (time - before) * (course.primary[k] - primary) ** 2;
      square += (time - before) * primary ** 2;
    }
    before = time;
  }
  return { output: (100 * worst) / largest, primary: 100 * Math.sqrt(missed / square) };
}
