/** The command as it is run: a process of its own, its streams and its exit code. */
import { spawn } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { readDesign } from '../../../app/document/file.ts';
import { encodeLink } from '../../../app/document/link.ts';
import { EXAMPLES, READINGS } from '../../../sim-core/index.ts';

const project = fileURLToPath(new URL('../../../', import.meta.url));

/** Settles within some 50 periods: a lossy primary, small capacitors. 25 kHz: 40 µs a period. */
const QUICK = {
  version: 1,
  name: 'Quick to settle',
  bridge: { frequency: 25e3 },
  transformer: { primaryResistance: 2, magnetisingInductance: 1e-3, coreLossResistance: 200 },
  sections: { count: 1 },
  rectifier: { kind: 'bridge', capacitance: 1e-9 },
  output: { cableCapacitance: 0 },
  load: { resistance: 200e3 },
};
const PERIOD = 40e-6;

let folder: string;
const path = (name: string) => join(folder, name);
const write = (name: string, data: unknown) => {
  writeFileSync(path(name), typeof data === 'string' ? data : JSON.stringify(data));
  return path(name);
};

interface Ended {
  readonly code: number | null;
  readonly out: string;
  readonly err: string;
}

/** Run the command in the test's folder. */
function predict(...words: string[]): Promise<Ended> {
  return new Promise((resolve, reject) => {
    const child = spawn(
      process.execPath,
      [join(project, 'app/headless/launch.mjs'), 'app/headless/predict.ts', ...words],
      // As a user starts it: npm in the project, the files relative to where the user stands.
      { cwd: project, env: { ...process.env, INIT_CWD: folder, npm_lifecycle_event: 'predict' } },
    );
    let out = '';
    let err = '';
    child.stdout.setEncoding('utf8').on('data', (text: string) => {
      out += text;
    });
    child.stderr.setEncoding('utf8').on('data', (text: string) => {
      err += text;
    });
    child.once('error', reject);
    child.once('close', (code) => resolve({ code, out, err }));
  });
}

/** The prediction of a command that succeeds and has nothing to say about it. */
async function predicted(...words: string[]) {
  const { code, out, err } = await predict(...words);
  expect(err).toBe('');
  expect(code).toBe(0);
  return JSON.parse(out);
}

/** One sentence or more on standard error, exit code 2, nothing on standard output. */
async function refused(...words: string[]): Promise<string> {
  const { code, out, err } = await predict(...words);
  expect(code).toBe(2);
  expect(out).toBe('');
  expect(err).toMatch(/^[^\n]+\.\n$/);
  return err;
}

/** Rows of a table, the head apart. */
function readTable(name: string): { head: string[]; rows: number[][] } {
  const [head, ...rows] = readFileSync(path(name), 'utf8').trimEnd().split('\n');
  return { head: head.split(','), rows: rows.map((row) => row.split(',').map(Number)) };
}

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'kilostack-'));
  write('quick.json', QUICK);
  write('demo.json', EXAMPLES[0].design);
  // Bundled once, so that no test waits for it.
  expect((await predict('--help')).code).toBe(0);
}, 120_000);
afterAll(() => rmSync(folder, { recursive: true }));

