/** The reference page of a design's file, of the readings and of the signals, from their sources. */
import { formatQuantity } from './engineering.ts';
import type { Field, Group, Unit } from './field.ts';
import { DESIGN_VERSION, GROUPS, MAX_SECTIONS, TITLE_FIELDS, WINDING_FIELDS } from './schema.ts';

/** What the page tells of what a run yields; the rooms that own these lists pass them in. */
export interface Yield {
  readonly readings: Readonly<
    Record<string, { readonly label: string; readonly unit: Unit; readonly definition: string }>
  >;
  /** Signals of the plant in `signalsOf`, by bay. */
  readonly signals: readonly NamedSignal[];
  /** Sentences: which design has these signals, and what other designs have. */
  readonly signalsOf: string;
}

interface NamedSignal {
  readonly name: string;
  readonly unit: Unit;
  readonly bay: string;
}

/** A table; a bar inside a cell would end it. */
function table(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const line = (cells: readonly string[]) =>
    `| ${cells.map((cell) => cell.replaceAll('|', '\\|')).join(' | ')} |`;
  return [line(head), line(head.map(() => '---')), ...rows.map(line)].join('\n');
}

/** Unit, permitted values and default of a field. */
function limits(field: Field): [unit: string, permitted: string, standard: string] {
  switch (field.kind) {
    case 'quantity': {
      const print = (value: number) => formatQuantity(value, field.unit, 6);
      const permitted = [`${print(field.min)} to ${print(field.max)}`];
      if (field.zero && field.min > 0) permitted.push('0');
      if (field.optional) permitted.push(`null: ${field.absent}`);
      return [
        field.unit === '' ? '1' : field.unit,
        permitted.join('; '),
        field.default === null ? 'null' : print(field.default),
      ];
    }
    case 'count':
      return ['whole number', `${field.min} to ${field.max}`, String(field.default)];
    case 'choice':
      return [
        'choice',
        field.options.map(({ value, label }) => `\`"${value}"\` ${label}`).join('; '),
        `\`"${field.default}"\``,
      ];
    case 'flag':
      return ['yes or no', '`true`; `false`', `\`${field.default}\``];
    case 'text':
      return [
        'text',
        `at most ${field.maxLength} characters`,
        field.default === '' ? 'empty' : `\`"${field.default}"\``,
      ];
  }
}

const HEAD = ['Path', 'Unit', 'Permitted', 'Default', 'Meaning'];

const fieldRows = (fields: Group, path: string) =>
  Object.entries(fields).map(([name, field]) => [
    `\`${path}${name}\``,
    ...limits(field),
    `${field.label}: ${field.about}`,
  ]);

/** Letters that stand for the numbers in a signal's name, in turn. */
const INDICES = ['k', 'j'];

/**
 * Rows of signals, one bay after another. Signals that differ by their numbers alone share a row,
 * their numbers replaced by letters whose ranges it tells.
 */
function signalRows(signals: readonly NamedSignal[]): string[][] {
  const rows = new Map<string, { signal: NamedSignal; pattern: string; numbers: number[][] }>();
  for (const signal of signals) {
    const numbers: number[] = [];
    const pattern = signal.name.replace(/\d+/g, (digits) => {
      numbers.push(Number(digits));
      return INDICES[numbers.length - 1];
    });
    const key = `${signal.bay}/${pattern}`;
    const row = rows.get(key) ?? { signal, pattern, numbers: numbers.map(() => []) };
    numbers.forEach((number, n) => {
      row.numbers[n].push(number);
    });
    rows.set(key, row);
  }
  const bays = [...new Set(signals.map(({ bay }) => bay))];
  return bays.flatMap((bay) =>
    [...rows.values()]
      .filter((row) => row.signal.bay === bay)
      .map(({ signal, pattern, numbers }) => [
        bay,
        `\`${pattern}\``,
        numbers
          .map((list, n) => `${INDICES[n]} = ${Math.min(...list)} to ${Math.max(...list)}`)
          .join(', '),
        signal.unit === '' ? '1' : signal.unit,
      ]),
  );
}

/** A design file as it may be written by hand. */
export const EXAMPLE = {
  version: DESIGN_VERSION,
  name: 'Bench rig',
  bridge: { frequency: 30e3, deadTime: 1.2e-6 },
  sections: { count: 6 },
  overrides: [{ section: 3, leakageInductance: 12e-3 }],
};

/**
 * The page as Markdown, ending with a line break. It follows from the schema and from what is
 * passed in alone, so a copy that is kept can be compared with it.
 */
export function referencePage({ readings, signals, signalsOf }: Yield): string {
  const groups = Object.entries(GROUPS).map(
    ([name, fields]) => `### ${name}\n\n${table(HEAD, fieldRows(fields, `${name}.`))}`,
  );
  return `${[
    '# Reference: the design file, the readings, the signals',
    'This page is generated from the schema; a test fails when it is stale.',
    '## The design file',
    `A design is a JSON object of version ${DESIGN_VERSION}. It holds what differs from the defaults; whatever is absent has its default. Numbers are in SI units without prefix, angles in degrees. A name that is not listed here, a value of another type or one out of bounds is refused by a sentence.`,
    `\`\`\`json\n${JSON.stringify(EXAMPLE, null, 2)}\n\`\`\``,
    '### The document',
    table(HEAD, [
      [
        '`version`',
        'whole number',
        `1 to ${DESIGN_VERSION}`,
        '1',
        "Version of the document's form; older ones are migrated, newer ones refused.",
      ],
      ...fieldRows(TITLE_FIELDS, ''),
    ]),
    ...groups,
    '### overrides',
    `A list with at most one entry for each section that differs from its fellows, up to ${MAX_SECTIONS}. An entry names its \`section\`, counted from 1 at the negative terminal, and any of the values below; the others are those of \`sections\`. Refusals name a place in it by the section's number: \`overrides.3.ratio\`.`,
    table(
      ['Value', 'Unit', 'Permitted', 'Meaning'],
      Object.entries(WINDING_FIELDS).map(([name, field]) => {
        const [unit, permitted] = limits(field);
        return [`\`${name}\``, unit, permitted, field.label];
      }),
    ),
    '## Readings',
    'Means, rms values and peaks are taken over the last completed drive period. A reading is null where it has no meaning yet.',
    table(
      ['Name', 'Unit', 'Reading', 'Definition'],
      Object.entries(readings).map(([name, { label, unit, definition }]) => [
        `\`${name}\``,
        unit === '' ? '1' : unit,
        label,
        definition,
      ]),
    ),
    '## Signals',
    signalsOf,
    table(['Bay', 'Signal', 'Here', 'Unit'], signalRows(signals)),
  ].join('\n\n')}\n`;
}
