import { expect, test } from 'vitest';
import { BAY_NAMES, BAYS, bayOfPlace } from '../../../app/power-path/bays/bays.ts';
import { headOf } from '../../../app/power-path/bays/heads.ts';
import { relevant } from '../../../app/power-path/bays/relevant.ts';
import {
  type ChoiceField,
  type Design,
  defaultDesign,
  EXAMPLES,
  GROUPS,
  type Group,
  type GroupName,
} from '../../../sim-core/index.ts';

const names = Object.keys(GROUPS) as GroupName[];

/** A design with one value of one group changed, unchecked. */
const changed = (design: Design, group: GroupName, name: string, value: unknown): Design => ({
  ...design,
  [group]: { ...design[group], [name]: value },
});

const shown = (design: Design) =>
  names.flatMap((group) =>
    Object.keys(GROUPS[group])
      .filter((name) => relevant(design, group, name))
      .map((name) => `${group}.${name}`),
  );

test('every group of the schema is on the sheet of exactly one bay', () => {
  const groups = BAY_NAMES.flatMap((bay) => BAYS[bay].groups.map(({ group }) => group));
  expect(groups.toSorted()).toEqual(names.toSorted());
});

test('every place that a problem can name leads to a bay that holds it, or to none', () => {
  for (const group of names) {
    for (const name of Object.keys(GROUPS[group])) {
      const bay = bayOfPlace(`${group}.${name}`);
      expect(bay && BAYS[bay].groups.some((sheet) => sheet.group === group)).toBe(true);
    }
  }
  expect(bayOfPlace('overrides.3.ratio')).toBe('transformer');
  expect(bayOfPlace('')).toBeNull();
  expect(bayOfPlace('name')).toBeNull();
  expect(bayOfPlace('constructor')).toBeNull();
});

test('every value is shown in some design, so that none can be out of reach', () => {
  const base = defaultDesign();
  const reached = new Set(shown(base));
  for (const group of names) {
    for (const [name, field] of Object.entries(GROUPS[group] as Group)) {
      const values: unknown[] =
        field.kind === 'choice'
          ? (field as ChoiceField).options.map(({ value }) => value)
          : field.kind === 'quantity'
            ? [null, field.max]
            : [];
      for (const value of values) {
        for (const place of shown(changed(base, group, name, value))) reached.add(place);
      }
    }
  }
  const all = names.flatMap((group) =>
    Object.keys(GROUPS[group]).map((name) => `${group}.${name}`),
  );
  expect(all.filter((place) => !reached.has(place))).toEqual([]);
});

test('values without a meaning in the present choice are not shown', () => {
  const base = defaultDesign();
  expect(relevant(base, 'rectifier', 'stages')).toBe(false);
  expect(relevant(changed(base, 'rectifier', 'kind', 'ladder'), 'rectifier', 'stages')).toBe(true);
  expect(relevant(base, 'load', 'current')).toBe(false);
  expect(relevant(base, 'load', 'resistance')).toBe(true);
  const linear = changed(base, 'transformer', 'kneeFluxLinkage', null);
  expect(relevant(linear, 'transformer', 'saturatedInductance')).toBe(false);
  const floating = changed(base, 'stack', 'earth', 'floating');
  expect(relevant(floating, 'stack', 'joint')).toBe(false);
  expect(relevant(floating, 'stack', 'leakageResistance')).toBe(true);
});

test('a choice that decides what else is shown is always shown itself', () => {
  for (const { design } of EXAMPLES) {
    for (const place of ['rectifier.kind', 'load.kind', 'stack.earth', 'bridge.switchKind']) {
      expect(shown(design)).toContain(place);
    }
  }
});

test('a head says nothing that has not been read yet, and never a non-finite figure', () => {
  for (const { design } of EXAMPLES) {
    for (const bay of BAY_NAMES) {
      for (const brief of [true, false]) {
        expect(headOf(bay, design, null, null, brief)).not.toMatch(/NaN|null|undefined|∞/);
      }
    }
  }
});