describe('a prediction', () => {
  test('names every reading with its unit, and no number in it is not finite', async () => {
    const { out } = await predict('quick.json', '--for', '0.4ms');
    const said = JSON.parse(out);
    expect(said).toMatchObject({ design: QUICK.name, periods: 10, settled: false });
    expect(said.time).toBeCloseTo(0.4e-3, 12);
    expect(Object.keys(said.readings)).toEqual(Object.keys(READINGS));
    for (const [name, { unit }] of Object.entries(READINGS)) {
      expect(said.units[name]).toBe(unit);
      // JSON has no NaN: what is not finite would be null, and after 10 periods only the
      // distance from steady may be.
      if (name !== 'settledDistance') expect(said.readings[name], name).toEqual(expect.any(Number));
    }
    expect(said.joints).toHaveLength(2);
    expect(said.work.steps).toBeGreaterThan(640);
  });

  test('has no readings of a period before there was one', async () => {
    const said = await predicted('quick.json', '--for', '10us');
    expect(said).toMatchObject({ periods: 0, joints: null });
    expect(said.readings.outputVoltage).toBeNull();
  });

  test('obeys Ohm’s law at the load and sums the losses to the supply’s power', async () => {
    const { readings, settled } = await predicted('quick.json', '--until-settled');
    expect(settled).toBe(true);
    expect(readings.settledDistance).toBeLessThan(0.02);
    expect(readings.outputVoltage / readings.outputCurrent).toBeCloseTo(QUICK.load.resistance, 0);
    const { bridgeLoss, tankLoss, transformerLoss, rectifierLoss, outputLoss } = readings;
    const taken =
      readings.loadPower + bridgeLoss + tankLoss + transformerLoss + rectifierLoss + outputLoss;
    // Settled within 0.02 %, so the stores change by about as much.
    expect(taken / readings.supplyPower).toBeCloseTo(1, 3);
  });

  test('runs until settled when it is not told otherwise', async () => {
    expect(await predicted('quick.json')).toEqual(await predicted('quick.json', '--until-settled'));
  });

  test('of a link is that of its file, whether a fragment or a whole address', async () => {
    const design = readDesign(JSON.stringify(QUICK));
    if (!design.ok) throw new Error(design.problem.message);
    const link = await encodeLink(design.value);
    const ofFile = await predicted('quick.json', '--for', '0.4ms');
    expect(await predicted(link, '--for', '0.4ms')).toEqual(ofFile);
    expect(await predicted(`https://a.example/${link}`, '--for', '0.4ms')).toEqual(ofFile);
    expect(await predicted(link.slice(1), '--for', '0.4ms')).toEqual(ofFile);
  });
});

describe('a saved state', () => {
  test.each([
    ['at the end of a period', 'demo.json', '2ms', '2ms', '4ms'],
    ['inside a period', 'quick.json', '0.61ms', '0.99ms', '1.6ms'],
  ])('taken up %s leads where the whole run does', async (_, design, first, second, whole) => {
    await predicted(design, '--for', first, '--save-state', 'half.json');
    const continued = await predicted(design, '--state', 'half.json', '--for', second);
    const straight = await predicted(design, '--for', whole);
    // Each run ends with the first step that reaches its time, at most a 64th of a period late.
    expect(Math.abs(continued.time - straight.time)).toBeLessThan(PERIOD / 64);
    for (const name of ['outputVoltage', 'outputPeak', 'primaryPeak', 'primaryRms', 'fluxPeak']) {
      const relative = continued.readings[name] / straight.readings[name] - 1;
      expect(Math.abs(relative), name).toBeLessThan(5e-4);
    }
  });

  test('carries its design with it', async () => {
    await predicted('quick.json', '--for', '0.4ms', '--save-state', 'own.json');
    const named = await predicted('quick.json', '--state', 'own.json', '--for', '80us');
    expect(await predicted('--state', 'own.json', '--for', '80us')).toEqual(named);
  });

  test('of another design is taken up as far as the parts are there, and the rest is told', async () => {
    await predicted('quick.json', '--for', '80us', '--save-state', 'other.json');
    write('doubler.json', { ...QUICK, rectifier: { kind: 'doubler', capacitance: 1e-9 } });
    const { code, out, err } = await predict(
      'doubler.json',
      '--state',
      'other.json',
      '--for',
      '80us',
    );
    expect(code).toBe(0);
    expect(JSON.parse(out).time).toBeCloseTo(160e-6, 12);
    expect(err).toContain('the design has no section 1 diode 3, capacitance');
    expect(err).toContain('the state tells nothing of section 1 upper capacitor');
  });

  test('that is damaged is refused by a sentence that names its file', async () => {
    write('damaged.json', '{"format": "kilostack-state", "vers');
    expect(await refused('quick.json', '--state', 'damaged.json')).toBe(
      'damaged.json: The state file is damaged: it is not JSON.\n',
    );
  });

  test('beyond the range of numbers ends the run by a sentence, not by a wrong answer', async () => {
    await predicted('quick.json', '--for', '10us', '--save-state', 'far.json');
    const far = JSON.parse(readFileSync(path('far.json'), 'utf8'));
    far.state.charge['bus capacitor'] = 1e308;
    write('far.json', far);
    expect(await refused('quick.json', '--state', 'far.json', '--for', '10us')).toContain(
      'left the range of numbers',
    );
  });
});

