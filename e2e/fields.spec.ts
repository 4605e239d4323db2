/**
 * Bad input: whatever is put into any field, the field says what is allowed and the last good
 * value stays in force, or the value is taken and the run goes on with finite readings or says
 * by a sentence why it cannot. Never a hang, a blank page or a number that is none.
 */
import type { Locator, Page } from '@playwright/test';
import {
  type CountField,
  type Field,
  formatQuantity,
  GROUPS,
  type Group,
  type QuantityField,
  WINDING_FIELDS,
} from '../sim-core/index.ts';
import {
  bay,
  brokenFigures,
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

const WORDS = ['', 'abc', 'NaN', 'Infinity', '-Infinity', '0', '-1', '1e30', '1e-30'] as const;

const BAYS = ['Supply', 'Bridge', 'Tank', 'Transformer', 'Stack', 'Output', 'Load'] as const;

/**
 * Designs in which, taken together, every value has a meaning and stands on its sheet; small, so
 * that they run fast.
 */
const EVERYTHING = {
  name: 'Everything fitted',
  supply: { earthing: 'leakage', currentLimit: 8 },
  tank: { seriesInductance: 40e-6, seriesCapacitance: 20e-6, parallelCapacitance: 1e-9 },
  transformer: { kneeFluxLinkage: 6.45e-3 },
  sections: { count: 2 },
  rectifier: { kind: 'ladder', stages: 2, capacitance: 10e-9, couplingCapacitance: 10e-9 },
  stack: { earth: 'floating' },
  load: { kind: 'constant-current' },
};
const DESIGNS: readonly { readonly raw: typeof EVERYTHING; readonly bays: readonly string[] }[] = [
  { raw: EVERYTHING, bays: BAYS },
  { raw: { ...EVERYTHING, name: 'Resistor', load: { kind: 'resistor' } }, bays: ['Load'] },
  {
    raw: { ...EVERYTHING, name: 'Shorted', load: { kind: 'short' }, stack: { earth: 'joint' } },
    bays: ['Load', 'Stack'],
  },
];

/** What became of a text that was entered into a field. */
interface Outcome {
  readonly typed: string;
  /** The sentence under the field; null when the text was taken. */
  readonly sentence: string | null;
  /** The value in force before and after, as assistive software hears it; '' when absent. */
  readonly before: string;
  readonly after: string;
  /** For a text that was taken: whether the run answered, its figures, and why it cannot go on. */
  readonly answered: boolean;
  readonly figures: readonly string[];
  readonly problem: string | null;
  /** Whether the value before could be put back. */
  readonly restored: boolean;
}

/** What a script in the page can ask of it at once. */
interface Questions {
  /** The texts of all cells of the ledger. */
  figures(): string[];
  /** Why the run failed, or the design or a value was refused; null while all is well. */
  trouble(): string | null;
  /** Press a button of the drive line, if it is there and can be pressed. */
  press(name: string): void;
  /** Wait for what the run makes of the present design; false when nothing comes for 15 s. */
  answer(): Promise<boolean>;
}

declare global {
  interface Window {
    questions: Questions;
  }
}

// A small window: less to draw, so that hundreds of entries take seconds.
test.use({ viewport: { width: 960, height: 600 } });

test.beforeEach(({ page }) =>
  page.addInitScript(() => {
    const drive = () => document.querySelector('[aria-label="Drive line"]') as HTMLElement;
    const figures = () =>
      [...document.querySelectorAll('[aria-label="Ledger"] td')].map(
        (cell) => cell.textContent ?? '',
      );
    // The counts of the engine stand last in the ledger: steps and four more.
    const stepsNow = () => figures().at(-5);
    const trouble = () => drive().querySelector('[role="alert"]')?.textContent ?? null;
    window.questions = {
      figures,
      trouble,
      press: (name) =>
        [...drive().querySelectorAll('button')].find((b) => b.textContent === name)?.click(),
      async answer() {
        const until = performance.now() + 15_000;
        let seen = stepsNow();
        let count = 0;
        let still = performance.now();
        while (performance.now() < until) {
          await new Promise((resolve) => setTimeout(resolve, 4));
          if (stepsNow() !== seen) {
            seen = stepsNow();
            still = performance.now();
            count++;
          }
          // The first result may have been under way before the change; the second has it. A run
          // that settled before it could be asked stands still.
          const settled = drive().querySelector('[role="status"]')?.textContent === 'Settled';
          const enough = settled && (count === 1 || performance.now() - still > 500);
          if (count >= 2 || enough || trouble() !== null) return true;
        }
        return false;
      },
    };
  }),
);

/** The places of the number fields of an open sheet. */
const numberFields = (open: Locator): Promise<readonly string[]> =>
  open.evaluate((element) =>
    [...element.querySelectorAll<HTMLElement>('.field:has([role="spinbutton"])')].map(
      (row) => row.dataset.place ?? '',
    ),
  );

/**
 * Enter each text into one field of an open sheet, as keys would; see what becomes of it and, when
 * it is taken, what the run makes of it; then put the value before back. Runs in the page at one
 * go, and the run is held but when it is asked: hundreds of questions from outside to a page that
 * draws all the time would take minutes.
 */
const enterAll = (open: Locator, place: string): Promise<Outcome[]> =>
  open.evaluate(
    async (sheetOfBay, { at, list }) => {
      const outcomes: Outcome[] = [];
      const rest = (time: number) => new Promise((resolve) => setTimeout(resolve, time));
      const row = () => sheetOfBay.querySelector<HTMLElement>(`[data-place="${at}"]`);
      const input = () => row()?.querySelector('input') as HTMLInputElement;
      const enter = async (text: string) => {
        input().focus();
        input().select();
        // The browser's own editing, with the events of typing.
        if (text === '') document.execCommand('delete');
        else document.execCommand('insertText', false, text);
        input().dispatchEvent(new KeyboardEvent('keydown', { key: 'Enter', bubbles: true }));
        await rest(0);
        return row()?.querySelector('[role="alert"]')?.textContent ?? null;
      };
      const inForce = () => input().getAttribute('aria-valuenow') ?? '';
      const { answer, figures, press, trouble } = window.questions;
      for (const typed of list) {
        const before = inForce();
        const sentence = await enter(typed);
        const after = inForce();
        const taken = sentence === null;
        let answered = true;
        if (taken && after !== before) {
          press('Run');
          answered = await answer();
        }
        const seen = { figures: taken ? figures() : [], problem: trouble() };
        const restored = !taken || (await enter(before)) === null;
        press('Hold');
        outcomes.push({ typed, sentence, before, after, answered, restored, ...seen });
      }
      return outcomes;
    },
    { at: place, list: [...WORDS] },
  );

/** The field behind a row, whether of a group or of a single section. */
function fieldAt(place: string): QuantityField | CountField {
  const parts = place.split('.');
  const fields: Group =
    parts[0] === 'overrides' ? WINDING_FIELDS : GROUPS[parts[0] as keyof typeof GROUPS];
  return fields[parts[parts.length - 1]] as QuantityField | CountField;
}

/** Whether the schema itself lets the field hold what the text says. */
function mayHold(field: QuantityField | CountField, typed: string): boolean {
  if (typed === '') return field.kind === 'quantity' && field.optional;
  const value = Number(typed);
  if (!Number.isFinite(value) || (field.kind === 'count' && !Number.isInteger(value))) return false;
  const zero = field.kind === 'quantity' && field.zero && value === 0;
  return zero || (value >= field.min && value <= field.max);
}

/** A refusal must name what was tried and what would do, and must leave the value in force. */
function expectRefusal(place: string, { typed, sentence, before, after }: Outcome) {
  const field = fieldAt(place);
  const unit = field.kind === 'quantity' ? field.unit : '';
  expect(after, 'the last good value stays in force').toBe(before);
  if (typed === '') return expect(sentence).toContain(`${field.label} must be a`);
  if (!Number.isFinite(Number(typed))) {
    return expect(sentence).toContain(`“${typed}” is not a number; write for example`);
  }
  // Rules between values (a dead time of half a period) name a limit of their own.
  if (mayHold(field, typed)) return expect(sentence).toMatch(/\d/);
  expect(sentence).toContain(field.label);
  const limits = [field.min, field.max].map((limit) => formatQuantity(limit, unit, 9));
  const named = limits.some((limit) => sentence?.includes(limit));
  expect(named, `“${sentence}” names ${limits.join(' or ')}`).toBe(true);
}

/** A text that was taken must be in force, and the run must go on or say why it cannot. */
function expectTaken(place: string, outcome: Outcome) {
  const { typed, after, answered, figures, problem: trouble, restored } = outcome;
  expect(mayHold(fieldAt(place), typed), `${place} may be “${typed}”`).toBe(true);
  if (typed === '') expect(after).toBe('');
  else expect(Number(after)).toBe(Number(typed));
  expect(answered, 'the run answers within 15 s').toBe(true);
  for (const figure of figures) expect(figure).toMatch(FIGURE);
  if (trouble !== null) expect(trouble.length, trouble).toBeGreaterThan(20);
  expect(restored, 'the value before can be put back').toBe(true);
}

const FIGURE = /^(–|−?[\d.\u2009]+( \S+)?)$/;

/** The run answers a design that was just put in force: figures in the ledger, or a sentence. */
async function expectAnswer(page: Page) {
  const { answered, figures, trouble } = await page.evaluate(async () => ({
    answered: await window.questions.answer(),
    figures: window.questions.figures(),
    trouble: window.questions.trouble(),
  }));
  expect(answered, 'the run answers within 15 s').toBe(true);
  for (const figure of figures) expect(figure).toMatch(FIGURE);
  if (trouble !== null) expect(trouble.length, trouble).toBeGreaterThan(20);
}

/** Every text into every number field of a sheet that has not been tried yet. */
async function tryFields(page: Page, title: string, seen: Set<string>) {
  const open = await openSheet(page, title);
  for (const place of await numberFields(open)) {
    if (seen.has(place)) continue;
    seen.add(place);
    await test.step(place, async () => {
      for (const outcome of await enterAll(open, place)) {
        await test.step(`“${outcome.typed}”`, () =>
          outcome.sentence === null ? expectTaken(place, outcome) : expectRefusal(place, outcome));
      }
    });
  }
  expect(await brokenFigures(page)).toEqual([]);
}

/** Hold and Run still answer, and the engine still computes or says why not. */
async function expectAlive(page: Page) {
  await driveLine(page).getByRole('button', { name: 'From rest' }).click();
  await expect(state(page)).toHaveText('Running');
  await engineGoesOn(page);
  await driveLine(page).getByRole('button', { name: 'Hold' }).click();
  await expect(state(page)).toHaveText('Held');
  await driveLine(page).getByRole('button', { name: 'Run', exact: true }).click();
  await expect(state(page)).toHaveText('Running');
  await expect(bay(page, 'Load')).toBeVisible();
}

test('no text in any number field breaks the page or the run', async ({ page }) => {
  test.setTimeout(150_000);
  const seen = new Set<string>();
  await page.goto('/');
  for (const { raw, bays } of DESIGNS) {
    await follow(page, raw);
    await expectAlive(page);
    await driveLine(page).getByRole('button', { name: 'Hold' }).click();
    for (const title of bays) await tryFields(page, title, seen);
  }
  // The values of one section alone stand on the transformer's sheet.
  const transformer = await openSheet(page, 'Transformer');
  await transformer.getByRole('combobox', { name: 'One section alone' }).selectOption('2');
  await tryFields(page, 'Transformer', seen);
  await expectAlive(page);
  await expect(problem(page)).toBeHidden();

  const numbers = (fields: Group, place: string) =>
    Object.entries(fields)
      .filter(([, field]) => field.kind === 'quantity' || field.kind === 'count')
      .map(([name]) => `${place}.${name}`);
  const all = [
    ...Object.entries(GROUPS).flatMap(([group, fields]) => numbers(fields, group)),
    ...numbers(WINDING_FIELDS, 'overrides.2'),
  ];
  expect([...seen].sort(), 'every number of the document was tried').toEqual(all.sort());
});

test('no text in the large numbers of the drive line breaks the page or the run', async ({
  page,
}) => {
  await page.goto('/');
  await follow(page, EVERYTHING);
  await engineGoesOn(page, 1);
  await driveLine(page).getByRole('button', { name: 'Hold' }).click();
  for (const [label, field] of [
    ['Bus voltage', GROUPS.supply.voltage],
    ['Drive frequency', GROUPS.bridge.frequency],
  ] as const) {
    const number = driveLine(page).getByRole('spinbutton', { name: label, exact: true });
    const input = driveLine(page).getByRole('textbox', { name: `${label}, new value` });
    const before = String(await number.getAttribute('aria-valuenow'));
    for (const typed of WORDS) {
      await test.step(`${label}: “${typed}”`, async () => {
        await number.press('Enter');
        await input.fill(typed);
        await input.press('Enter');
        if (typed === '') {
          // Nothing typed is nothing changed.
          await expect(number).toHaveAttribute('aria-valuenow', before);
        } else if (mayHold(field, typed)) {
          await expect(number).toHaveAttribute('aria-valuenow', String(Number(typed)));
          await driveLine(page).getByRole('button', { name: 'Run', exact: true }).click();
          await expectAnswer(page);
          await driveLine(page).getByRole('button', { name: 'Hold' }).click();
          await number.press('Enter');
          await input.fill(before);
          await input.press('Enter');
        } else {
          await expect(problem(page)).toContainText(/ is not a number| is below | is above /);
          await input.press('Escape');
          await expect(problem(page)).toBeHidden();
        }
        await expect(number).toHaveAttribute('aria-valuenow', before);
      });
    }
  }
  expect(await brokenFigures(page)).toEqual([]);
  await expectAlive(page);
});

test('every choice and every mark of the sheets can be made, and the run answers', async ({
  page,
}) => {
  test.setTimeout(90_000);
  await page.goto('/');
  await follow(page, EVERYTHING);
  const chosen: string[] = [];
  for (const title of BAYS) {
    const open = await openSheet(page, title);
    const rows = open.locator('[data-kind="choice"], [data-kind="flag"]');
    const places = await rows.evaluateAll((list) =>
      list.map((row) => (row as HTMLElement).dataset.place ?? ''),
    );
    for (const place of places) {
      const [group, name] = place.split('.') as [keyof typeof GROUPS, string];
      const field = (GROUPS[group] as Group)[name] as Field;
      const row = open.locator(`[data-place="${place}"]`);
      chosen.push(place);
      if (field.kind === 'choice') {
        const select = row.getByRole('combobox', { name: field.label });
        const before = await select.inputValue();
        for (const { value } of field.options) {
          await select.selectOption(value);
          await expectAnswer(page);
        }
        await select.selectOption(before);
      } else {
        const mark = row.getByRole('checkbox', { name: field.label });
        await mark.click();
        await expectAnswer(page);
        await mark.click();
      }
    }
  }
  const all = Object.entries(GROUPS).flatMap(([group, fields]) =>
    Object.entries(fields as Group)
      .filter(([, field]) => field.kind === 'choice' || field.kind === 'flag')
      .map(([name]) => `${group}.${name}`),
  );
  expect(chosen.sort()).toEqual(all.sort());
  await expectAlive(page);
});

const EXTREMES: readonly Parameters<typeof follow>[1][] = [
  { name: 'No load', load: { kind: 'open' } },
  {
    name: 'Nothing at the output',
    load: { kind: 'open' },
    output: { bleederResistance: null, probeResistance: null, cableCapacitance: 0 },
  },
  { name: 'Shorted output', load: { kind: 'short', shortResistance: 1e-3 } },
  {
    name: 'Shorted with nothing before it',
    load: { kind: 'short' },
    output: { tankResistance: 0 },
  },
  { name: 'No capacitor in the rectifiers', rectifier: { capacitance: null } },
  {
    name: 'No capacitor anywhere',
    supply: { busCapacitance: null },
    bridge: { outputCapacitance: 0 },
    sections: { ownCapacitance: 0, screenCapacitance: 0 },
    rectifier: { capacitance: null, diodeCapacitance: 0 },
    output: { probeCapacitance: 0, cableCapacitance: 0 },
  },
  { name: 'Floating stack', stack: { earth: 'floating' } },
  { name: 'Floating without stray', stack: { earth: 'floating', strayCapacitance: 0 } },
  { name: 'No bus capacitor', supply: { busCapacitance: null } },
  {
    name: 'Shorted bus',
    supply: { voltage: 5000, resistance: 1e-4 },
    bridge: { switchResistance: 1e-4 },
    transformer: { primaryLeakage: 1e-9, magnetisingInductance: 1e-7, kneeFluxLinkage: null },
  },
  { name: '1 section', sections: { count: 1 } },
  { name: '48 sections', sections: { count: 48 } },
  { name: '48 ladders of 12', sections: { count: 48 }, rectifier: { kind: 'ladder', stages: 12 } },
  { name: '1 Hz', bridge: { frequency: 1 } },
  { name: '1 MHz', bridge: { frequency: 1e6, deadTime: 0 } },
  { name: 'No volts', supply: { voltage: 0 } },
  { name: 'No rectifier', rectifier: { kind: 'none' } },
];

test('extreme designs run to finite readings or say why not, and the page stays in hand', async ({
  page,
}) => {
  test.setTimeout(120_000);
  await page.goto('/');
  for (const raw of EXTREMES) {
    await test.step(String(raw.name), async () => {
      await follow(page, raw);
      await expectAnswer(page);
      if ((await state(page).textContent()) === 'Running') {
        await driveLine(page).getByRole('button', { name: 'Hold' }).click();
        await expect(state(page)).toHaveText('Held');
        await driveLine(page).getByRole('button', { name: 'Run', exact: true }).click();
        await expect(state(page)).toHaveText(/Running|Settled/);
      }
      await expect(sheet(page, 'Supply')).toBeHidden();
    });
  }
  await follow(page, { name: 'Back to the ordinary' });
  await expectAlive(page);
});
