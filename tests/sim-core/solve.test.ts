/** Laws of a run: what a change keeps, what a state holds, what is refused and how. */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  checkDesign,
  type Design,
  EXAMPLES,
  type Field,
  GROUPS,
  READINGS,
  WINDING_FIELDS,
} from '../../sim-core/index.ts';
import { Run, SETTLED_DISTANCE } from '../../sim-core/solve.ts';

type Edits = { readonly [group: string]: Readonly<Record<string, unknown>> };

/** A small plant that settles within some tens of periods. */
function quick(edits: Edits = {}): Design {
  const raw: Edits = {
    supply: { voltage: 100, resistance: 0.1, busCapacitance: 1e-3 },
    bridge: { frequency: 20e3, deadTime: 1e-6 },
    sections: { count: 2, ratio: 10 },
    rectifier: { kind: 'doubler', capacitance: 2e-9 },
    output: { cableCapacitance: 200e-12 },
    load: { kind: 'resistor', resistance: 400e3 },
  };
  const groups = [...new Set([...Object.keys(raw), ...Object.keys(edits)])];
  const merged = groups.map((g) => [g, { ...raw[g], ...edits[g] }]);
  const checked = checkDesign(Object.fromEntries(merged));
  if (!checked.ok) throw new Error(`${checked.problem.place}: ${checked.problem.message}`);
  return checked.value;
}

function open(design: Design): Run {
  const opened = Run.open(design);
  if (!opened.ok) throw new Error(opened.problem.message);
  return opened.value;
}

/** Advance by some periods; fails the test on a failure of the engine. */
function advance(run: Run, periods: number): void {
  const until = run.periods + periods;
  for (const ended of run.advance()) if (ended && run.periods >= until) break;
  expect(run.failed).toBeNull();
}

function settle(run: Run, most = 5000): void {
  for (const ended of run.advance()) if (ended && (run.settled || run.periods >= most)) break;
  expect(run.failed).toBeNull();
  expect(run.settled).toBe(true);
}

const value = (run: Run, name: string): number =>
  run.value(run.signals.findIndex((s) => s.name === name));

describe('a change while running', () => {
  test('keeps charge and flux linkage exactly', () => {
    const run = open(quick());
    advance(run, 10);
    const before = run.state();
    const changed = run.change(quick({ rectifier: { kind: 'doubler', capacitance: 5e-9 } }));
    expect(changed.ok).toBe(true);
    const after = run.state();
    for (const [name, charge] of Object.entries(before.charge)) {
      expect(after.charge[name]).toBeCloseTo(charge, 18);
    }
    for (const [name, linkage] of Object.entries(before.fluxLinkage)) {
      expect(after.fluxLinkage[name]).toBeCloseTo(linkage, 15);
    }
    expect(after.time).toBe(before.time);
    expect(after.phase).toBeCloseTo(before.phase, 12);
  });

  test('of nothing disturbs nothing: the run meets the undisturbed one again', () => {
    const plain = open(quick());
    const touched = open(quick());
    advance(plain, 30);
    advance(touched, 15);
    expect(touched.change(quick()).ok).toBe(true);
    advance(touched, 15);
    const a = plain.readings().outputVoltage as number;
    const b = touched.readings().outputVoltage as number;
    expect(Math.abs(b - a)).toBeLessThan(1e-3 * a);
  });

  test('of the bus voltage ends in the state that a run from rest settles to', () => {
    const changed = open(quick());
    advance(changed, 20);
    expect(changed.change(quick({ supply: { voltage: 120 } })).ok).toBe(true);
    settle(changed);
    const fresh = open(quick({ supply: { voltage: 120 } }));
    settle(fresh);
    const a = fresh.readings();
    const b = changed.readings();
    for (const name of ['outputVoltage', 'primaryRms', 'supplyPower'] as const) {
      const expected = a[name] as number;
      expect(Math.abs((b[name] as number) - expected)).toBeLessThan(2e-3 * Math.abs(expected));
    }
  });

  test('keeps the energy audit closed', () => {
    const run = open(quick());
    for (const capacitance of [2e-9, 6e-9, 1e-9, 3e-9]) {
      expect(run.change(quick({ rectifier: { kind: 'doubler', capacitance } })).ok).toBe(true);
      advance(run, 10);
      expect(Math.abs(run.audit() as number)).toBeLessThan(0.002);
    }
  });

  test('ends the generator that was advancing the old design', () => {
    const run = open(quick());
    const steps = run.advance();
    steps.next();
    run.change(quick({ supply: { voltage: 90 } }));
    expect(steps.next().done).toBe(true);
  });
});

