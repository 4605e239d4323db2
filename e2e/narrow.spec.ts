/** A phone: the main job by touch. */
import type { Page } from '@playwright/test';
import {
  bay,
  driveLine,
  engineGoesOn,
  expect,
  openSheet,
  reading,
  sheet,
  state,
  test,
} from './page.ts';

test.use({ viewport: { width: 390, height: 844 }, hasTouch: true, isMobile: true });

test('by touch: the drive turns, a bay opens, a value changes and the run follows', async ({
  page,
}) => {
  await page.goto('/');
  await engineGoesOn(page);
  const voltage = driveLine(page).getByRole('spinbutton', { name: 'Bus voltage', exact: true });
  await driveLine(page).getByRole('button', { name: 'Bus voltage, more' }).tap();
  await expect(voltage).toHaveAttribute('aria-valuenow', '320');
  // Any value is typed: the unit opens the field.
  await driveLine(page).getByRole('button', { name: 'Type the bus voltage' }).tap();
  const typed = driveLine(page).getByRole('textbox', { name: 'Bus voltage, new value' });
  await expect(typed).toBeFocused();
  await typed.fill('250');
  await typed.press('Enter');
  await expect(voltage).toHaveAttribute('aria-valuenow', '250');

  await bay(page, 'Load').tap();
  await expect(sheet(page, 'Load')).toBeVisible();
  const resistance = sheet(page, 'Load').getByRole('spinbutton', { name: 'Load resistance' });
  await resistance.tap();
  await resistance.fill('300k');
  await resistance.press('Enter');
  await expect(resistance).toHaveValue('300 kΩ');
  // I = U / R with the new R, in the readings.
  await expect
    .poll(
      async () => (await reading(page, 'outputVoltage')) / (await reading(page, 'outputCurrent')),
      {
        timeout: 15_000,
      },
    )
    .toBeCloseTo(300e3, -4);
  await bay(page, 'Load').tap();
  await expect(sheet(page, 'Load')).toBeHidden();

  await driveLine(page).getByRole('button', { name: 'Hold' }).tap();
  await expect(state(page)).toHaveText('Held');
  await page.getByRole('button', { name: 'Open', exact: true }).tap();
  await expect(page.getByRole('dialog', { name: 'Designs to open' })).toBeVisible();
});

/**
 * Controls whose place to press is less than 44 CSS pixels wide or high, found by pressing around
 * the middle: what counts is what takes the finger, not what is painted.
 */
const smallTargets = (page: Page) =>
  page.evaluate(() => {
    const LEAST = 44;
    const small: string[] = [];
    const controls = document.querySelectorAll<HTMLElement>(
      'button, input, select, textarea, a[href], summary, [role="slider"], [role="spinbutton"]',
    );
    for (const control of controls) {
      if (!control.checkVisibility() || control.closest('dialog:not([open])')) continue;
      const before = control.getBoundingClientRect();
      if (before.width === 0) continue;
      control.scrollIntoView({ block: 'center', inline: 'center' });
      const box = control.getBoundingClientRect();
      const x = box.left + box.width / 2;
      const y = box.top + box.height / 2;
      const label = (control as HTMLInputElement).labels?.[0];
      const mine = (dx: number, dy: number) => {
        const hit = document.elementFromPoint(x + dx, y + dy);
        return hit !== null && (control.contains(hit) || (label?.contains(hit) ?? false));
      };
      // How far from the middle the control still takes the finger, to either side.
      const reach = (dx: number, dy: number) => {
        let far = 0;
        while (far < LEAST && mine(dx * (far + 1), dy * (far + 1))) far++;
        return far;
      };
      const width = Math.max(box.width, reach(-1, 0) + reach(1, 0) + 1);
      const height = Math.max(box.height, reach(0, -1) + reach(0, 1) + 1);
      // A mark is set by its label as well.
      const words = (control as HTMLInputElement).type === 'checkbox' ? label : undefined;
      const wide = words?.getBoundingClientRect();
      if (wide && Math.min(wide.width, wide.height) >= LEAST - 0.5) continue;
      if (width < LEAST - 0.5 || height < LEAST - 0.5) {
        const name = control.getAttribute('aria-label') ?? control.textContent?.trim();
        small.push(
          `${control.tagName} “${name || label?.textContent || control.id}” ${width.toFixed(0)} × ${height.toFixed(0)}`,
        );
      }
    }
    return small;
  });

test('every control is at least 44 px wide and high under a finger', async ({ page }) => {
  await page.goto('/');
  await engineGoesOn(page, 1);
  await driveLine(page).getByRole('button', { name: 'Hold' }).tap();
  expect(await page.evaluate(() => matchMedia('(pointer: coarse)').matches)).toBe(true);
  const small = new Set(await smallTargets(page));
  for (const title of ['Transformer', 'Supply', 'Stack']) {
    await openSheet(page, title);
    for (const target of await smallTargets(page)) small.add(target);
  }
  expect([...small]).toEqual([]);
  await page.getByRole('button', { name: 'Open', exact: true }).tap();
  const dialog = page.getByRole('dialog', { name: 'Designs to open' });
  for (const button of await dialog.getByRole('button').all()) {
    const box = await button.boundingBox();
    // The file chooser itself is hidden; its label takes the finger.
    if (box && box.width <= 1) continue;
    expect(Math.min(box?.width ?? 0, box?.height ?? 0)).toBeGreaterThanOrEqual(43.5);
  }
});
