/**
 * From untrusted data to a design that may be built: migrated, complete, bounded, frozen.
 * Nothing after this file checks a value of a design again.
 */
import { formatQuantity } from './engineering.ts';
import type { CountField, Field, Group, QuantityField } from './field.ts';
import type { Outcome, Problem } from './problem.ts';
import {
  DESIGN_VERSION,
  type Design,
  GROUPS,
  type GroupName,
  MAX_SECTIONS,
  type SectionOverride,
  TITLE_FIELDS,
  WINDING_FIELDS,
} from './schema.ts';

/** What JSON calls an object. */
type Plain = Readonly<Record<string, unknown>>;

/**
 * Step v turns a document of version v + 1 into one of version v + 2. A step sees untrusted
 * data, so it must not throw. A new default is a new version too: links hold only what differs.
 */
export const MIGRATIONS: readonly ((older: Plain) => Plain)[] = [];

const GROUP_NAMES = Object.keys(GROUPS) as GroupName[];
const ENDS_OF_DOCUMENT = ['version', ...Object.keys(TITLE_FIELDS), 'overrides'];

// ---------------------------------------------------------------------------------------------
// One value

const longestQuote = 40;

/** Untrusted text inside a sentence: bounded, and without anything that could disturb it. */
function quote(text: string): string {
  const clipped = text.length > longestQuote ? `${text.slice(0, longestQuote)}…` : text;
  return `“${clipped.replace(/[\p{C}\p{Zl}\p{Zp}]/gu, '\uFFFD')}”`;
}

/** What was given, in words. */
function inWords(value: unknown): string {
  if (value === null || value === undefined || value === '') return 'nothing';
  if (typeof value === 'string') return quote(value);
  if (Number.isNaN(value)) return 'NaN';
  if (typeof value === 'number') return formatQuantity(value, '', 15);
  if (typeof value === 'boolean') return String(value);
  return Array.isArray(value) ? 'a list' : `a value of type ${typeof value}`;
}

const print = (field: QuantityField | CountField, value: number, digits?: number) =>
  formatQuantity(value, field.kind === 'quantity' ? field.unit : '', digits);

/** "1 ns to 500 ms, or 0". */
function range(field: QuantityField | CountField): string {
  const zero = field.kind === 'quantity' && field.zero && field.min > 0 ? ', or 0' : '';
  return `${print(field, field.min, 9)} to ${print(field, field.max, 9)}${zero}`;
}

/** A value and the limit it breaks, with as many digits as it takes to tell them apart. */
function apart(field: QuantityField | CountField, value: number, limit: number): [string, string] {
  let digits = 4;
  while (digits < 17 && print(field, value, digits) === print(field, limit, digits)) digits++;
  return [print(field, value, digits), print(field, limit, Math.max(digits, 9))];
}

function checkNumber(field: QuantityField | CountField, value: unknown): string | null {
  if (value === null && field.kind === 'quantity' && field.optional) return null;
  const whole = field.kind === 'count';
  if (typeof value !== 'number' || !Number.isFinite(value) || (whole && !Number.isInteger(value))) {
    const kind = whole ? 'a whole number' : 'a number';
    const absent = field.kind === 'quantity' && field.optional ? `, or null (${field.absent})` : '';
    return `${field.label} must be ${kind}, ${range(field)}${absent}; ${inWords(value)} was given.`;
  }
  const zero = field.kind === 'quantity' && field.zero;
  if ((value >= field.min && value <= field.max) || (zero && value === 0)) return null;

  const below = value < field.min;
  const [given, limit] = apart(field, value, below ? field.min : field.max);
  const side = below ? 'below' : 'above';
  const notZero = below && zero ? ' and not 0' : '';
  // A reason that begins with "and" adds a limit of its own to the range.
  const reason = field.why.startsWith('and ')
    ? `it can be ${range(field)}, ${field.why}`
    : field.why;
  return `${field.label} ${given} is ${side} ${limit}${notZero}: ${reason}.`;
}

/**
 * Whether `field` may hold `value`: null if so, else one sentence that names the value, its
 * limit and why. The only source of such text, for documents and for number fields alike.
 */