describe('a saved state', () => {
  test('is plain data that takes the run up where it stood', () => {
    const whole = open(quick());
    advance(whole, 40);
    const first = open(quick());
    advance(first, 20);
    const state = JSON.parse(JSON.stringify(first.state()));
    const second = Run.open(quick(), state);
    if (!second.ok) throw new Error(second.problem.message);
    expect(second.value.time).toBe(first.time);
    for (const _ of second.value.advance()) if (second.value.time >= whole.time) break;
    const a = value(whole, 'stack voltage');
    expect(Math.abs(value(second.value, 'stack voltage') - a)).toBeLessThan(1e-3 * a);
  });
});

describe('a settled run', () => {
  test('stays where it is: a hundred further periods move it by less than it said', () => {
    const run = open(quick());
    settle(run);
    const before = run.readings();
    advance(run, 100);
    const after = run.readings();
    const v = before.outputVoltage as number;
    expect(Math.abs((after.outputVoltage as number) - v)).toBeLessThan(2 * SETTLED_DISTANCE * v);
  });

  test('balances its power: supply = load + losses within 0.2 %', () => {
    const run = open(quick());
    settle(run);
    const r = run.readings();
    const losses = [
      'bridgeLoss',
      'tankLoss',
      'transformerLoss',
      'rectifierLoss',
      'outputLoss',
    ] as const;
    const sum = losses.reduce((total, name) => total + (r[name] as number), r.loadPower as number);
    expect(Math.abs(sum - (r.supplyPower as number))).toBeLessThan(
      0.002 * (r.supplyPower as number),
    );
  });
});

describe('moving the earth', () => {
  test('leaves the load voltage alone where the bond is the only path to earth', () => {
    const bare = { ownCapacitance: 60e-12, screenCapacitance: 0 };
    const outputs = [0, 1, 2].map((joint) => {
      const run = open(quick({ sections: { count: 2, ...bare }, stack: { joint } }));
      settle(run);
      return run.readings().outputVoltage as number;
    });
    for (const output of outputs)
      expect(Math.abs(output - outputs[0])).toBeLessThan(1e-3 * outputs[0]);
  });

  test('shifts every joint so that the earthed one is at 0 V', () => {
    for (const joint of [0, 1, 2]) {
      const run = open(quick({ stack: { joint } }));
      advance(run, 20);
      const joints = run.joints() as readonly number[];
      expect(Math.abs(joints[joint])).toBeLessThan(1e-9);
      for (let k = 1; k < joints.length; k++) expect(joints[k]).toBeGreaterThan(joints[k - 1]);
    }
  });
});

describe('every example', () => {
  test.each(EXAMPLES)(
    '$id closes its energy audit within 0.2 % from rest through 200 periods',
    ({ design }) => {
      const run = open(design);
      for (const ended of run.advance()) {
        if (!ended) continue;
        if (run.periods > 3) expect(Math.abs(run.audit() as number)).toBeLessThan(0.002);
        if (run.periods >= 200) break;
      }
      expect(run.failed).toBeNull();
    },
  );
});

describe('designs at the edge', () => {
  const edges: readonly (readonly [string, Edits])[] = [
    [
      'no load',
      { load: { kind: 'open' }, output: { bleederResistance: null, probeResistance: null } },
    ],
    ['a shorted output', { load: { kind: 'short' } }],
    ['no smoothing capacitor', { rectifier: { kind: 'bridge', capacitance: null } }],
    [
      'no capacitance anywhere on the high side',
      {
        rectifier: { kind: 'bridge', capacitance: null, diodeCapacitance: 0 },
        sections: { ownCapacitance: 0, screenCapacitance: 0 },
        output: { cableCapacitance: 0, probeCapacitance: 0 },
      },
    ],
    ['no bus capacitor', { supply: { busCapacitance: null } }],
    ['no bus voltage', { supply: { voltage: 0 } }],
    ['an uncharged bus', { supply: { currentLimit: 2 }, start: { busCharged: false } }],
    ['a floating stack', { stack: { earth: 'floating' } }],
    ['a floating bus', { supply: { earthing: 'leakage' } }],
    ['a bus earthed at its midpoint', { supply: { earthing: 'midpoint' } }],
    [
      'a bus earthed at its midpoint without a capacitor',
      {
        supply: { earthing: 'midpoint', busCapacitance: null },
      },
    ],
    ['no dead time', { bridge: { deadTime: 0 } }],
    ['no phase shift, so no drive', { bridge: { phaseShift: 0 } }],
    ['no output capacitance of the switches', { bridge: { outputCapacitance: 0 } }],
    ['a ladder of twelve stages', { rectifier: { kind: 'ladder', stages: 12 } }],
    ['alternating output', { rectifier: { kind: 'none' } }],
    ['half-wave', { rectifier: { kind: 'half-wave' } }],
    ['1 Hz', { bridge: { frequency: 1 }, transformer: { kneeFluxLinkage: 6e-3 } }],
    ['1 MHz', { bridge: { frequency: 1e6, deadTime: 50e-9 } }],
    ['a section without leakage', { sections: { leakageInductance: 0 } }],
    ['a reversed winding', { sections: { sense: 'reversed' } }],
    ['constant current', { load: { kind: 'constant-current', current: 5e-3, kneeVoltage: 100 } }],
    ['48 sections', { sections: { count: GROUPS.sections.count.max, ratio: 1 } }],
  ];
  test.each(edges.map(([name, edits]) => ({ name, edits })))(
    '$name: readings are finite and the audit closes',
    ({ edits }) => {
      const run = open(quick(edits));
      let steps = 0;
      for (const ended of run.advance()) {
        if ((ended && run.periods >= 12) || ++steps > 40_000) break;
      }
      expect(run.failed).toBeNull();
      for (const name of Object.keys(READINGS) as (keyof typeof READINGS)[]) {
        const reading = run.readings()[name];
        if (reading !== null) expect(Number.isFinite(reading), name).toBe(true);
      }
      run.signals.forEach((signal, k) => {
        expect(Number.isFinite(run.value(k)), signal.name).toBe(true);
      });
      expect(Math.abs(run.audit() ?? 0)).toBeLessThan(0.002);
    },
  );

  test('values further apart than double precision holds are refused by name', () => {
    const opened = Run.open(
      quick({
        supply: { earthing: 'leakage', leakageResistance: 1e11 },
        bridge: { switchOffResistance: 1e12, switchKind: 'field-effect', switchResistance: 1e-4 },
        tank: { parallelCapacitance: 1e-2 },
        transformer: { coreLossResistance: 1e12 },
      }),
    );
    if (opened.ok) {
      advance(opened.value, 2);
      expect(Number.isFinite(value(opened.value, 'bridge voltage'))).toBe(true);
    } else {
      expect(opened.problem.message).toMatch(/“.+” and “.+” meet there.*10¹⁵/);
    }
  });
});