describe('a table of waveforms', () => {
  test('has a column for each signal asked for, from the start to the time asked for', async () => {
    const signals = 'output voltage, primary current';
    const { time } = await predicted(
      ...['quick.json', '--for', '0.41ms', '--csv', 'waves.csv', '--signals', signals],
    );
    const { head, rows } = readTable('waves.csv');
    expect(head).toEqual(['time (s)', 'output voltage (V)', 'primary current (A)']);
    expect(rows[0][0]).toBe(0);
    for (let k = 1; k < rows.length; k++) expect(rows[k][0]).toBeGreaterThan(rows[k - 1][0]);
    expect(rows.every((row) => row.length === 3 && row.every(Number.isFinite))).toBe(true);
    const last = rows[rows.length - 1][0];
    expect(last).toBe(time);
    // The step that reaches the time is at most a 64th of a period.
    expect(last).toBeGreaterThanOrEqual(0.41e-3 * (1 - 1e-9));
    expect(last).toBeLessThan(0.41e-3 + PERIOD / 64);
  });

  test('holds the waveforms that the readings are taken from', async () => {
    const { readings } = await predicted(
      ...['quick.json', '--for', '0.4ms', '--csv', 'waves.csv', '--signals', 'output voltage'],
    );
    const { rows } = readTable('waves.csv');
    const period = rows.filter(([time]) => time >= 0.4e-3 - PERIOD * (1 + 1e-9));
    const volts = period.map(([, value]) => value);
    let integral = 0;
    for (let k = 1; k < period.length; k++) {
      integral += 0.5 * (period[k][0] - period[k - 1][0]) * (volts[k] + volts[k - 1]);
    }
    // A period of readings is cut one short step late.
    expect(integral / PERIOD / readings.outputVoltage).toBeCloseTo(1, 4);
    expect(Math.max(...volts) / readings.outputPeak).toBeCloseTo(1, 6);
  });

  test('without named signals has the usual ones', async () => {
    await predicted('quick.json', '--for', '10us', '--csv', 'usual.csv');
    expect(readTable('usual.csv').head).toEqual([
      'time (s)',
      'bridge voltage (V)',
      'primary current (A)',
      'flux linkage (Wb)',
      'output voltage (V)',
    ]);
  });
});

describe('what cannot be done', () => {
  test('is refused by a sentence that names the value and its limit', async () => {
    write('mad.json', { bridge: { frequency: 1e30 } });
    write('cut.json', '{"version": 1, "bri');
    write('escape.json', '{"\u001b[31m": 1}');
    const cases: [string[], string][] = [
      [['mad.json'], 'bridge.frequency: Drive frequency 1e30 Hz is above 1 MHz'],
      [['cut.json'], 'cut.json: The text is not JSON'],
      [['none.json'], 'none.json: There is no such file'],
      [['.'], '.: This is a folder'],
      [['#d=1.eJwr'], 'The link is damaged or cut short'],
      [['https://a.example/'], 'The link holds no design'],
      [['quick.json', '--for', '20mV'], '--for: mV is not a unit of time but of voltage'],
      [
        ['quick.json', '--csv', 'x.csv', '--signals', 'outptu voltage'],
        'no signal “outptu voltage”; the nearest are “output voltage”',
      ],
      [['quick.json', '--csv', 'none/x.csv'], 'none/x.csv: There is no such file or folder'],
      [['quick.json', '--csv', '.'], '.: This is a folder'],
      [['quick.json', '--save-state', 'none/x'], 'none/x: There is no such file or folder'],
    ];
    for (const [words, sentence] of cases) expect(await refused(...words)).toContain(sentence);
    // What a file holds must not reach the terminal as a command to it.
    expect(await refused('escape.json')).not.toContain('\u001b');
  });

  test('a run that does not settle is given up with a sentence, its readings still told', async () => {
    // 10 s are 10 periods of 1 Hz: fewer than it takes to know the distance from steady.
    write('slow.json', {
      ...QUICK,
      bridge: { frequency: 1 },
      transformer: { ...QUICK.transformer, magnetisingInductance: 1e4 },
    });
    const { code, out, err } = await predict('slow.json');
    expect(code).toBe(2);
    expect(err).toMatch(/^--until-settled: The run has not settled within 10 s: .*\.\n$/);
    expect(JSON.parse(out)).toMatchObject({ settled: false, periods: 10 });
  });
});
