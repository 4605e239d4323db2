import fc from 'fast-check';
import { expect, test } from 'vitest';
import { partsOnlyIn, readState, writeState } from '../../../app/headless/stateFile.ts';
import { EXAMPLES } from '../../../sim-core/index.ts';
import { Run } from '../../../sim-core/solve.ts';

const { design } = EXAMPLES[0];
const opened = Run.open(design);
if (!opened.ok) throw new Error(opened.problem.message);
const saved = { design, state: opened.value.state() };
const sound = JSON.parse(writeState(saved));
const { state } = sound;

test('a state read is the state written, to the last digit', () => {
  for (const example of EXAMPLES) {
    const run = Run.open(example.design);
    if (!run.ok) throw new Error(run.problem.message);
    const steps = run.value.advance();
    for (let k = 0; k < 20; k++) steps.next();
    const written = { design: example.design, state: run.value.state() };
    expect(readState(writeState(written))).toEqual({ ok: true, value: written });
  }
});

test.each([
  ['cut short', JSON.stringify(sound).slice(0, 300), /damaged: it is not JSON/],
  ['a design', JSON.stringify({ version: 1 }), /no state of a run/],
  ['a list', '[]', /no state of a run/],
  ['newer', { ...sound, version: 2 }, /newer version/],
  ['of no version', { ...sound, version: '1' }, /“version” must be 1/],
  ['of no design', { ...sound, design: null }, /design is refused/],
  [
    'of a bad design',
    { ...sound, design: { bridge: { frequency: 0 } } },
    /bridge\.frequency: .*0 Hz/,
  ],
  ['without a state', { ...sound, state: [] }, /no “state”/],
  ['before rest', { ...sound, state: { ...state, time: -1 } }, /from 0 to 10000/],
  ['too late to count on', { ...sound, state: { ...state, time: 1e300 } }, /from 0 to 10000/],
  ['beyond its period', { ...sound, state: { ...state, phase: 1 } }, /phase/],
  ['of no charge', { ...sound, state: { ...state, charge: undefined } }, /“charge”/],
  ['of charge in words', { ...sound, state: { ...state, charge: { a: '1' } } }, /“charge”/],
  [
    'of endless flux',
    JSON.stringify(sound).replace(/"core":[^,}]+/, '"core":1e999'),
    /“fluxLinkage”/,
  ],
])('a file that is %s is refused by a sentence', (_, data, sentence) => {
  const read = readState(typeof data === 'string' ? data : JSON.stringify(data));
  if (read.ok) throw new Error('taken');
  expect(read.problem.message).toMatch(sentence);
  expect(read.problem.message).toMatch(/\.$/);
});

test('no text makes the reader throw', () => {
  const near = fc.record({
    format: fc.constant('kilostack-state'),
    version: fc.constantFrom<unknown>(1, null, {}),
    design: fc.oneof(fc.constant({}), fc.jsonValue()),
    state: fc.oneof(
      fc.record({
        time: fc.oneof(fc.constant(0), fc.jsonValue()),
        phase: fc.oneof(fc.constant(0), fc.jsonValue()),
        charge: fc.oneof(fc.constant({ __proto__: null }), fc.jsonValue()),
        fluxLinkage: fc.jsonValue(),
      }),
      fc.jsonValue(),
    ),
  });
  fc.assert(
    fc.property(
      fc.oneof(
        fc.string(),
        fc.json(),
        near.map((data) => JSON.stringify(data)),
      ),
      (text) => {
        const read = readState(text);
        if (read.ok)
          expect(Object.values(read.value.state.charge).every(Number.isFinite)).toBe(true);
        else expect(read.problem.message).not.toBe('');
      },
    ),
    { seed: 5, numRuns: 500 },
  );
});

test('the parts of one state that another does not have are named', () => {
  const { charge, ...rest } = saved.state;
  const { 'bus capacitor': _, ...others } = charge;
  expect(partsOnlyIn(saved.state, { ...rest, charge: others })).toEqual(['bus capacitor']);
  expect(partsOnlyIn({ ...rest, charge: others }, saved.state)).toEqual([]);
});