export function checkField(field: Field, value: unknown): string | null {
  switch (field.kind) {
    case 'quantity':
    case 'count':
      return checkNumber(field, value);
    case 'choice': {
      if (field.options.some((option) => option.value === value)) return null;
      const options = field.options.map((option) => `“${option.value}”`).join(', ');
      return `${field.label} must be one of ${options}; ${inWords(value)} was given.`;
    }
    case 'flag':
      if (typeof value === 'boolean') return null;
      return `${field.label} must be true or false; ${inWords(value)} was given.`;
    case 'text': {
      const limit = `text of at most ${field.maxLength} characters`;
      if (typeof value !== 'string') {
        return `${field.label} must be ${limit}; ${inWords(value)} was given.`;
      }
      if (value.length <= field.maxLength) return null;
      return `${field.label} must be ${limit}; ${value.length} were given.`;
    }
  }
}

// ---------------------------------------------------------------------------------------------
// Rules between values

const times = (value: number) => formatQuantity(value, 's', 6);
const henries = (value: number) => formatQuantity(value, 'H', 6);
const webers = (value: number) => formatQuantity(value, 'Wb', 6);

/** Each names the value that a reader would most likely change. */
const RULES: readonly ((design: Design) => Problem | null)[] = [
  function deadTimeFitsHalfPeriod({ bridge }) {
    const half = 0.5 / bridge.frequency;
    if (bridge.deadTime < half) return null;
    const frequency = formatQuantity(bridge.frequency, 'Hz', 6);
    return {
      place: 'bridge.deadTime',
      message: `Dead time ${times(bridge.deadTime)} is not shorter than half a drive period, ${times(half)} at ${frequency}: no switch would ever turn on.`,
    };
  },
  function bothHalfCyclesOutlastDeadTime({ bridge }) {
    const half = 0.5 / bridge.frequency;
    if (Math.abs(bridge.widthError) < half - bridge.deadTime) return null;
    const side = bridge.widthError < 0 ? 'positive' : 'negative';
    return {
      place: 'bridge.widthError',
      message: `Width error ${times(bridge.widthError)} must stay within ±${times(half - bridge.deadTime)}, which is half a drive period less the dead time: the ${side} half cycle would be all dead time.`,
    };
  },
  function saturationLowersInductance({ transformer }) {
    const { kneeFluxLinkage, saturatedInductance, magnetisingInductance } = transformer;
    if (kneeFluxLinkage === null || saturatedInductance <= magnetisingInductance) return null;
    return {
      place: 'transformer.saturatedInductance',
      message: `Saturated inductance ${henries(saturatedInductance)} is above the magnetising inductance ${henries(magnetisingInductance)}: a core that saturates loses inductance.`,
    };
  },
  function remanenceNearKnee({ transformer }) {
    const { kneeFluxLinkage, remanence } = transformer;
    if (kneeFluxLinkage === null || Math.abs(remanence) <= 3 * kneeFluxLinkage) return null;
    return {
      place: 'transformer.remanence',
      message: `Remanence at the start ${webers(remanence)} is more than 3 times the saturation flux linkage ${webers(kneeFluxLinkage)}: no core holds that much.`,
    };
  },
  function earthIsAJoint({ stack, sections }) {
    if (stack.joint <= sections.count) return null;
    return {
      place: 'stack.joint',
      message: `Earthed joint ${stack.joint} lies beyond the last joint, ${sections.count}: a stack of ${sections.count === 1 ? '1 section' : `${sections.count} sections`} has the joints 0 to ${sections.count}.`,
    };
  },
  function everySectionHasImpedance({ sections, overrides }) {
    const bare = (values: { leakageInductance: number; resistance: number }) =>
      values.leakageInductance === 0 && values.resistance === 0;
    const why =
      'Its leakage inductance and its resistance must not both be 0: it would tie its rectifier rigidly to the core.';
    for (const override of overrides) {
      if (!bare({ ...sections, ...override })) continue;
      const name = override.resistance === undefined ? 'leakageInductance' : 'resistance';
      return {
        place: `overrides.${override.section}.${name}`,
        message: `Section ${override.section} has no impedance of its own. ${why}`,
      };
    }
    if (!bare(sections)) return null;
    // Nothing is wrong if every single section has an impedance of its own.
    const mended = overrides.length === sections.count;
    if (mended) return null;
    const first = Array.from({ length: sections.count }, (_, index) => index + 1).find(
      (section) => !overrides.some((override) => override.section === section),
    );
    return {
      place: 'sections.resistance',
      message: `Section ${first} has no impedance of its own. ${why}`,
    };
  },
];

// ---------------------------------------------------------------------------------------------
// The document

const refuse = (place: string, message: string): { ok: false; problem: Problem } => ({
  ok: false,
  problem: { place, message },
});

