/** Everybody: without faults of structure and contrast, by keyboard alone, at any width, at rest. */
import AxeBuilder from '@axe-core/playwright';
import type { Locator, Page } from '@playwright/test';
import {
  bay,
  driveLine,
  engineGoesOn,
  expect,
  follow,
  openSheet,
  problem,
  sheet,
  state,
  test,
} from './page.ts';

const BAYS = ['Supply', 'Bridge', 'Tank', 'Transformer', 'Stack', 'Output', 'Load'] as const;

/** What the rules of axe find, in short: the rule and where. */
async function violations(page: Page, rules?: string[], within?: string): Promise<string[]> {
  const builder = new AxeBuilder({ page });
  if (within) builder.include(within);
  if (rules) builder.withRules(rules);
  const { violations: found, passes } = await builder.analyze();
  // A page that axe could not see would have no violations either.
  expect(passes.length).toBeGreaterThan(0);
  return found.flatMap(({ id, nodes }) =>
    nodes.map(({ html, failureSummary }) => `${id}: ${html.slice(0, 160)} ${failureSummary}`),
  );
}

/** The page with its run held, so that what is checked stands still. */
async function openHeld(page: Page) {
  await page.goto('/');
  await engineGoesOn(page, 3);
  await driveLine(page).getByRole('button', { name: 'Hold' }).click();
  await expect(state(page)).toHaveText('Held');
}

/** Close whatever sheet is open. */
async function closeSheets(page: Page) {
  for (const title of BAYS) {
    if (await sheet(page, title).isVisible()) await bay(page, title).click();
  }
}

for (const colorScheme of ['light', 'dark'] as const) {
  // Structure is the same in both themes; contrast is not.
  const rules = colorScheme === 'dark' ? ['color-contrast', 'link-in-text-block'] : undefined;

  test(`the run page, every bay and every dialog are without violations, ${colorScheme}`, async ({
    page,
  }) => {
    test.setTimeout(90_000);
    await page.emulateMedia({ colorScheme });
    await openHeld(page);
    await closeSheets(page);
    expect(await violations(page, rules), 'run page').toEqual([]);
    for (const title of BAYS) {
      const open = await openSheet(page, title);
      // A refusal, with its sentence.
      const first = open.getByRole('spinbutton').first();
      await first.fill('-1e9');
      await first.press('Enter');
      await expect(open.getByRole('alert').first()).toBeVisible();
      expect(await violations(page, rules, '#bay-sheet'), `bay ${title}`).toEqual([]);
      await first.press('Escape');
    }
    for (const [button, dialog] of [
      ['Open', 'Designs to open'],
      ['Cautions', /can kill/],
    ] as const) {
      await page.getByRole('button', { name: button, exact: true }).click();
      await expect(page.getByRole('dialog', { name: dialog })).toBeVisible();
      expect(await violations(page, rules, 'dialog[open]'), `dialog ${button}`).toEqual([]);
      await page.keyboard.press('Escape');
      await expect(page.getByRole('dialog')).toBeHidden();
    }
  });
}

test('a narrow page with a bay open is without violations', async ({ page }) => {
  await page.setViewportSize({ width: 390, height: 844 });
  await openHeld(page);
  await openSheet(page, 'Stack');
  expect(await violations(page)).toEqual([]);
});

test('with a note, a problem and a refusal on the page there are no violations', async ({
  page,
}) => {
  await page.goto('/#d=1.broken');
  await engineGoesOn(page, 1);
  const number = driveLine(page).getByRole('spinbutton', { name: 'Drive frequency', exact: true });
  await number.press('Enter');
  await page.keyboard.press('ControlOrMeta+a');
  await page.keyboard.type('9 MHz');
  await page.keyboard.press('Enter');
  await expect(problem(page)).toBeVisible();
  await expect(page.getByRole('complementary', { name: 'Note' })).toBeVisible();
  expect(await violations(page)).toEqual([]);
});

