/** Contrast of the page's colours, by the formula of WCAG 2.2 (definitions of relative luminance and contrast ratio). */
import { readFileSync } from 'node:fs';
import { expect, test } from 'vitest';

const css = readFileSync(new URL('../../app/tokens.css', import.meta.url), 'utf8');

function tokensOf(selector: string): ReadonlyMap<string, string> {
  const start = css.indexOf(`${selector} {`);
  if (start < 0) throw new Error(`${selector} is not in tokens.css`);
  const body = css.slice(start, css.indexOf('}', start));
  return new Map(
    [...body.matchAll(/--([\w-]+):\s*(#[0-9a-f]{6})\b/gi)].map(([, name, colour]) => [
      name,
      colour,
    ]),
  );
}

function luminance(colour: string): number {
  const [r, g, b] = [1, 3, 5].map((i) => {
    const c = Number.parseInt(colour.slice(i, i + 2), 16) / 255;
    return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * r + 0.7152 * g + 0.0722 * b;
}

function contrast(a: string, b: string): number {
  const [light, dark] = [luminance(a), luminance(b)].toSorted((x, y) => y - x);
  return (light + 0.05) / (dark + 0.05);
}

const THEMES = [
  ['light', tokensOf(':root')],
  ['dark', tokensOf(':root[data-theme="dark"]')],
] as const;

const TEXT = ['ink', 'ink-2', 'hand', 'close', 'over', 'ok'];
const STROKES = [
  'ink-3',
  'wire',
  'sig-bridge',
  'sig-primary',
  'sig-flux',
  'sig-winding',
  'sig-output',
  'sig-ripple',
];

test('the formula gives 21 for black on white and 1 for a colour on itself', () => {
  expect(contrast('#000000', '#ffffff')).toBeCloseTo(21, 9);
  expect(contrast('#4b2c8a', '#4b2c8a')).toBe(1);
});

test.each(THEMES)('%s: both themes name the same colours', (_, tokens) => {
  expect([...tokens.keys()].toSorted()).toEqual([...THEMES[0][1].keys()].toSorted());
});

test.each(THEMES)(
  '%s: text reaches 4.5 to 1 on paper, on fields and on the core (AA)',
  (_, tokens) => {
    for (const name of TEXT) {
      for (const ground of ['paper', 'field']) {
        const ratio = contrast(tokens.get(name) as string, tokens.get(ground) as string);
        expect(ratio, `${name} on ${ground}`).toBeGreaterThanOrEqual(4.5);
      }
    }
    for (const name of ['ink', 'ink-2', 'hand']) {
      const ratio = contrast(tokens.get(name) as string, tokens.get('core') as string);
      expect(ratio, `${name} on core`).toBeGreaterThanOrEqual(4.5);
    }
  },
);

test.each(THEMES)(
  '%s: traces, wires and ticks reach 3 to 1 on paper (AA, graphics)',
  (_, tokens) => {
    for (const name of STROKES) {
      const ratio = contrast(tokens.get(name) as string, tokens.get('paper') as string);
      expect(ratio, name).toBeGreaterThanOrEqual(3);
    }
  },
);

test('the ratios written beside the colours are the lowest of both themes', () => {
  const written = [...css.matchAll(/--([\w-]+):\s*#[0-9a-f]{6};\s*\/\*[^*]*\[(\d+\.\d)\]/g)];
  expect(written.length).toBeGreaterThanOrEqual(4);
  for (const [, name, ratio] of written) {
    const lowest = Math.min(
      ...THEMES.map(([, tokens]) =>
        contrast(tokens.get(name) as string, tokens.get('paper') as string),
      ),
    );
    expect(lowest.toFixed(1), name).toBe(ratio);
  }
});
