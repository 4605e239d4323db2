/** Round figures for a printed scale. */

/** One mark of a scale. */
export interface Tick {
  readonly value: number;
  readonly major: boolean;
}

/** The round step (1, 2 or 5 times a power of ten) nearest above `least`, which is > 0. */
export function roundStep(least: number): number {
  const decade = 10 ** Math.floor(Math.log10(least));
  const step = [1, 2, 5, 10].find((m) => m * decade >= least * (1 - 1e-9)) ?? 10;
  return Number((step * decade).toPrecision(3));
}

/**
 * Marks between `from` and `to`, each the product of a whole number and the step, so that no
 * rounding gathers along the scale.
 * @param majors  most figures that fit
 */
export function ticksBetween(from: number, to: number, majors: number): readonly Tick[] {
  if (!(to > from) || majors < 1) return [];
  const major = roundStep((to - from) / majors);
  const lead = Number(String(major).replace(/[0.]/g, '')[0]);
  const parts = lead === 2 ? 4 : 5;
  const ticks: Tick[] = [];
  for (let i = Math.ceil((from / major) * parts - 1e-9); i <= (to / major) * parts + 1e-9; i++) {
    ticks.push({ value: Number(((i * major) / parts).toPrecision(12)), major: i % parts === 0 });
  }
  return ticks;
}
