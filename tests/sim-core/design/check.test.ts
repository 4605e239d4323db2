import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  checkDesign,
  checkField,
  defaultDesign,
  differences,
  MIGRATIONS,
  placesThatDiffer,
} from '../../../sim-core/design/check.ts';
import { formatQuantity } from '../../../sim-core/design/engineering.ts';
import type { Field } from '../../../sim-core/design/field.ts';
import {
  DESIGN_VERSION,
  type Design,
  GROUPS,
  TITLE_FIELDS,
  WINDING_FIELDS,
} from '../../../sim-core/design/schema.ts';
import { anyDesign } from './anyDesign.ts';

/** Every value of the document: its place, its field, and data that sets it alone. */
const PLACES: readonly { place: string; field: Field; set: (value: unknown) => unknown }[] = [
  ...Object.entries(TITLE_FIELDS).map(([name, field]) => ({
    place: name,
    field,
    set: (value: unknown): unknown => ({ [name]: value }),
  })),
  ...Object.entries(GROUPS).flatMap(([group, fields]) =>
    Object.entries(fields).map(([name, field]) => ({
      place: `${group}.${name}`,
      field: field as Field,
      set: (value: unknown): unknown => ({ [group]: { [name]: value } }),
    })),
  ),
  ...Object.entries(WINDING_FIELDS).map(([name, field]) => ({
    place: `overrides.3.${name}`,
    field: field as Field,
    set: (value: unknown): unknown => ({ overrides: [{ section: 3, [name]: value }] }),
  })),
];

const refusal = (raw: unknown) => {
  const checked = checkDesign(raw);
  return checked.ok ? null : checked.problem;
};

const at = (design: Design, place: string): unknown => {
  const [group, name, inner] = place.split('.');
  if (group === 'overrides') {
    const found = design.overrides.find((override) => String(override.section) === name);
    return found?.[inner as 'ratio'];
  }
  const whole = design[group as 'bridge'];
  return name === undefined ? whole : whole[name as 'frequency'];
};

describe('every value of the document', () => {
  const numbers = [0, -0, -1, 1e30, -1e30, 1e-30, -1e-30, Number.MAX_VALUE, Number.MIN_VALUE];
  const hostile = ['', 'text', Number.NaN, Infinity, -Infinity, ...numbers, null, {}, [], true];

  test.each(PLACES)(
    '$place is refused by its label and limit, or within bounds',
    ({ place, field, set }) => {
      for (const value of hostile) {
        const checked = checkDesign(set(value));
        if (checked.ok) {
          expect(checkField(field, at(checked.value, place))).toBeNull();
          expect(at(checked.value, place)).toBe(value === 0 ? 0 : value);
          if (field.kind === 'quantity' && value !== null) {
            const within = (value as number) >= field.min && (value as number) <= field.max;
            expect(within || (field.zero && value === 0)).toBe(true);
          }
          continue;
        }
        const { problem } = checked;
        expect(problem.place).toBe(place);
        expect(problem.message).toContain(field.label);
        expect(problem.message).toMatch(/\.$/);
        if (field.kind === 'quantity' || field.kind === 'count') {
          const print = (limit: number) =>
            formatQuantity(limit, field.kind === 'quantity' ? field.unit : '', 9);
          const named = [field.min, field.max].some((limit) =>
            problem.message.includes(print(limit)),
          );
          expect(named).toBe(true);
        }
      }
    },
  );

  test.each(PLACES.filter(({ field }) => 'min' in field))(
    '$place holds its bounds exactly, and nothing beyond them',
    ({ field }) => {
      if (field.kind !== 'quantity' && field.kind !== 'count') throw new Error('not a number');
      expect(checkField(field, field.min)).toBeNull();
      expect(checkField(field, field.max)).toBeNull();
      const beyond = field.kind === 'count' ? 1 : Math.abs(field.max) * 1e-9;
      expect(checkField(field, field.max + beyond)).toContain('above');
      if (field.min !== 0) {
        const under = field.kind === 'count' ? 1 : Math.abs(field.min) * 1e-9;
        expect(checkField(field, field.min - under)).toContain('below');
      }
    },
  );

  test('a value just beyond a limit is printed so that the two differ', () => {
    expect(checkField(GROUPS.bridge.frequency, 1e6 + 0.1)).toBe(
      'Drive frequency 1.0000001 MHz is above 1 MHz: below 1 Hz no transformer of this kind can follow, above 1 MHz the switch model does not hold.',
    );
  });

  test('a hertz mistaken for a megahertz is told in the words of the sheet', () => {
    expect(checkField(GROUPS.bridge.frequency, 0.022)).toMatch(
      /^Drive frequency 22 mHz is below 1 Hz: /,
    );
  });
});

