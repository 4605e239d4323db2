import { readFileSync, writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { expect, test } from 'vitest';
import { checkDesign, differences } from '../../../sim-core/design/check.ts';
import { EXAMPLES } from '../../../sim-core/design/examples.ts';
import { EXAMPLE, referencePage } from '../../../sim-core/design/reference.ts';
import { GROUPS } from '../../../sim-core/design/schema.ts';
import { signalsOf } from '../../../sim-core/plant/assemble.ts';
import { READINGS } from '../../../sim-core/readings/catalogue.ts';

const file = fileURLToPath(new URL('../../../sim-core/REFERENCE.md', import.meta.url));
const { design } = EXAMPLES[0];
const page = referencePage({
  readings: READINGS,
  signals: signalsOf(design),
  signalsOf: `These are the signals of the demo, “${design.name}”, which has every part that a signal belongs to. Other designs have those of their own parts: k counts their sections from 1, or their joints from 0, at the negative terminal; j counts the diodes of a section, 4 in a bridge, 1 in a half-wave rectifier, 2 in a doubler and 2 per stage of a ladder. A name is written with its numbers: \`section 3 winding current\`.`,
});

/** The pattern of a signal's name, as the page shows it. */
const pattern = (name: string) => name.replace(/\d+/, 'k').replace(/\d+/, 'j');

test('the reference page names every value of the schema', () => {
  for (const [group, fields] of Object.entries(GROUPS)) {
    for (const name of Object.keys(fields)) expect(page).toContain(`\`${group}.${name}\``);
  }
});

test('the reference page names every signal of every example, by bay', () => {
  for (const example of EXAMPLES) {
    for (const { name, unit, bay } of signalsOf(example.design)) {
      const row = page
        .split('\n')
        .find((line) => line.startsWith(`| ${bay} | \`${pattern(name)}\` |`));
      expect(row, name).toMatch(new RegExp(`\\| ${unit || '1'} \\|$`));
    }
  }
});

test('the reference page counts the diodes of every rectifier right', () => {
  const diodes = (rectifier: object) => {
    const checked = checkDesign({ sections: { count: 1 }, rectifier });
    if (!checked.ok) throw new Error(checked.problem.message);
    return signalsOf(checked.value).filter(({ name }) => / diode \d+ current$/.test(name)).length;
  };
  expect(diodes({ kind: 'bridge' })).toBe(4);
  expect(diodes({ kind: 'half-wave' })).toBe(1);
  expect(diodes({ kind: 'doubler' })).toBe(2);
  expect(diodes({ kind: 'ladder', stages: 5 })).toBe(10);
  expect(diodes({ kind: 'none' })).toBe(0);
});

test('the file that the reference page shows is a design, and holds only differences', () => {
  const checked = checkDesign(EXAMPLE);
  expect(checked.ok && differences(checked.value)).toEqual(EXAMPLE);
});

test('sim-core/REFERENCE.md is what the schema says (KILOSTACK_UPDATE=1 rewrites it)', () => {
  if (process.env.KILOSTACK_UPDATE === '1') writeFileSync(file, page);
  expect(
    readFileSync(file, 'utf8') === page,
    'sim-core/REFERENCE.md is stale; run: KILOSTACK_UPDATE=1 npx vitest run tests/sim-core/design/reference.test.ts',
  ).toBe(true);
});
