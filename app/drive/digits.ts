/**
 * The digits of a number one turns: which are shown, and what a step of one of them gives.
 * A digit is named by its power of ten in SI units, so that it keeps its meaning when the
 * prefix changes under it.
 */

const PREFIXES: Readonly<Record<number, string>> = { [-6]: 'µ', [-3]: 'm', 0: '', 3: 'k', 6: 'M' };

/** Most digits ever shown; finer ones are rounded away in print, not in the value. */
const MOST = 7;

/** One character of the number. */
export interface Digit {
  readonly char: string;
  /** Power of ten of the digit; null for the decimal point. */
  readonly power: number | null;
  /** A zero ahead of the number, shown because its digit is chosen. */
  readonly leading: boolean;
}

/** A number in engineering notation, digit by digit. */
export interface Digits {
  readonly digits: readonly Digit[];
  readonly prefix: string;
  /** Powers of ten of the first and the last digit shown. */
  readonly top: number;
  readonly bottom: number;
}

const topPower = (value: number): number => Number(value.toExponential(11).split('e')[1]);

/** Power of ten of the last significant digit of `value`, within MOST digits of its first. */
function lastPower(value: number): number {
  const [mantissa, exponent] = value.toExponential(MOST - 1).split('e') as [string, string];
  const decimals = mantissa.replace('.', '').replace(/0+$/, '').length - 1;
  return Number(exponent) - Math.max(0, decimals);
}

/**
 * The digits of a value ≥ 0.
 * @param least   digits shown at the least
 * @param chosen  power of ten of the chosen digit, which is always among those shown
 */
export function digitsOf(value: number, least: number, chosen: number): Digits {
  const own = value === 0 ? chosen : topPower(value);
  const first = Math.max(own, chosen);
  const exponent = Math.max(-6, Math.min(6, 3 * Math.floor(first / 3)));
  const wanted = Math.min(first - least + 1, value === 0 ? own : lastPower(value));
  const bottom = Math.min(chosen, exponent, Math.max(first - MOST + 1, wanted));
  const decimals = Math.max(0, exponent - bottom);
  const text = (value / 10 ** exponent).toFixed(decimals);
  const whole = text.split('.')[0].length;
  const padded = text.padStart(text.length + Math.max(0, first - exponent + 1 - whole), '0');
  const digits: Digit[] = [];
  let power = exponent + padded.split('.')[0].length - 1;
  let leading = true;
  for (const char of padded) {
    if (char === '.') {
      digits.push({ char, power: null, leading: false });
      continue;
    }
    if (char !== '0' || power <= Math.min(own, exponent)) leading = false;
    digits.push({ char, power, leading });
    power -= 1;
  }
  return { digits, prefix: PREFIXES[exponent], top: digits[0].power ?? first, bottom: power + 1 };
}

/**
 * The value after turning the digit at `power` by `steps`, kept within [min, max].
 * Decimal digits stay decimal: 22.00 kHz and one step of 10 Hz give 22.01 kHz exactly.
 */
export function stepDigit(
  value: number,
  power: number,
  steps: number,
  min: number,
  max: number,
): number {
  const scale = 10 ** Math.abs(power);
  const change = power < 0 ? steps / scale : steps * scale;
  return Math.min(max, Math.max(min, Number((value + change).toPrecision(12))));
}
