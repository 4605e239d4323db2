/**
 * From what people type to a number in SI units: "4k7", "2µ2", "0.15 mH", "20e3", "22 kHz".
 * Letters in place of the decimal point are those of IEC 60062; prefixes those of ISO 80000-1.
 * m is milli and M is mega, always; K stands for k, as IEC 60062 has it.
 */
import { PREFIXES, takesPrefix, type Unit } from '../../sim-core/index.ts';

/** What a unit measures, how it may be written (the first being the right way), and one example. */
interface UnitWords {
  readonly measures: string;
  readonly spellings: readonly string[];
  readonly example: string;
}

const UNITS: Readonly<Record<Unit, UnitWords>> = {
  V: { measures: 'voltage', spellings: ['V'], example: '310 V' },
  A: { measures: 'current', spellings: ['A'], example: '20 mA' },
  Ω: { measures: 'resistance', spellings: ['Ω', 'R', 'ohm', 'ohms', 'Ohm'], example: '4.7 kΩ' },
  F: { measures: 'capacitance', spellings: ['F'], example: '10 nF' },
  H: { measures: 'inductance', spellings: ['H'], example: '0.15 mH' },
  Hz: { measures: 'frequency', spellings: ['Hz', 'hz', 'HZ'], example: '22 kHz' },
  s: { measures: 'time', spellings: ['s'], example: '1.2 µs' },
  Wb: { measures: 'flux linkage', spellings: ['Wb', 'Vs', 'V·s', 'V s'], example: '6.5 mWb' },
  W: { measures: 'power', spellings: ['W'], example: '1.2 kW' },
  J: { measures: 'energy', spellings: ['J'], example: '3 J' },
  C: { measures: 'charge', spellings: ['C'], example: '20 µC' },
  '°': { measures: 'angle', spellings: ['°', 'deg'], example: '180°' },
  '%': { measures: 'a share', spellings: ['%'], example: '5 %' },
  '': { measures: 'a pure number', spellings: [''], example: '10' },
};

/** Powers of ten by prefix, with the spellings that a keyboard offers. */
const POWERS: ReadonlyMap<string, number> = new Map([
  ...[...PREFIXES].map(([power, prefix]) => [prefix, power] as const),
  ['u', -6],
  ['K', 3],
]);

/** Longest text that is read. */
const MOST_CHARACTERS = 40;

/** Why a text is no quantity. */
export interface Unreadable {
  readonly problem: string;
}

const unreadable = (problem: string): Unreadable => ({ problem });

/** One spelling for every sign that looks the same. */
function plain(text: string): string {
  return text
    .replace(/[\u2212\u2013\uFE63\uFF0D]/g, '-')
    .replace(/[\u03BC]/g, 'µ')
    .replace(/[\u2126]/g, 'Ω')
    .replace(/\s+/g, ' ')
    .trim();
}

/** The power of ten that a suffix means for `unit`: undefined if it is none of that unit. */
function powerOf(suffix: string, unit: Unit): number | undefined {
  for (const spelling of [...UNITS[unit].spellings, '']) {
    if (!suffix.endsWith(spelling)) continue;
    const prefix = suffix.slice(0, suffix.length - spelling.length).trimEnd();
    if (prefix === '') return 0;
    // A pure number may be written short (1k), though it is never printed so.
    const power = takesPrefix(unit) || unit === '' ? POWERS.get(prefix) : undefined;
    if (power !== undefined) return power;
  }
  return undefined;
}

/** The sentence for a suffix that does not belong to `unit`. */
function strange(suffix: string, unit: Unit): Unreadable {
  const { measures, example } = UNITS[unit];
  const others = (Object.keys(UNITS) as Unit[]).filter((other) => other !== unit && other !== '');
  const other = others.find((candidate) => {
    const alone = POWERS.has(suffix);
    return !alone && powerOf(suffix, candidate) !== undefined;
  });
  if (other === undefined) {
    return unreadable(
      `“${suffix}” is neither a unit of ${measures} nor a prefix; write for example ${example}. m is milli, M is mega.`,
    );
  }
  return unreadable(
    `${suffix} is not a unit of ${measures} but of ${UNITS[other].measures}; write for example ${example}.`,
  );
}