/** A value anywhere within a field's bounds, magnitudes spread evenly over the decades. */
function within(field: Field): fc.Arbitrary<unknown> {
  switch (field.kind) {
    case 'quantity': {
      const unit = fc.double({ min: 0, max: 1, noNaN: true });
      const number = unit.map((u) =>
        field.min > 0
          ? Math.min(field.max, field.min * (field.max / field.min) ** u)
          : field.min + (field.max - field.min) * u ** 4,
      );
      const options: fc.Arbitrary<unknown>[] = [number, number, number, number];
      if (field.zero) options.push(fc.constant(0));
      if (field.optional) options.push(fc.constant(null));
      return fc.oneof(...options);
    }
    case 'count':
      return fc.integer({ min: field.min, max: Math.min(field.max, 6) });
    case 'choice':
      return fc.constantFrom(...field.options.map((o) => o.value));
    case 'flag':
      return fc.boolean();
    case 'text':
      return fc.constant(field.default);
  }
}

const anyDesign = fc
  .record(
    Object.fromEntries(
      Object.entries(GROUPS).map(([group, fields]) => [
        group,
        fc.record(
          Object.fromEntries(Object.entries(fields).map(([name, field]) => [name, within(field)])),
        ),
      ]),
    ),
  )
  .map((raw) => checkDesign(raw))
  .filter((checked) => checked.ok)
  .map((checked) => (checked as { readonly value: Design }).value);

test('any design within the bounds runs with finite values, or is refused with a reason', () => {
  fc.assert(
    fc.property(anyDesign, (design) => {
      const opened = Run.open(design);
      if (!opened.ok) {
        expect(opened.problem.message.length).toBeGreaterThan(20);
        return;
      }
      const run = opened.value;
      let steps = 0;
      for (const ended of run.advance()) if ((ended && run.periods >= 2) || ++steps > 300) break;
      run.signals.forEach((signal, k) => {
        if (!run.failed) expect(Number.isFinite(run.value(k)), signal.name).toBe(true);
      });
      if (run.failed) expect(run.failed.message).toMatch(/“.+”/);
      for (const reading of Object.values(run.readings())) {
        if (reading !== null) expect(Number.isFinite(reading)).toBe(true);
      }
    }),
    { seed: 20261201, numRuns: 250 },
  );
});

test('a section may differ from its fellows in every winding value', () => {
  const run = open(quick());
  advance(run, 30);
  const plain = (run.joints() as readonly number[])[1];
  for (const name of Object.keys(WINDING_FIELDS)) {
    const edited = { ratio: 20, sense: 'reversed', leakageInductance: 30e-3, resistance: 4e3 };
    const changed = name in edited ? edited[name as keyof typeof edited] : 400e-12;
    const checked = checkDesign({ ...quick(), overrides: [{ section: 1, [name]: changed }] });
    if (!checked.ok) throw new Error(checked.problem.message);
    const other = open(checked.value);
    advance(other, 30);
    expect((other.joints() as readonly number[])[1], name).not.toBeCloseTo(plain, 1);
  }
});
