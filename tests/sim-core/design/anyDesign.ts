/** Random valid designs, drawn by walking the schema: bounds, zeros and absences among them. */
import fc from 'fast-check';
import { checkDesign } from '../../../sim-core/design/check.ts';
import type { Field, Group, QuantityField } from '../../../sim-core/design/field.ts';
import {
  type Design,
  GROUPS,
  TITLE_FIELDS,
  WINDING_FIELDS,
} from '../../../sim-core/design/schema.ts';

function anyQuantity(field: QuantityField): fc.Arbitrary<number | null> {
  const positive = field.min > 0;
  const spread = positive
    ? fc
        .double({ min: Math.log(field.min), max: Math.log(field.max), noNaN: true })
        .map((x) => Math.min(field.max, Math.max(field.min, Math.exp(x))))
    : fc.double({ min: field.min, max: field.max, noNaN: true }).map((x) => (x === 0 ? 0 : x));
  const special: (number | null)[] = [field.default, field.min, field.max];
  if (field.zero) special.push(0);
  if (field.optional) special.push(null);
  return fc.oneof(spread, fc.constantFrom(...special));
}

function anyValue(field: Field): fc.Arbitrary<unknown> {
  switch (field.kind) {
    case 'quantity':
      return anyQuantity(field);
    case 'count':
      return fc.integer({ min: field.min, max: field.max });
    case 'choice':
      return fc.constantFrom(...field.options.map((option) => option.value));
    case 'flag':
      return fc.boolean();
    case 'text':
      return fc.string({ maxLength: Math.min(field.maxLength, 60), unit: 'binary' });
  }
}

const anyValues = (fields: Group) =>
  fc.record(Object.fromEntries(Object.entries(fields).map(([k, field]) => [k, anyValue(field)])));

interface Draw {
  readonly groups: Record<string, Record<string, unknown>>;
  readonly title: Record<string, unknown>;
  readonly overrides: readonly Record<string, unknown>[];
  readonly share: number;
}

/** A draw bent to obey the rules between values, each by its own definition. */
function obey({ groups, title, overrides, share }: Draw): unknown {
  const { bridge, transformer, sections, stack } = groups as Record<string, Record<string, number>>;
  const half = 0.5 / bridge.frequency;
  const deadTime = Math.min(0.9 * share * half, 0.5);
  bridge.deadTime = deadTime < 1e-9 ? 0 : deadTime;
  const width = 0.9 * (half - bridge.deadTime) * Math.sign(bridge.widthError);
  bridge.widthError = Math.max(-0.25, Math.min(0.25, width)) || 0;
  transformer.saturatedInductance = Math.min(
    transformer.saturatedInductance,
    transformer.magnetisingInductance,
  );
  if (transformer.kneeFluxLinkage !== null) {
    transformer.remanence = 3 * (2 * share - 1) * transformer.kneeFluxLinkage || 0;
    transformer.remanence = Math.max(-1e3, Math.min(1e3, transformer.remanence));
  }
  stack.joint = stack.joint % (sections.count + 1);
  sections.resistance ||= 1;
  return {
    version: 1,
    ...title,
    ...groups,
    overrides: overrides
      .filter((override) => (override.section as number) <= sections.count)
      .map((override) => (override.resistance === 0 ? { ...override, resistance: 1 } : override)),
  };
}

/** Any valid design. */
export const anyDesign: fc.Arbitrary<Design> = fc
  .record({
    groups: fc.record(
      Object.fromEntries(Object.entries(GROUPS).map(([name, group]) => [name, anyValues(group)])),
    ),
    title: anyValues(TITLE_FIELDS),
    overrides: fc.uniqueArray(
      fc.record(
        {
          section: fc.integer({ min: 1, max: 48 }),
          ...Object.fromEntries(
            Object.entries(WINDING_FIELDS).map(([name, field]) => [name, anyValue(field)]),
          ),
        },
        { requiredKeys: ['section'] },
      ),
      { maxLength: 12, selector: (override) => override.section },
    ),
    share: fc.double({ min: 0, max: 1, noNaN: true }),
  })
  .map((draw) => {
    const checked = checkDesign(obey(draw as Draw));
    if (!checked.ok) throw new Error(`${checked.problem.place}: ${checked.problem.message}`);
    return checked.value;
  });