function isPlain(value: unknown): value is Plain {
  if (typeof value !== 'object' || value === null || Array.isArray(value)) return false;
  const prototype: unknown = Object.getPrototypeOf(value);
  return prototype === Object.prototype || prototype === null;
}

/** An own value; undefined when it is absent, inherited or computed by a getter. */
function own(object: Plain, key: string): unknown {
  return Object.getOwnPropertyDescriptor(object, key)?.value;
}

/** The first key of its own that nothing knows; "__proto__" and the like among them. */
function unknownKey(object: Plain, known: (key: string) => boolean): string | undefined {
  return Object.keys(object).find((key) => !known(key));
}

/** Negative zero is zero: the sign would be lost in a link. */
const settle = (value: unknown) => (value === 0 ? 0 : value);

/**
 * Read the values of `fields` that `raw` has; absent ones come from `otherwise`, and stay
 * absent where that has none. `place` ends with a dot unless it is empty.
 */
function readFields(
  fields: Group,
  raw: Plain,
  place: string,
  otherwise: (field: Field) => unknown,
): Outcome<Record<string, unknown>> {
  const values: Record<string, unknown> = {};
  for (const [name, field] of Object.entries(fields)) {
    const given = own(raw, name);
    const value = given === undefined ? otherwise(field) : settle(given);
    if (given !== undefined) {
      const message = checkField(field, value);
      if (message !== null) return refuse(place + name, message);
    }
    if (value !== undefined) values[name] = value;
  }
  return { ok: true, value: values };
}

const byDefault = (field: Field) => field.default;

function readVersion(raw: Plain): Outcome<number> {
  // Who writes a file by hand may leave the version out; it is then the first.
  const version = own(raw, 'version') === undefined ? 1 : own(raw, 'version');
  if (typeof version !== 'number' || !Number.isInteger(version) || version < 1) {
    return refuse(
      'version',
      `The version must be a whole number from 1; ${inWords(version)} was given.`,
    );
  }
  if (version > DESIGN_VERSION) {
    return refuse(
      'version',
      `The design is of version ${inWords(version)}, and this program reads versions up to ${DESIGN_VERSION}. It was made by a newer program; open it there.`,
    );
  }
  return { ok: true, value: version };
}

function readOverrides(raw: unknown, sections: number): Outcome<readonly SectionOverride[]> {
  if (raw === undefined) return { ok: true, value: [] };
  if (!Array.isArray(raw)) {
    return refuse('overrides', `The overrides must be a list; ${inWords(raw)} was given.`);
  }
  if (raw.length > MAX_SECTIONS) {
    return refuse(
      'overrides',
      `The list of overrides has ${raw.length} entries and may have ${MAX_SECTIONS}: one for each section that differs.`,
    );
  }
  const overrides: SectionOverride[] = [];
  for (const entry of raw as readonly unknown[]) {
    if (!isPlain(entry)) {
      return refuse(
        'overrides',
        `Each override must be a group of values with the number of its section; ${inWords(entry)} was given.`,
      );
    }
    const section = own(entry, 'section');
    if (
      typeof section !== 'number' ||
      !Number.isInteger(section) ||
      section < 1 ||
      section > sections
    ) {
      return refuse(
        'overrides',
        `An override must name a section, a whole number from 1 to ${sections}, since there are so many; ${inWords(section)} was given.`,
      );
    }
    const place = `overrides.${section}`;
    if (overrides.some((other) => other.section === section)) {
      return refuse(place, `Section ${section} is overridden twice; one entry must hold it all.`);
    }
    const stranger = unknownKey(
      entry,
      (key) => key === 'section' || Object.hasOwn(WINDING_FIELDS, key),
    );
    if (stranger !== undefined) {
      return refuse(place, `Section ${section} has no value named ${quote(stranger)}.`);
    }
    const read = readFields(WINDING_FIELDS, entry, `${place}.`, () => undefined);
    if (!read.ok) {
      const { problem } = read;
      return refuse(problem.place, `Section ${section}: ${problem.message}`);
    }
    // An entry that changes nothing is left out, so that equal designs have one form.
    if (Object.keys(read.value).length > 0) overrides.push({ section, ...read.value });
  }
  return { ok: true, value: overrides.sort((a, b) => a.section - b.section) };
}

function deepFreeze<T>(value: T): T {
  if (typeof value === 'object' && value !== null) {
    for (const inner of Object.values(value)) deepFreeze(inner);
    Object.freeze(value);
  }
  return value;
}

