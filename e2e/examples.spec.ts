/** The shelf: every invented design opens, runs and reads. */
import type { Page } from '@playwright/test';
import { EXAMPLES } from '../sim-core/index.ts';
import {
  brokenFigures,
  engineGoesOn,
  expect,
  nameOfDesign,
  note,
  openSheet,
  problem,
  readings,
  state,
  test,
} from './page.ts';

const shelf = (page: Page) => page.getByRole('dialog', { name: 'Designs to open' });

async function takeFromShelf(page: Page, name: string) {
  await page.getByRole('button', { name: 'Open', exact: true }).click();
  await shelf(page).getByRole('button', { name }).click();
  await expect(shelf(page)).toBeHidden();
  await expect(nameOfDesign(page)).toHaveValue(name);
}

test('every example opens, computes and shows finite readings', async ({ page }) => {
  await page.goto('/');
  // The demo last: it is the one that is there already.
  for (const { id, design } of [...EXAMPLES].reverse()) {
    await test.step(id, async () => {
      await takeFromShelf(page, design.name);
      await expect
        .poll(async () => (await readings(page)).outputVoltage, { timeout: 15_000 })
        .toBeGreaterThan(0);
      await engineGoesOn(page);
      // All that has a meaning before the steady state is there.
      for (const [name, value] of Object.entries(await readings(page))) {
        if (name !== 'settledDistance') expect(value, name).not.toBeNull();
      }
      expect(await brokenFigures(page)).toEqual([]);
      await expect(problem(page)).toBeHidden();
      await expect(state(page)).toHaveText('Running');
    });
  }
});

test('one step of Undo brings back the design that an example took the place of', async ({
  page,
}) => {
  const [first, second] = EXAMPLES;
  await page.goto('/');
  const load = await openSheet(page, 'Load');
  const resistance = load.getByRole('spinbutton', { name: 'Load resistance' });
  await resistance.fill('2.5M');
  await resistance.press('Enter');
  await takeFromShelf(page, second.design.name);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(nameOfDesign(page)).toHaveValue(first.design.name);
  await expect(resistance).toHaveValue('2.5 MΩ');
});

test('a saved file opens again as the same design, and a damaged one is refused by a sentence', async ({
  page,
}) => {
  await page.goto('/');
  await takeFromShelf(page, EXAMPLES[2].design.name);
  const open = page.getByRole('button', { name: 'Open', exact: true });
  await open.click();
  const saving = page.waitForEvent('download');
  await shelf(page).getByRole('button', { name: 'Save this design as a file' }).click();
  const file = await (await saving).path();

  await page.reload();
  await takeFromShelf(page, EXAMPLES[0].design.name);
  await open.click();
  const chooser = page.getByLabel('Open a design file');
  await chooser.setInputFiles(file);
  await expect(nameOfDesign(page)).toHaveValue(EXAMPLES[2].design.name);
  await engineGoesOn(page);

  await open.click();
  await chooser.setInputFiles({
    name: '<img src=x onerror=alert(1)>.json',
    mimeType: 'application/json',
    buffer: Buffer.from('{"version": 1, "supply": {"voltage": 1e999}}'),
  });
  await expect(note(page)).toContainText('The page stays as it was.');
  await expect(note(page)).toContainText('<img src=x onerror=alert(1)>.json');
  await expect(nameOfDesign(page)).toHaveValue(EXAMPLES[2].design.name);
  await engineGoesOn(page);
});
