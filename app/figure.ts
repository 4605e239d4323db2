/** Live figures: a fixed number of significant digits, so that they do not jump as they run. */
import { PREFIXES, READINGS, type ReadingName, takesPrefix, type Unit } from '../sim-core/index.ts';

/** A figure and the unit that follows it, apart because they are set in different sizes. */
interface Figure {
  readonly number: string;
  readonly unit: string;
}

/** The unit with the prefix that suits a value, and what divides the value into it. */
export function unitOf(value: number, unit: Unit): { unit: string; divisor: number } {
  const exponent = value === 0 ? 0 : Number(Math.abs(value).toExponential(11).split('e')[1]);
  const group = takesPrefix(unit) ? Math.max(-18, Math.min(12, 3 * Math.floor(exponent / 3))) : 0;
  return { unit: (PREFIXES.get(group) ?? '') + unit, divisor: Number(`1e${group}`) };
}

/** The value to `digits` significant digits, trailing zeros kept: 20e-3, 'A' gives "20.0", "mA". */
function figureOf(value: number, unit: Unit, digits = 3): Figure {
  if (value === 0) return { number: '0', unit };
  const [mantissa, power] = Math.abs(value)
    .toExponential(digits - 1)
    .split('e');
  const sign = value < 0 ? '−' : '';
  const exponent = Number(power);
  const group = takesPrefix(unit) ? Math.max(-18, Math.min(12, 3 * Math.floor(exponent / 3))) : 0;
  const decimals = Math.max(0, Math.min(12, digits - 1 - (exponent - group)));
  const scaled = Number(mantissa) * 10 ** (exponent - group);
  return { number: sign + scaled.toFixed(decimals), unit: (PREFIXES.get(group) ?? '') + unit };
}

/** The same as one text: "20.0 mA". */
export function figureText(value: number, unit: Unit, digits = 3): string {
  const { number, unit: symbol } = figureOf(value, unit, digits);
  return symbol === '' ? number : `${number} ${symbol}`;
}

/** A reading in few digits, for a line beside a name: "59.4 kV", "0.31 %". */
export function readingText(name: ReadingName, value: number): string {
  const { unit } = READINGS[name];
  return figureText(value, unit, unit === '%' && Math.abs(value) < 10 ? 2 : 3);
}
