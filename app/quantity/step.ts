/** How a value moves when a hand turns it: on the grid of its own significant digits. */
import type { CountField, QuantityField } from '../../sim-core/index.ts';

/** How far one step goes: the third significant digit, ten times as far, or a tenth. */
export type Pace = 'fine' | 'normal' | 'coarse';

const DIGIT: Readonly<Record<Pace, number>> = { coarse: 1, normal: 2, fine: 3 };

/** Power of ten of the digit that one step moves. */
function stepPower(field: QuantityField, value: number, pace: Pace): number {
  // Where a value may be 0 its steps must not shrink without end on the way there; from 0 itself
  // there is no digit to go by, so the default's is taken.
  const least = field.min > 0 ? 0 : field.max * 1e-6;
  const scale = Math.max(Math.abs(value) || Math.abs(field.default ?? 0), least) || field.min;
  return Number(scale.toExponential().split('e')[1]) - DIGIT[pace];
}

/** `value`, `steps` grid lines of 10^power up or down, in correctly rounded decimals. */
function onGrid(value: number, steps: number, power: number): number {
  const lines = value / Number(`1e${power}`);
  // Whoever stands between two lines goes to the next one first.
  const slack = 1e-6;
  const from = steps > 0 ? Math.floor(lines + slack) : Math.ceil(lines - slack);
  return Number(`${from + steps}e${power}`);
}

/**
 * `value` moved by a whole number of steps and kept within the bounds of its field; below the
 * least value lies 0 where the field allows it. A count moves by one, coarse by ten.
 */
export function stepValue(
  field: QuantityField | CountField,
  value: number,
  steps: number,
  pace: Pace,
): number {
  const within = (next: number) => Math.min(field.max, Math.max(field.min, next));
  if (field.kind === 'count') return within(value + steps * (pace === 'coarse' ? 10 : 1));

  const next = onGrid(value, steps, stepPower(field, value, pace));
  if (field.zero && next < field.min) return value > 0 && steps < 0 ? 0 : within(next);
  return within(next);
}