describe('rules between values', () => {
  test.each<[string, unknown]>([
    ['bridge.deadTime', { bridge: { frequency: 22e3, deadTime: 23e-6 } }],
    ['bridge.widthError', { bridge: { frequency: 22e3, deadTime: 1e-6, widthError: 21.8e-6 } }],
    ['bridge.widthError', { bridge: { frequency: 22e3, deadTime: 1e-6, widthError: -21.8e-6 } }],
    [
      'transformer.saturatedInductance',
      { transformer: { kneeFluxLinkage: 1e-3, saturatedInductance: 2.5e-3 } },
    ],
    ['transformer.remanence', { transformer: { kneeFluxLinkage: 1e-3, remanence: -3.1e-3 } }],
    ['stack.joint', { sections: { count: 4 }, stack: { joint: 5 } }],
    ['sections.resistance', { sections: { resistance: 0, leakageInductance: 0 } }],
    [
      'overrides.2.resistance',
      { overrides: [{ section: 2, resistance: 0, leakageInductance: 0 }] },
    ],
    [
      'overrides.2.leakageInductance',
      { sections: { resistance: 0 }, overrides: [{ section: 2, leakageInductance: 0 }] },
    ],
  ])('%s is refused when it contradicts another', (place, raw) => {
    expect(refusal(raw)).toMatchObject({ place });
  });

  test.each<[string, unknown]>([
    ['a dead time just short of half a period', { bridge: { frequency: 1e3, deadTime: 499e-6 } }],
    ['half cycles just longer than the dead time', { bridge: { widthError: 21.7e-6 } }],
    ['a linear core, whatever its slope', { transformer: { saturatedInductance: 1 } }],
    ['a linear core, whatever its remanence', { transformer: { remanence: 1 } }],
    ['the last joint', { sections: { count: 4 }, stack: { joint: 4 } }],
    ['resistance alone', { sections: { leakageInductance: 0 } }],
    ['leakage alone', { sections: { resistance: 0 } }],
    ['no rectifier in a stack', { rectifier: { kind: 'none' } }],
    [
      'no impedance in common when every section has its own',
      {
        sections: { count: 2, resistance: 0, leakageInductance: 0 },
        overrides: [
          { section: 1, resistance: 1 },
          { section: 2, leakageInductance: 1e-3 },
        ],
      },
    ],
  ])('%s is allowed', (_, raw) => {
    expect(refusal(raw)).toBeNull();
  });
});

