/**
 * The newcomer's path: open the page, watch the demo charge up, turn what one turns all day,
 * change a value, send the link.
 */
import type { Page } from '@playwright/test';
import {
  bay,
  driveLine,
  engineGoesOn,
  expect,
  follow,
  nameOfDesign,
  reading,
  readings,
  sheet,
  state,
  steps,
  test,
} from './page.ts';

/** A supply that settles within a few milliseconds of its own time, so that a test can wait. */
const LIGHT = {
  name: 'Light supply',
  sections: { count: 1 },
  rectifier: { capacitance: 1e-9 },
  output: { cableCapacitance: 0 },
  load: { resistance: 1e6 },
};

const history = (page: Page) => page.getByRole('img', { name: /^From rest to/ });

/** Seconds of the run that the words of the history strip name. */
function lengthInWords(words: string): number {
  const [, figure, unit] = /^From rest to ([\d.]+) (µs|ms|s);/.exec(words) ?? [];
  return Number(figure) * { µs: 1e-6, ms: 1e-3, s: 1 }[unit as 'µs' | 'ms' | 's'];
}

const lengthOfHistory = async (page: Page): Promise<number> =>
  lengthInWords((await history(page).getAttribute('aria-label')) ?? '');

test('opened without a link, the page charges a supply, settles by itself and stops computing', async ({
  page,
}) => {
  test.setTimeout(120_000);
  // Kept in the page from the start: seen from outside, a busy machine would miss the first volts.
  await page.addInitScript(() => {
    const words: string[] = [];
    Object.assign(window, { words });
    new MutationObserver((changes) => {
      for (const { target } of changes) {
        const label = (target as Element).getAttribute('aria-label') ?? '';
        if (label.startsWith('From rest to')) words.push(label);
      }
    }).observe(document, { subtree: true, attributeFilter: ['aria-label'] });
  });
  await page.goto('/');
  await expect(state(page)).toHaveText('Running');
  await expect(state(page)).toHaveText('Settled', { timeout: 100_000 });
  await expect(driveLine(page).getByText(/^after .+ from steady$/)).toBeVisible();
  await expect(page.getByRole('region', { name: 'Ledger' })).toContainText('Readings settled');
  // The demo is a 60 kV supply of 1.2 kW.
  const settled = await readings(page);
  expect(settled.outputVoltage).toBeGreaterThan(55e3);
  expect(settled.outputVoltage).toBeLessThan(65e3);
  // From next to nothing, upwards, over a history that only grows.
  const words = await page.evaluate(() => (window as unknown as { words: string[] }).words);
  const volts = words.map((label) => {
    const [, figure, unit] = /output voltage now ([\d.]+) (k?V)/.exec(label) ?? [];
    return Number(figure) * (unit === 'kV' ? 1e3 : 1);
  });
  expect(volts.length).toBeGreaterThan(10);
  expect(volts[0]).toBeLessThan(30e3);
  for (let k = 1; k < volts.length; k++) {
    // The charging stack may ring; it never falls back far.
    expect(volts[k]).toBeGreaterThan(0.9 * volts[k - 1]);
  }
  const lengths = words.map(lengthInWords);
  expect(lengths).toEqual([...lengths].sort((one, other) => one - other));
  expect(new Set(lengths).size).toBeGreaterThan(10);
  const done = await steps(page);
  await page.waitForTimeout(1000);
  expect(await steps(page)).toBe(done);
  await expect(state(page)).toHaveText('Settled');
});

test('bus voltage and frequency turn by keyboard, and the running supply follows', async ({
  page,
}) => {
  await page.goto('/');
  await follow(page, LIGHT);
  await expect(state(page)).toHaveText('Settled', { timeout: 30_000 });
  const before = await readings(page);
  const stepsBefore = await steps(page);

  const voltage = page.getByRole('spinbutton', { name: 'Bus voltage', exact: true }).first();
  await voltage.focus();
  await page.keyboard.press('ArrowUp');
  await page.keyboard.press('ArrowUp');
  await expect(voltage).toHaveAttribute('aria-valuenow', '330');
  await expect(state(page)).toHaveText('Settled', { timeout: 30_000 });
  // It woke up, and went on rather than starting over.
  expect(await steps(page)).toBeGreaterThan(stepsBefore);
  await expect(history(page)).toHaveAttribute('aria-label', /Bus voltage 310 V → 330 V/);
  // The output of a driven rectifier is proportional to its bus, but for the diodes' drops.
  const raised = await readings(page);
  expect((raised.outputVoltage ?? 0) / (before.outputVoltage ?? 1)).toBeCloseTo(330 / 310, 2);

  const frequency = page.getByRole('spinbutton', { name: 'Drive frequency', exact: true }).first();
  await frequency.focus();
  await page.keyboard.press('ArrowDown');
  await page.keyboard.press('ArrowDown');
  await page.keyboard.press('ArrowDown');
  await page.keyboard.press('ArrowDown');
  await expect(frequency).toHaveAttribute('aria-valuenow', '21600');
  await expect
    .poll(() => reading(page, 'ripplePeakToPeak'), { timeout: 30_000 })
    .not.toBe(raised.ripplePeakToPeak);
  await expect(state(page)).toHaveText('Settled', { timeout: 30_000 });
  // A slower drive leaves the capacitors alone for longer: more ripple.
  expect((await readings(page)).ripplePeakToPeak).toBeGreaterThan(raised.ripplePeakToPeak ?? 0);

  // One typed value, as people write it.
  await frequency.press('Enter');
  await page.keyboard.type('25k');
  await page.keyboard.press('Enter');
  await expect(frequency).toHaveAttribute('aria-valuenow', '25000');
  await expect(frequency).toBeFocused();
});

