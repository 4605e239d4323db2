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
  signalsOf: `These are the signals of the demo, “${design.name}”. Other designs have those of their own parts: as many sections, stages and capacitors as they are given.`,
});

test('the reference page names every value of the schema', () => {
  for (const [group, fields] of Object.entries(GROUPS)) {
    for (const name of Object.keys(fields)) expect(page).toContain(`\`${group}.${name}\``);
  }
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