describe('the document', () => {
  test('the empty one is that of all defaults', () => {
    const checked = checkDesign({});
    expect(checked).toEqual({ ok: true, value: defaultDesign() });
    expect(differences(defaultDesign())).toEqual({ version: DESIGN_VERSION });
  });

  test('there is one migration for each version that came before', () => {
    expect(MIGRATIONS).toHaveLength(DESIGN_VERSION - 1);
  });

  test.each<[unknown, string]>([
    [{ version: DESIGN_VERSION + 1 }, 'newer program'],
    [{ version: 1e300 }, 'newer program'],
    [{ version: 0 }, 'whole number'],
    [{ version: 1.5 }, 'whole number'],
    [{ version: Number.NaN }, 'whole number'],
    [{ version: '1' }, 'whole number'],
    [{ version: null }, 'whole number'],
  ])('%j is refused: %s', (raw, word) => {
    expect(refusal(raw)).toMatchObject({
      place: 'version',
      message: expect.stringContaining(word),
    });
  });

  test.each([
    '{"__proto__": {"voltage": 1}}',
    '{"constructor": {}}',
    '{"toString": 1}',
    '{"bridge": {"__proto__": 1}}',
    '{"bridge": {"hasOwnProperty": 1}}',
    '{"bridge": {"frequency": {"__proto__": {"valueOf": 1}}}}',
    '{"overrides": [{"section": 1, "__proto__": 1}]}',
    '{"overrides": [{"section": 1, "constructor": 1}]}',
    '{"overrides": {"length": 1, "0": {}}}',
    '{"overrides": [[]]}',
    '{"sections": []}',
    '{"sections": null}',
    '{"bridge": {"Frequency": 22000}}',
    '[]',
    'null',
    '"design"',
    '7',
  ])('%s is refused, and no prototype is touched', (text) => {
    expect(refusal(JSON.parse(text))).not.toBeNull();
    expect(Object.keys(Object.prototype)).toEqual([]);
  });

  test('an inherited value or a getter counts for nothing', () => {
    const inherited = Object.create({ bridge: { frequency: 1 } });
    expect(refusal(inherited)).not.toBeNull();
    const trap = Object.defineProperty({}, 'bridge', {
      enumerable: true,
      get: () => {
        throw new Error('read');
      },
    });
    expect(checkDesign(trap)).toEqual({ ok: true, value: defaultDesign() });
  });

  test('cycles, depth and size are refused without being followed', () => {
    const cycle: Record<string, unknown> = {};
    cycle.bridge = cycle;
    expect(refusal(cycle)).not.toBeNull();
    let deep: unknown = 1;
    for (let level = 0; level < 1e5; level++) deep = { bridge: deep };
    expect(refusal(deep)).not.toBeNull();
    expect(refusal({ overrides: new Array(4e9) })?.message).toContain('may have 48');
    expect(refusal({ overrides: new Array(1e6).fill({ section: 1 }) })).not.toBeNull();
    expect(refusal({ name: 'x'.repeat(1e6) })?.message).toContain('at most 80 characters');
  });

  test('what is refused is quoted short and without control characters', () => {
    const message = refusal({ bridge: { switchKind: `\u202E\u0000${'y'.repeat(1e5)}` } })?.message;
    expect(message?.length).toBeLessThan(200);
    expect(message).not.toMatch(/[\p{C}]/u);
  });

  test('overrides are sorted, and one that says nothing is dropped', () => {
    const overrides = [{ section: 5, ratio: 11 }, { section: 2 }, { section: 1, ratio: 9 }];
    const checked = checkDesign({ overrides });
    expect(checked.ok && checked.value.overrides).toEqual([
      { section: 1, ratio: 9 },
      { section: 5, ratio: 11 },
    ]);
  });

  test.each<[unknown, string]>([
    [[{ section: 9, ratio: 1 }], 'from 1 to 8'],
    [[{ section: 0, ratio: 1 }], 'from 1 to 8'],
    [[{ section: '1', ratio: 1 }], 'from 1 to 8'],
    [[{ ratio: 1 }], 'from 1 to 8'],
    [
      [
        { section: 2, ratio: 1 },
        { section: 2, ratio: 1 },
      ],
      'twice',
    ],
  ])('overrides %j are refused: %s', (overrides, word) => {
    expect(refusal({ overrides })?.message).toContain(word);
  });

  test('a checked design is fresh, plain, and frozen to the last value', () => {
    const raw = { bridge: { frequency: 30e3 }, overrides: [{ section: 3, ratio: 11 }] };
    const checked = checkDesign(raw);
    if (!checked.ok) throw new Error(checked.problem.message);
    raw.bridge.frequency = 1;
    raw.overrides[0].ratio = 1;
    expect(checked.value.bridge.frequency).toBe(30e3);
    expect(checked.value.overrides[0].ratio).toBe(11);
    const frozen = (value: unknown): boolean =>
      typeof value !== 'object' ||
      value === null ||
      (Object.isFrozen(value) && Object.values(value).every(frozen));
    expect(frozen(checked.value)).toBe(true);
  });

  test('never throws, whatever JSON holds', () => {
    const names = Object.keys(GROUPS);
    const anything = fc.oneof(
      fc.anything({ withNullPrototype: true, withSparseArray: true, withBigInt: true }),
      fc.dictionary(fc.constantFrom(...names, 'overrides', 'version', '__proto__'), fc.anything()),
    );
    fc.assert(
      fc.property(anything, (raw) => {
        const problem = refusal(raw);
        if (problem !== null) expect(problem.message).toMatch(/\.$/);
      }),
      { seed: 1, numRuns: 2000 },
    );
  });

  test('its differences from the defaults give the same design again', () => {
    fc.assert(
      fc.property(anyDesign, (design) => {
        const again = checkDesign(JSON.parse(JSON.stringify(differences(design))));
        expect(again).toEqual({ ok: true, value: design });
        expect(checkDesign(design)).toEqual({ ok: true, value: design });
      }),
      { seed: 2, numRuns: 200 },
    );
  });

  test('the places that differ are those of the differences', () => {
    fc.assert(
      fc.property(anyDesign, (design) => {
        const { version, overrides, ...rest } = differences(design);
        const inside = Object.entries(rest).flatMap(([name, value]) =>
          typeof value === 'object' && value !== null
            ? Object.keys(value).map((inner) => `${name}.${inner}`)
            : [name],
        );
        const apart = design.overrides.flatMap(({ section, ...values }) =>
          Object.keys(values).map((name) => `overrides.${section}.${name}`),
        );
        expect(placesThatDiffer(defaultDesign(), design).sort()).toEqual(
          [...inside, ...apart].sort(),
        );
        expect(placesThatDiffer(design, design)).toEqual([]);
      }),
      { seed: 3, numRuns: 100 },
    );
  });
});