test('Hold stops the clock, Run lets it go on, From rest begins again', async ({ page }) => {
  await page.goto('/');
  await engineGoesOn(page);
  await page.getByRole('button', { name: 'Hold' }).press('Enter');
  await expect(state(page)).toHaveText('Held');
  await page.waitForTimeout(300);
  const held = await steps(page);
  await page.waitForTimeout(500);
  expect(await steps(page)).toBe(held);
  await page.getByRole('button', { name: 'Run' }).press('Enter');
  await expect(state(page)).toHaveText('Running');
  await engineGoesOn(page);
  expect(await steps(page)).toBeGreaterThan(held);

  const length = await lengthOfHistory(page);
  await page.getByRole('button', { name: 'From rest' }).press('Enter');
  await expect.poll(() => lengthOfHistory(page), { intervals: [10] }).toBeLessThan(length);
});

test('a bay opens by keyboard; its values take what people type, refuse what cannot be, and are undone', async ({
  page,
}) => {
  await page.goto('/');
  await bay(page, 'Load').focus();
  await page.keyboard.press('Enter');
  await expect(bay(page, 'Load')).toHaveAttribute('aria-expanded', 'true');
  const resistance = sheet(page, 'Load').getByRole('spinbutton', { name: 'Load resistance' });
  await expect(resistance).toHaveValue('3 MΩ');

  // With its unit, and with the prefix where the decimal point would be (IEC 60062).
  await resistance.focus();
  await page.keyboard.press('ControlOrMeta+a');
  await page.keyboard.type('4M7');
  await page.keyboard.press('Enter');
  await expect(resistance).toHaveValue('4.7 MΩ');
  await bay(page, 'Tank').press('Enter');
  const inductor = sheet(page, 'Tank').getByRole('spinbutton', {
    name: 'Series inductor',
    exact: true,
  });
  await inductor.fill('0.15 mH');
  await inductor.press('Enter');
  await expect(inductor).toHaveValue('150 µH');
  await expect(inductor).toHaveAttribute('aria-valuenow', '0.00015');
  await engineGoesOn(page);

  // Escape restores what was in force.
  await inductor.fill('15 mH');
  await inductor.press('Escape');
  await expect(inductor).toHaveValue('150 µH');
  await expect(sheet(page, 'Tank')).toBeVisible();

  // What is out of range is said, with the limit, and the old value stays in force.
  await inductor.fill('15 kH');
  await inductor.press('Enter');
  await expect(inductor).toHaveAttribute('aria-invalid', 'true');
  const sentence = sheet(page, 'Tank').getByRole('alert');
  await expect(sentence).toContainText('Series inductor 15 kH is above 10 H');
  await expect(sentence).toContainText('Still 150 µH.');
  await expect(inductor).toHaveAttribute('aria-valuenow', '0.00015');
  await engineGoesOn(page);
  await expect(inductor).toHaveValue('15 kH');
  await inductor.press('Escape');
  await expect(sentence).toBeHidden();
  await expect(inductor).toHaveValue('150 µH');

  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(inductor).toHaveValue('40 µH');
  await page.getByRole('button', { name: 'Redo' }).click();
  await expect(inductor).toHaveValue('150 µH');
});

test('a copied link opens the same design in a new page, with the same readings', async ({
  page,
  context,
}) => {
  await context.grantPermissions(['clipboard-read', 'clipboard-write']);
  await page.goto('/');
  await follow(page, LIGHT);
  await bay(page, 'Load').click();
  const resistance = sheet(page, 'Load').getByRole('spinbutton', { name: 'Load resistance' });
  await resistance.fill('820k');
  await resistance.press('Enter');
  await nameOfDesign(page).fill('Ünïted “tests” <b>& co</b>');
  await nameOfDesign(page).press('Enter');
  await page.getByRole('button', { name: 'Copy link' }).click();
  await expect(page.getByRole('button', { name: 'Copied' })).toBeVisible();
  const link = await page.evaluate(() => navigator.clipboard.readText());
  expect(link).toContain('#d=1.');
  expect(page.url(), 'the address bar holds the same link').toBe(link);
  await expect(state(page)).toHaveText('Settled', { timeout: 30_000 });
  const sent = await readings(page);
  const shown = await page.evaluate(() => document.title);

  const received = await context.newPage();
  await received.goto(link);
  await expect(nameOfDesign(received)).toHaveValue('Ünïted “tests” <b>& co</b>');
  await expect(state(received)).toHaveText('Settled', { timeout: 30_000 });
  expect(await received.title()).toBe(shown);
  const got = await readings(received);
  // One ran through a change of load and the other from rest: they meet in the steady state.
  for (const name of [
    'outputVoltage',
    'outputPeak',
    'outputCurrent',
    'primaryPeak',
    'primaryRms',
    'fluxPeak',
    'busVoltage',
    'supplyCurrent',
    'supplyPower',
    'loadPower',
    'efficiency',
  ] as const) {
    const there = got[name] ?? Number.NaN;
    const here = sent[name] ?? Number.NaN;
    expect(Math.abs(there - here), `${name}: ${here} sent, ${there} received`).toBeLessThanOrEqual(
      1e-3 * Math.abs(here),
    );
  }
});