/**
 * Check data from a link, a file or a form (anything that JSON or a structured clone can
 * hold). Older versions are migrated, absent values filled with defaults, overrides sorted;
 * everything unknown, of another type, out of bounds or contradictory is refused by a sentence,
 * the first one found. The result is fresh, plain and deeply frozen. Never throws.
 */
export function checkDesign(raw: unknown): Outcome<Design> {
  if (!isPlain(raw)) {
    return refuse('', `A design must be a group of values; ${inWords(raw)} was given.`);
  }
  const version = readVersion(raw);
  if (!version.ok) return version;
  let data = raw;
  for (const migrate of MIGRATIONS.slice(version.value - 1)) data = migrate(data);

  const stranger = unknownKey(
    data,
    (key) => ENDS_OF_DOCUMENT.includes(key) || Object.hasOwn(GROUPS, key),
  );
  if (stranger !== undefined) return refuse('', `A design has no part named ${quote(stranger)}.`);

  const title = readFields(TITLE_FIELDS, data, '', byDefault);
  if (!title.ok) return title;

  const groups: Record<string, Record<string, unknown>> = {};
  for (const name of GROUP_NAMES) {
    const given = own(data, name) === undefined ? {} : own(data, name);
    if (!isPlain(given)) {
      return refuse(name, `“${name}” must be a group of values; ${inWords(given)} was given.`);
    }
    const odd = unknownKey(given, (key) => Object.hasOwn(GROUPS[name], key));
    if (odd !== undefined) return refuse(name, `“${name}” has no value named ${quote(odd)}.`);
    const read = readFields(GROUPS[name], given, `${name}.`, byDefault);
    if (!read.ok) return read;
    groups[name] = read.value;
  }

  const overrides = readOverrides(own(data, 'overrides'), groups.sections.count as number);
  if (!overrides.ok) return overrides;

  // The schema was walked and every field checked: this is what the type says.
  const design = {
    version: DESIGN_VERSION,
    ...title.value,
    ...groups,
    overrides: overrides.value,
  } as unknown as Design;
  for (const rule of RULES) {
    const problem = rule(design);
    if (problem !== null) return { ok: false, problem };
  }
  return { ok: true, value: deepFreeze(design) };
}

/** The design of all defaults. */
export function defaultDesign(): Design {
  const checked = checkDesign({ version: DESIGN_VERSION });
  if (!checked.ok) throw new Error(`The defaults contradict: ${checked.problem.message}`);
  return checked.value;
}

/** Names of the fields of which two groups hold different values. */
const fieldsThatDiffer = (fields: Group, a: Plain, b: Plain) =>
  Object.keys(fields).filter((name) => a[name] !== b[name]);

/**
 * Paths of the values in which two designs differ ("bridge.deadTime", "overrides.3.ratio"), in
 * the order of the document.
 */
export function placesThatDiffer(a: Design, b: Design): string[] {
  const places = fieldsThatDiffer(TITLE_FIELDS, a, b);
  for (const group of GROUP_NAMES) {
    for (const name of fieldsThatDiffer(GROUPS[group], a[group], b[group])) {
      places.push(`${group}.${name}`);
    }
  }
  for (let section = 1; section <= MAX_SECTIONS; section++) {
    const ownValues = ({ overrides }: Design) =>
      overrides.find((one) => one.section === section) ?? {};
    for (const name of fieldsThatDiffer(WINDING_FIELDS, ownValues(a), ownValues(b))) {
      places.push(`overrides.${section}.${name}`);
    }
  }
  return places;
}

/**
 * What sets a design apart from the defaults, with its version: the form that links and files
 * hold. `checkDesign` of it gives the same design again.
 */
export function differences(design: Design): Record<string, unknown> {
  const otherwise = defaultDesign();
  const changed = (fields: Group, values: Plain, defaults: Plain) =>
    Object.fromEntries(
      fieldsThatDiffer(fields, values, defaults).map((name) => [name, values[name]]),
    );
  const groups = GROUP_NAMES.map(
    (name) => [name, changed(GROUPS[name], design[name], otherwise[name])] as const,
  );
  return {
    version: design.version,
    ...changed(TITLE_FIELDS, design, otherwise),
    ...Object.fromEntries(groups.filter(([, values]) => Object.keys(values).length > 0)),
    ...(design.overrides.length > 0 && { overrides: design.overrides }),
  };
}
