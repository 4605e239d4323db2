/**
 * Quantities as text: engineering notation with SI prefixes (ISO 80000-1), rounded to
 * significant digits and renormalised after rounding, so that 999.96 reads 1 k, never 1000.
 */
import type { Unit } from './field.ts';

/** SI prefixes by their power of ten; M alone is mega, m alone is milli. */
export const PREFIXES: ReadonlyMap<number, string> = new Map([
  [-18, 'a'],
  [-15, 'f'],
  [-12, 'p'],
  [-9, 'n'],
  [-6, 'µ'],
  [-3, 'm'],
  [0, ''],
  [3, 'k'],
  [6, 'M'],
  [9, 'G'],
  [12, 'T'],
]);

/** Whether a unit takes an SI prefix; angles, shares and pure numbers do not. */
export function takesPrefix(unit: Unit): boolean {
  return unit !== '' && unit !== '°' && unit !== '%';
}

const MINUS = '\u2212';

/** Decimal text of `digits` (first digit of weight 10^exponent), without trailing zeros. */
function placePoint(digits: string, exponent: number): string {
  const whole = exponent < 0 ? '0' : digits.slice(0, exponent + 1).padEnd(exponent + 1, '0');
  const rest = exponent < 0 ? '0'.repeat(-exponent - 1) + digits : digits.slice(exponent + 1);
  const fraction = rest.replace(/0+$/, '');
  return fraction === '' ? whole : `${whole}.${fraction}`;
}

/** The unit as it follows a figure: ISO 80000-1 sets a space before all but the degree sign. */
function withUnit(figure: string, symbol: string): string {
  if (symbol === '') return figure;
  return symbol === '°' ? figure + symbol : `${figure} ${symbol}`;
}

/**
 * A quantity in engineering notation: 22e3, 'Hz' -> "22 kHz"; 180, '°' -> "180°".
 * Beyond the prefixes, and for very large or small figures of units that take none, the power
 * of ten is written out ("1e30 V"). The sign is U+2212. Figures are rounded to `digits`
 * significant digits (1 to 17) and lose their trailing zeros. NaN reads "not a number".
 */
export function formatQuantity(value: number, unit: Unit, digits = 4): string {
  if (Number.isNaN(value)) return 'not a number';
  const sign = value < 0 ? MINUS : '';
  if (!Number.isFinite(value)) return withUnit(`${sign}∞`, unit);
  if (value === 0) return withUnit('0', unit);

  const [mantissa, power] = Math.abs(value)
    .toExponential(digits - 1)
    .split('e');
  const figures = mantissa.replace('.', '');
  const exponent = Number(power);

  if (!takesPrefix(unit)) {
    if (exponent >= -6 && exponent <= 8)
      return withUnit(sign + placePoint(figures, exponent), unit);
  } else {
    const group = 3 * Math.floor(exponent / 3);
    const prefix = PREFIXES.get(group);
    if (prefix !== undefined) {
      return withUnit(sign + placePoint(figures, exponent - group), prefix + unit);
    }
  }
  const tail = exponent < 0 ? `e${MINUS}${-exponent}` : `e${exponent}`;
  return withUnit(sign + placePoint(figures, 0) + tail, unit);
}
