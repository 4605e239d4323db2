/** Links: good ones open, all others give a sentence and leave the page as it was. */
import { deflateSync } from 'node:zlib';
import type { Page } from '@playwright/test';
import { EXAMPLES } from '../sim-core/index.ts';
import {
  brokenFigures,
  driveLine,
  engineGoesOn,
  expect,
  linkOf,
  nameOfDesign,
  note,
  problem,
  state,
  test,
} from './page.ts';

const DEMO = EXAMPLES[0].design.name;

/** A fragment that holds any text, valid or not. */
const packed = (text: string) => `#d=1.${deflateSync(text).toString('base64url')}`;

/** Bytes that look random and are the same in every run (a linear congruence, mod 2³¹). */
function noise(length: number): Buffer {
  const bytes = Buffer.alloc(length);
  let x = 20_261_201;
  for (let i = 0; i < length; i++) {
    x = (1_103_515_245 * x + 12_345) % 2 ** 31;
    bytes[i] = x >>> 16;
  }
  return bytes;
}

const whole = await linkOf({ name: 'Sent', load: { resistance: 5e6 } });

/** What the link is, the fragment, and words of the sentence that must be shown. */
const BAD: readonly [string, string, RegExp][] = [
  ['is cut short', whole.slice(0, -5), /cut short/],
  ['has a changed letter', whole.replace(/.(?=.{12}$)/, (c) => (c === 'A' ? 'B' : 'A')), /damaged/],
  ['has no payload', '#d=1.', /damaged|cut short/],
  ['is not one of ours', '#section-3', /holds no design/],
  ['is noise', `#d=1.${noise(600).toString('base64url')}`, /damaged/],
  ['is noise outside base64', '#d=1.%00%ff<script>alert(1)</script>', /damaged/],
  ['is huge', `#d=1.${noise(150_000).toString('base64url')}`, /at most \d+ are read/],
  ['unpacks without end', packed(' '.repeat(8 << 20)), /far more than a design can hold/],
  ['has a newer form', whole.replace('#d=1.', '#d=2.'), /newer version/],
  ['holds a newer design', packed('{"version":2,"name":"Later"}'), /newer program/],
  ['holds no JSON', packed('name: "Sent"'), /not JSON/],
  ['holds a list', packed('[1,2,3]'), /must be a group of values/],
  ['holds a value out of bounds', packed('{"version":1,"supply":{"voltage":1e9}}'), /above 5 kV/],
  ['holds text for a number', packed('{"supply":{"voltage":"<b>310</b>"}}'), /must be a number/],
  ['reaches for a prototype', packed('{"__proto__":{"polluted":1}}'), /no part named/],
  ['contradicts itself', packed('{"version":1,"stack":{"joint":40}}'), /Earthed joint 40/],
  ['holds 5000 overrides', packed(`{"overrides":[${'{},'.repeat(4999)}{}]}`), /may have 48/],
];

async function turnTo(page: Page, hash: string) {
  await page.evaluate((fragment) => {
    location.hash = fragment;
  }, hash);
}

test('a link that cannot be read gives a sentence, and the demo runs', async ({ page }) => {
  for (const [what, hash, words] of BAD.filter((_, k) => k % 4 === 0)) {
    await test.step(what, async () => {
      // From nowhere, so that each link is read by a page that has just been loaded.
      await page.goto('about:blank');
      await page.goto(`/${hash}`);
      await expect(note(page)).toContainText(words);
      await expect(note(page)).toContainText('The page stays as it was.');
      await expect(nameOfDesign(page)).toHaveValue(DEMO);
      await expect(state(page)).toHaveText('Running');
      await engineGoesOn(page, 1);
    });
  }
});

test('a bad link followed on an open page leaves its design and its run alone', async ({
  page,
}) => {
  await page.goto(`/${whole}`);
  await expect(nameOfDesign(page)).toHaveValue('Sent');
  await engineGoesOn(page);
  // Held, so that so many notes do not wait for as many drawings.
  await driveLine(page).getByRole('button', { name: 'Hold' }).click();
  for (const [what, hash, words] of BAD) {
    await test.step(what, async () => {
      await turnTo(page, hash);
      await expect(note(page)).toContainText(words);
      await expect(nameOfDesign(page)).toHaveValue('Sent');
      await page.getByRole('button', { name: 'Dismiss' }).click();
      await expect(note(page)).toBeHidden();
    });
  }
  await expect(problem(page)).toBeHidden();
  await driveLine(page).getByRole('button', { name: 'Run', exact: true }).click();
  await engineGoesOn(page);
  expect(await page.evaluate(() => 'polluted' in {})).toBe(false);
  expect(await brokenFigures(page)).toEqual([]);

  // A good one still opens, from rest and without a past.
  await turnTo(page, await linkOf({ name: 'Next', sections: { count: 3 } }));
  await expect(nameOfDesign(page)).toHaveValue('Next');
  await expect(page.getByRole('button', { name: 'Undo' })).toBeDisabled();
  await engineGoesOn(page);
});

test('what a link carries is text on the page, never markup', async ({ page }) => {
  const name = '<img src=x onerror="document.title=`run`">';
  await page.goto(`/${await linkOf({ name, notes: '<script>document.title="run"</script>' })}`);
  await expect(nameOfDesign(page)).toHaveValue(name);
  await engineGoesOn(page);
  expect(await page.locator('img').count()).toBe(0);
  expect(await page.title()).not.toContain('run');
});
