import { expect, test } from 'vitest';
import { readRequest } from '../../../app/headless/request.ts';

const request = (...words: string[]) => {
  const read = readRequest(words);
  if (!read.ok) throw new Error(read.problem.message);
  return read.value;
};

test('a design alone is run from rest until settled', () => {
  expect(request('d.json')).toEqual({
    design: 'd.json',
    duration: null,
    state: null,
    saveState: null,
    csv: null,
  });
  expect(request('d.json', '--from-rest', '--until-settled')).toEqual(request('d.json'));
});

test('a time is read as people write it', () => {
  for (const time of ['20ms', '20 ms', '0.02', '2e-2 s', '20000µs', '20000us']) {
    expect(request('d.json', '--for', time)?.duration, time).toBe(0.02);
  }
});

test('signals are named once each, between commas', () => {
  const csv = request(
    'd.json',
    '--csv',
    'x.csv',
    '--signals',
    ' output voltage,bus voltage ,, output voltage',
  )?.csv;
  expect(csv).toEqual({ file: 'x.csv', signals: ['output voltage', 'bus voltage'] });
});

test('a call for help is heard beside anything else', () => {
  expect(request('--help')).toBeNull();
  expect(request('d.json', '-h', '--for', 'long')).toBeNull();
});

test('a saved state needs no design beside it', () => {
  expect(request('--state', 's.json')).toMatchObject({ design: null, state: 's.json' });
});

test.each([
  [[], 'Which design?'],
  [['d.json', 'e.json'], '2 were given'],
  [['d.json', '--fro', '20ms'], "Unknown option '--fro'; --help lists the options."],
  [['d.json', '--for'], "'--for <value>' argument missing; --help lists"],
  [['d.json', '--for', '-1ms'], "'--for' argument is ambiguous; --help lists"],
  [['d.json', '--until-settled=yes'], "'--until-settled' does not take an argument; --help"],
  [['d.json', '--for', ''], '--for: Something must follow'],
  [['d.json', '--for', '20mV'], '--for: mV is not a unit of time but of voltage'],
  [['d.json', '--for', 'long'], '--for: “long” is not a number'],
  [['d.json', '--for', 'NaN'], '--for: “NaN” is not a number'],
  [['d.json', '--for', 'Infinity'], '--for: “Infinity” is not a number'],
  [['d.json', '--for', '0'], 'above 0 and at most 1000 s; 0 s was given'],
  [['d.json', '--for=-1ms'], 'above 0 and at most 1000 s; -0.001 s was given'],
  [['d.json', '--for', '1e30'], 'above 0 and at most 1000 s; 1e+30 s was given'],
  [['d.json', '--for', '1e999'], '1e999 is too large a number'],
  [['d.json', '--for', '1ms', '--for', '2ms'], '--for: The option is given twice'],
  [['d.json', '--for', '1ms', '--until-settled'], '--until-settled: A run ends either'],
  [['d.json', '--from-rest', '--state', 'x'], '--from-rest: A run starts either'],
  [['d.json', '--signals', 'output voltage'], '--signals: These are the columns of a table'],
  [['d.json', '--csv', 'x.csv', '--signals', ' , '], '--signals: No signal is named'],
])('%j is refused by a sentence: %s', (words, sentence) => {
  const read = readRequest(words);
  if (read.ok) throw new Error('taken');
  const { place, message } = read.problem;
  expect(`${place}: ${message}`).toContain(sentence);
  expect(message).toMatch(/[.]$/);
});
