/**
 * How fast the page is: measured, told in the report and kept in .results/speed.json. The bounds
 * that fail a run are three times the targets, so that a busy machine does not; the targets
 * themselves stand beside the figures.
 */
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { cpus, loadavg } from 'node:os';
import { fileURLToPath } from 'node:url';
import type { Page, TestInfo } from '@playwright/test';
import { driveLine, engineGoesOn, expect, reading, state, test } from './page.ts';

const RESULTS = fileURLToPath(new URL('../.results/speed.json', import.meta.url));

/** Bounds are this many times the target, and more where several programs share each core. */
const slack = () => 3 * Math.max(1, loadavg()[0] / cpus().length);

interface Measured {
  readonly what: string;
  readonly unit: 'ms' | 'MB';
  readonly value: number;
  readonly target: number;
  readonly [detail: string]: unknown;
}

/** Tell a figure in the report and on the console, keep it, and hold it to its bound. */
function report(info: TestInfo, measured: Measured) {
  const { what, unit, value, target } = measured;
  const text = `${what}: ${value.toFixed(1)} ${unit} (target ${target} ${unit}; load ${loadavg()[0].toFixed(1)} on ${cpus().length} cores)`;
  info.annotations.push({ type: 'measured', description: text });
  console.log(text);
  let kept: Record<string, unknown> = {};
  try {
    kept = JSON.parse(readFileSync(RESULTS, 'utf8'));
  } catch {
    // The first figure of this machine.
  }
  mkdirSync(fileURLToPath(new URL('.', `file://${RESULTS}`)), { recursive: true });
  const entry = { ...measured, load: loadavg()[0], cores: cpus().length };
  writeFileSync(RESULTS, `${JSON.stringify({ ...kept, [what]: entry }, null, 2)}\n`);
  expect(value, what).toBeLessThanOrEqual(slack() * target);
}

/** The value below which `share` of the list lies. */
function quantile(list: readonly number[], share: number): number {
  const sorted = [...list].sort((a, b) => a - b);
  return sorted[Math.min(sorted.length - 1, Math.ceil(share * sorted.length) - 1)];
}

/** What the watch in the page has seen; times are milliseconds since navigation began. */
interface Seen {
  /** End of the frame in which the lanes first showed samples. */
  firstWaveform: number | null;
  /**
   * For each edit, milliseconds from its key stroke until its value was sent to the worker, until
   * the worker had taken it, until samples computed with it were back, and until the end of the
   * frame that shows them.
   */
  readonly edits: (readonly [sent: number, taken: number, back: number, shown: number])[];
  readonly longTasks: number[];
}

declare global {
  interface Window {
    seen: Seen;
  }
}

/**
 * Watches the page from before its first script. An edit is followed through what the page itself
 * does: the key stroke; the message that brings its value to the worker and the worker's answer;
 * the first message after it that carries a detail (the worker drops all samples that are older
 * than the change); the frame in which the lanes write the stretch of time they have drawn; and
 * the end of that frame. Nothing of the page is changed.
 */
async function watch(page: Page) {
  await page.addInitScript(() => {
    const seen: Seen = { firstWaveform: null, edits: [], longTasks: [] };
    window.seen = seen;
    new PerformanceObserver((list) => {
      for (const entry of list.getEntries()) seen.longTasks.push(entry.duration);
    }).observe({ type: 'longtask', buffered: true });

    /** Since the key stroke: sent and not answered, answered, or its samples are on the page. */
    let edit: { at: number; call: string; stages: number[] } | null = null;
    let pressed = 0;
    addEventListener(
      'keydown',
      (event) => {
        if (event.key === 'ArrowUp' || event.key === 'ArrowDown') pressed = event.timeStamp;
      },
      true,
    );
    const post = Worker.prototype.postMessage;
    Worker.prototype.postMessage = function (message: { id?: string; path?: string[] }, ...rest) {
      if (message.path?.[0] === 'change' && pressed > 0) {
        edit = { at: pressed, call: message.id ?? '', stages: [performance.now() - pressed] };
        pressed = 0;
      }
      return Reflect.apply(post, this, [message, ...rest]);
    };
    const Original = Worker;
    window.Worker = class extends Original {
      constructor(...words: ConstructorParameters<typeof Worker>) {
        super(...words);
        this.addEventListener('message', ({ data }) => {
          const stage = edit?.stages.length;
          if ((stage === 1 && data.id === edit?.call) || (stage === 2 && data.value?.detail)) {
            edit?.stages.push(performance.now() - edit.at);
          }
        });
      }
    };

    const frameEnd = new MessageChannel();
    const ends: (() => void)[] = [];
    frameEnd.port1.onmessage = () => {
      for (const end of ends.splice(0)) end();
    };
    const onDrawn = () => {
      const drawn = edit?.stages.length === 3 ? edit : null;
      if (drawn) edit = null;
      // A message posted in a frame's callback comes after the frame has been painted.
      ends.push(() => {
        if (drawn) {
          const [sent, taken, back] = drawn.stages;
          seen.edits.push([sent, taken, back, performance.now() - drawn.at]);
        }
        if (/\d to \d/.test(stretch()?.textContent ?? '')) seen.firstWaveform ??= performance.now();
      });
      frameEnd.port2.postMessage(null);
    };
    const stretch = () =>
      document.querySelector('[aria-label="Lanes"] b')?.parentElement?.querySelector('span');
    const lanes = new MutationObserver(onDrawn);
    const whole = new MutationObserver(() => {
      const element = stretch();
      if (!element) return;
      whole.disconnect();
      lanes.observe(element, { childList: true, characterData: true, subtree: true });
    });
    whole.observe(document, { childList: true, subtree: true });
  });
}

