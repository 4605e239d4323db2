import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, test } from 'vitest';
import { Ledger, tabSeparated } from '../../../app/ledger/Ledger.tsx';
import { READINGS, type ReadingName, type Readings } from '../../../sim-core/index.ts';

const names = Object.keys(READINGS) as ReadingName[];

describe('the copied table', () => {
  test('has a line for every reading of the catalogue: label, figure as computed, unit', () => {
    const readings = Object.fromEntries(
      names.map((name, i) => [name, i === 3 ? null : Math.PI * 10 ** (i - 9)]),
    ) as Readings;
    const text = tabSeparated(readings, 'settled');
    expect(text.endsWith('\n')).toBe(true);
    const [head, ...rows] = text
      .trimEnd()
      .split('\n')
      .map((line) => line.split('\t'));
    expect(head).toEqual(['Reading', 'Value (settled)', 'Unit']);
    expect(rows).toHaveLength(names.length);
    names.forEach((name, i) => {
      const [label, value, unit] = rows[i];
      expect(label).toBe(READINGS[name].label);
      expect(unit ?? '').toBe(READINGS[name].unit);
      if (readings[name] === null) expect(value).toBe('');
      else expect(Number(value)).toBe(readings[name]);
    });
  });

  test('has empty figures before there are readings', () => {
    const rows = tabSeparated(null, 'none yet').trimEnd().split('\n').slice(1);
    expect(rows.every((row) => row.split('\t')[1] === '')).toBe(true);
  });
});

test('before anything is computed every reading stands there with a dash, said in words', () => {
  const markup = renderToStaticMarkup(<Ledger />);
  expect(markup).toContain('none yet');
  for (const name of names) {
    const label = READINGS[name].label.replace('&', '&amp;');
    expect(markup.split(`>${label}</button>`), label).toHaveLength(2);
  }
  // Five counts of the engine stand below the readings.
  expect(markup.split('no value yet')).toHaveLength(names.length + 5 + 1);
});