test('every main control is reached by Tab alone, and shows that it has the focus', async ({
  page,
}) => {
  await openHeld(page);
  await page.getByRole('button', { name: 'I have read this' }).click();
  await closeSheets(page);
  await page.evaluate(() => (document.activeElement as HTMLElement | null)?.blur());

  /** Controls that are reached, and those of them that show no focus. */
  const reached = new Set<Locator>();
  const path = page.getByRole('region', { name: 'Power path' });
  const wanted: Record<string, Locator> = {
    'name of the design': page.getByRole('textbox', { name: 'Name of the design' }),
    'copy link': page.getByRole('button', { name: 'Copy link' }),
    open: page.getByRole('button', { name: 'Open', exact: true }),
    theme: page.getByRole('button', { name: 'Light / dark' }),
    cautions: page.getByRole('button', { name: 'Cautions' }),
    'bus voltage': driveLine(page).getByRole('spinbutton', { name: 'Bus voltage', exact: true }),
    frequency: driveLine(page).getByRole('spinbutton', { name: 'Drive frequency', exact: true }),
    'phase shift': driveLine(page).getByRole('spinbutton', { name: 'Phase shift' }),
    run: driveLine(page).getByRole('button', { name: 'Run', exact: true }),
    'from rest': driveLine(page).getByRole('button', { name: 'From rest' }),
    section: page.getByRole('region', { name: 'Lanes' }).getByRole('combobox'),
    cursor: page.getByRole('slider', { name: /^Cursor/ }),
    ledger: page.getByRole('button', { name: 'Output voltage, mean' }),
    earth: path.getByRole('slider'),
  };
  for (const title of BAYS) wanted[title] = bay(page, title);
  const unmarked: string[] = [];
  const names = Object.keys(wanted);
  const handles = await Promise.all(names.map((name) => wanted[name].first().elementHandle()));
  for (let k = 0; k < 90 && reached.size < names.length; k++) {
    await page.keyboard.press('Tab');
    const seen = await page.evaluate((elements) => {
      const active = document.activeElement as HTMLElement;
      const { outlineStyle, outlineWidth } = getComputedStyle(active);
      const inner = active.querySelector('.grip');
      const ring = outlineStyle !== 'none' && Number.parseFloat(outlineWidth) >= 2;
      const grip = inner !== null && getComputedStyle(inner).stroke !== 'none';
      return { at: elements.indexOf(active), marked: ring || grip, is: active.outerHTML };
    }, handles);
    // Past the last control the browser's own come first; the page has the focus then.
    if (!seen.marked && seen.is.slice(0, 5) !== '<body') unmarked.push(seen.is.slice(0, 120));
    if (seen.at >= 0) reached.add(wanted[names[seen.at]]);
  }
  expect(names.filter((name) => !reached.has(wanted[name]))).toEqual([]);
  expect(unmarked).toEqual([]);
});

test('no width from a small phone to a wide screen scrolls sideways', async ({ page }) => {
  await page.goto('/');
  await follow(page, { name: 'Widest', sections: { count: 48 } });
  await driveLine(page).getByRole('button', { name: 'Hold' }).click();
  for (const width of [360, 390, 640, 899, 1024, 1247, 1248, 1440, 2560]) {
    await page.setViewportSize({ width, height: 800 });
    for (const title of ['Transformer', 'Load']) {
      await openSheet(page, title);
      const excess = () =>
        page.evaluate(() => {
          const { scrollWidth, clientWidth } = document.documentElement;
          return scrollWidth - clientWidth;
        });
      // The drawing follows a new width a frame later.
      await expect.poll(excess, `${title} open at ${width} px`).toBeLessThanOrEqual(0);
    }
  }
});

test('no element covers the lanes, whatever bay is open and however the page was resized', async ({
  page,
}) => {
  await openHeld(page);
  const overlap = () =>
    page.evaluate(() => {
      const path = document.querySelector('[aria-label="Power path"]') as HTMLElement;
      const lanes = document.querySelector('[aria-label="Lanes"]') as HTMLElement;
      const drawn = [...path.querySelectorAll('svg *')].map(
        (e) => e.getBoundingClientRect().bottom,
      );
      return Math.max(...drawn) - lanes.getBoundingClientRect().top;
    });
  for (const [width, height] of [
    [1440, 900],
    [1440, 1600],
    [1440, 700],
    [1024, 768],
  ]) {
    await page.setViewportSize({ width, height });
    for (const title of ['Transformer', 'Bridge', 'Load']) {
      await openSheet(page, title);
      await expect.poll(overlap, `${title} open at ${width} × ${height}`).toBeLessThanOrEqual(0);
    }
  }
});

test('who asked for less motion sees none', async ({ page }) => {
  await page.emulateMedia({ reducedMotion: 'reduce' });
  await page.goto('/');
  await engineGoesOn(page, 1);
  await openSheet(page, 'Load');
  await page.getByRole('button', { name: 'Open', exact: true }).click();
  const moving = await page.evaluate(() => [
    ...document.getAnimations().map((animation) => String(animation)),
    ...[...document.querySelectorAll('*')]
      .filter((element) => {
        const { transitionDuration, animationName, scrollBehavior } = getComputedStyle(element);
        return (
          !/^0s(, 0s)*$/.test(transitionDuration) ||
          animationName !== 'none' ||
          scrollBehavior === 'smooth'
        );
      })
      .map((element) => element.outerHTML.slice(0, 120)),
    ...[...document.querySelectorAll('animate, animateTransform, animateMotion, marquee')].map(
      (element) => element.tagName,
    ),
  ]);
  expect(moving).toEqual([]);
});