test('the first waveform is on the page within a second', async ({ browser, baseURL }, info) => {
  const times: number[] = [];
  // A new context each time: nothing is cached from the visit before.
  for (let visit = 0; visit < 3; visit++) {
    const context = await browser.newContext({ viewport: { width: 1440, height: 900 }, baseURL });
    const page = await context.newPage();
    await watch(page);
    await page.goto('/');
    await expect.poll(() => page.evaluate(() => window.seen.firstWaveform)).not.toBeNull();
    times.push((await page.evaluate(() => window.seen.firstWaveform)) as number);
    await context.close();
  }
  report(info, {
    what: 'first waveform after navigation began, median of 3 visits',
    unit: 'ms',
    value: quantile(times, 0.5),
    target: 1000,
    times,
  });
});

test('an edit is in the lanes within a tenth of a second, and no task holds the page up', async ({
  page,
}, info) => {
  const EDITS = 24;
  await page.setViewportSize({ width: 1440, height: 900 });
  await watch(page);
  await page.goto('/');
  await engineGoesOn(page, 5);
  const loading = (await page.evaluate(() => window.seen.longTasks.splice(0))) as number[];

  for (let k = 0; k < EDITS; k++) {
    const name = k % 2 === 0 ? 'Bus voltage' : 'Drive frequency';
    const number = driveLine(page).getByRole('spinbutton', { name, exact: true });
    await number.focus();
    // Out of step with the frames and the worker's slices.
    await page.waitForTimeout(60 + ((k * 37) % 90));
    await page.keyboard.press(k % 4 < 2 ? 'ArrowUp' : 'ArrowDown');
    await expect
      .poll(() => page.evaluate(() => window.seen.edits.length), {
        intervals: [20],
        timeout: 10_000,
      })
      .toBe(k + 1);
  }
  await expect(state(page)).toHaveText('Running');
  const { edits, longTasks } = await page.evaluate(() => window.seen);
  const shown = edits.map((stages) => stages[3]);
  const medians = [0, 1, 2, 3].map((stage) =>
    quantile(
      edits.map((stages) => stages[stage]),
      0.5,
    ),
  );
  const [sent, taken, back, median] = medians.map((time) => time.toFixed(0));
  console.log(
    `edit to lanes, medians since the key stroke: sent ${sent} ms, taken ${taken} ms, samples back ${back} ms, shown ${median} ms; longest ${quantile(shown, 1).toFixed(0)} ms; tasks over 50 ms: ${loading.length} while loading (longest ${Math.max(0, ...loading).toFixed(0)} ms), ${longTasks.length} while streaming`,
  );
  report(info, {
    what: 'edit to lanes while charging, 95 % of edits within',
    unit: 'ms',
    value: quantile(shown, 0.95),
    target: 100,
    edits,
    medians,
  });
  report(info, {
    what: 'longest task while streaming (tasks under 50 ms are not told apart)',
    unit: 'ms',
    value: Math.max(0, ...longTasks),
    target: 50,
    longTasks,
    loading,
  });
});

test('memory does not grow with the time that a run goes on', async ({ page }, info) => {
  test.setTimeout(90_000);
  const SECONDS = 20;
  await page.goto('/');
  const client = await page.context().newCDPSession(page);
  const heap = async () => {
    await client.send('HeapProfiler.collectGarbage');
    const { usedSize } = await client.send('Runtime.getHeapUsage');
    return usedSize / 1e6;
  };
  // Past the first plots and tables, which stay.
  await engineGoesOn(page, 5);
  await page.waitForTimeout(3000);
  const before = await heap();
  const begun = await reading(page, 'stackEnergy');
  const voltage = driveLine(page).getByRole('spinbutton', { name: 'Bus voltage', exact: true });
  await voltage.focus();
  const until = Date.now() + SECONDS * 1000;
  for (let k = 0; Date.now() < until; k++) {
    // Lest it settle and stop.
    await page.keyboard.press(k % 2 === 0 ? 'ArrowUp' : 'ArrowDown');
    await page.waitForTimeout(1000);
  }
  await expect(state(page)).toHaveText('Running');
  expect(await reading(page, 'stackEnergy')).not.toBe(begun);
  const after = await heap();
  report(info, {
    what: `heap of the page grown in ${SECONDS} s of streaming`,
    unit: 'MB',
    value: Math.max(0, after - before),
    target: 2,
    before,
    after,
  });
});
