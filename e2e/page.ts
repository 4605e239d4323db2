/**
 * The page as people and their assistive software meet it: regions, roles, labels and words.
 * Every test that uses `test` from here fails on an error in the console (breaches of the
 * content-security policy are among them) and on an exception that nothing caught.
 */
import { test as base, expect, type Locator, type Page } from '@playwright/test';
import { encodeLink } from '../app/document/link.ts';
import {
  checkDesign,
  type Design,
  PREFIXES,
  READINGS,
  type ReadingName,
} from '../sim-core/index.ts';

export const test = base.extend<{ noComplaints: undefined }>({
  noComplaints: [
    async ({ context }, use) => {
      const complaints: string[] = [];
      context.on('console', (message) => {
        if (message.type() === 'error') complaints.push(message.text());
      });
      context.on('weberror', (error) => complaints.push(error.error().stack ?? ''));
      await use(undefined);
      expect(complaints, 'errors in the console and exceptions').toEqual([]);
    },
    { auto: true },
  ],
});

export const driveLine = (page: Page): Locator => page.getByRole('region', { name: 'Drive line' });

/** What the run is doing, in a word: Running, Held, Settled, Failed. */
export const state = (page: Page): Locator => driveLine(page).getByRole('status');

/** The sentence about a link or a file that stands under the strip. */
export const note = (page: Page): Locator =>
  page.getByRole('complementary', { name: 'Note' }).getByRole('alert');

/** Why the run failed or the design was refused. */
export const problem = (page: Page): Locator => driveLine(page).getByRole('alert');

export const nameOfDesign = (page: Page): Locator =>
  page.getByRole('textbox', { name: 'Name of the design' });

/** The button over the drawing that opens a bay. */
export const bay = (page: Page, title: string): Locator =>
  page.getByRole('region', { name: 'Power path' }).getByRole('button', {
    // Its readings follow the title in the same name.
    name: new RegExp(`^${title}\\b`),
    expanded: undefined,
  });

export const sheet = (page: Page, title: string): Locator =>
  page.getByRole('region', { name: `${title}, values` });

/** The sheet of a bay, opened if it is not. */
export async function openSheet(page: Page, title: string): Promise<Locator> {
  if (!(await sheet(page, title).isVisible())) await bay(page, title).click();
  await expect(sheet(page, title)).toBeVisible();
  return sheet(page, title);
}

/** A whole number from a row of the ledger, whose thousands stand apart. */
export async function steps(page: Page): Promise<number> {
  const cell = page.getByRole('row', { name: /^Steps [\d\u2009–no]/ }).getByRole('cell');
  return Number(((await cell.textContent()) ?? '').replaceAll('\u2009', '')) || 0;
}

/** Wait until the engine has handed over results `times` more. */
export async function engineGoesOn(page: Page, times = 2): Promise<void> {
  for (let k = 0; k < times; k++) {
    const before = await steps(page);
    await expect.poll(() => steps(page), { intervals: [20], timeout: 15_000 }).not.toBe(before);
  }
}

/** "60.04 kV" in SI units; NaN for what is no figure. */
function inUnits(text: string, unit: string): number {
  const [figure, symbol = ''] = text.split(' ');
  const prefix = [...PREFIXES].find(([, letter]) => letter + unit === symbol);
  return prefix ? Number(`${figure.replace('−', '-')}e${prefix[0]}`) : Number.NaN;
}

/** Every reading of the ledger as it stands at one moment; null where there is none. */
export async function readings(page: Page): Promise<Record<ReadingName, number | null>> {
  const rows = await page
    .getByRole('region', { name: 'Ledger' })
    .evaluate((ledger) =>
      [...ledger.querySelectorAll('tr')].map((row) => [
        row.querySelector('th')?.textContent ?? '',
        row.querySelector('td')?.textContent ?? '',
      ]),
    );
  const texts = new Map(rows as [string, string][]);
  const entries = Object.entries(READINGS).map(([name, { label, unit }]) => {
    const text = texts.get(label);
    if (text === undefined) throw new Error(`The ledger has no row “${label}”.`);
    if (text === '–') return [name, null];
    const value = inUnits(text, unit);
    expect(Number.isFinite(value), `${label}: “${text}” is a figure in ${unit}`).toBe(true);
    return [name, value];
  });
  return Object.fromEntries(entries);
}

/** One reading, in SI units; 0 while there is none. */
export async function reading(page: Page, name: ReadingName): Promise<number> {
  return (await readings(page))[name] ?? 0;
}

/** The fragment of a link that opens a design, given by what differs from the defaults. */
export async function linkOf(raw: unknown): Promise<string> {
  const checked = checkDesign(raw);
  if (!checked.ok) throw new Error(checked.problem.message);
  return encodeLink(checked.value);
}

/** Open a design by the address, in the page that is already open. */
export async function follow(page: Page, raw: Partial<Record<keyof Design, unknown>>) {
  const link = await linkOf(raw);
  const name = String(raw.name);
  await page.evaluate((hash) => {
    location.hash = hash;
  }, link);
  await expect(nameOfDesign(page)).toHaveValue(name);
}

/**
 * What on the page is not a figure although it should be: "NaN" and "Infinity" in its text, its
 * fields or what it says to assistive software. Sentences that quote what was typed are left out.
 */
export async function brokenFigures(page: Page): Promise<readonly string[]> {
  return page.evaluate(() => {
    const broken = /NaN|Infinity|undefined|\[object|∞/;
    const found: string[] = [];
    const walker = document.createTreeWalker(document.body, NodeFilter.SHOW_ALL);
    for (let node: Node | null = walker.currentNode; node; node = walker.nextNode()) {
      if (node.parentElement?.closest('[role="alert"]')) continue;
      if (node instanceof Element) {
        for (const { name, value } of node.attributes) {
          if (broken.test(value)) found.push(`${node.tagName} ${name}="${value}"`);
        }
        // A refused text stays in its field, to be mended.
        const refused = node.getAttribute('aria-invalid') !== null;
        if (node instanceof HTMLInputElement && !refused && broken.test(node.value)) {
          found.push(`field “${node.value}”`);
        }
      } else if (broken.test(node.nodeValue ?? '')) found.push(node.nodeValue ?? '');
    }
    return found;
  });
}

export { expect };