/**
 * The comma of a number as its decimal point; null when the comma could as well separate
 * thousands ("1,500"), or stands beside a point.
 */
function withPoint(digits: string): string | null {
  if (!digits.includes(',')) return digits;
  const match = /^(\d*),(\d+)$/.exec(digits);
  if (match === null) return null;
  const [, whole, fraction] = match;
  const couldBeThousands = fraction.length === 3 && /^[1-9]\d{0,2}$/.test(whole);
  return couldBeThousands ? null : `${whole}.${fraction}`;
}

/** Mantissa times a power of ten, correctly rounded; the decimal text itself is converted. */
function scaled(mantissa: string, power: number): number | Unreadable {
  const value = Number(`${mantissa}e${power}`);
  if (!Number.isFinite(value)) return unreadable(`${mantissa}e${power} is too large a number.`);
  if (value === 0 && /[1-9]/.test(mantissa)) {
    return unreadable(`${mantissa}e${power} is too small to be told from 0.`);
  }
  return value === 0 ? 0 : value;
}

/**
 * The number that `text` means as a quantity of `unit`, in SI units; null when it is empty, and
 * a sentence when it means none. Accepted: sign, figures with a decimal point, with a decimal
 * comma where it cannot mean thousands, or grouped by spaces; a power of ten (20e3); a prefix
 * and the unit, both optional; or a prefix or the unit's letter in place of the point (4k7, R47).
 */
export function parseQuantity(text: string, unit: Unit): number | null | Unreadable {
  const { example } = UNITS[unit];
  // Before anything else looks at it: a paste may be of any size.
  if (text.length > MOST_CHARACTERS) {
    return unreadable(
      `The text has ${text.length} characters, and a value needs no more than ${MOST_CHARACTERS}; write for example ${example}.`,
    );
  }
  const typed = plain(text);
  if (typed === '') return null;

  // IEC 60062: the letter stands where the decimal point would.
  const coded = /^([+-]?)(\d*)([^\d\s.,eE+-])(\d+) ?(\D*)$/.exec(typed);
  if (coded !== null) {
    const [, sign, whole, letter, fraction, tail] = coded;
    const isUnit = UNITS[unit].spellings.includes(letter);
    const power = isUnit ? 0 : takesPrefix(unit) || unit === '' ? POWERS.get(letter) : undefined;
    const unitFollows = tail === '' || UNITS[unit].spellings.includes(tail);
    if (power === undefined) return strange(letter, unit);
    if (!unitFollows) return strange(tail, unit);
    return scaled(`${sign}${whole === '' ? '0' : whole}.${fraction}`, power);
  }

  const written =
    /^([+-]?) ?(\d{1,3}(?: \d{3})+(?:[.,]\d*)?|[\d.,]+)(?:[eE]([+-]?\d+))? ?(.*)$/.exec(typed);
  if (written === null) {
    return unreadable(`“${typed}” is not a number; write for example ${example}.`);
  }
  const [, sign, grouped, exponent, suffix] = written;
  const figures = grouped.replaceAll(' ', '');
  const digits = withPoint(figures);
  if (digits === null) {
    return unreadable(
      `The comma in “${figures}” could mean thousands or a decimal point; write a point for the decimals, and nothing between thousands.`,
    );
  }
  if (!/^(\d+\.?\d*|\.\d+)$/.test(digits)) {
    return unreadable(`“${typed}” is not a number; write for example ${example}.`);
  }
  const power = powerOf(suffix, unit);
  if (power === undefined) return strange(suffix, unit);
  return scaled(sign + digits, power + Number(exponent ?? 0));
}
