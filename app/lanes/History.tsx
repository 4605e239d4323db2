/** The history strip: every drive period since rest, the changes made, and the window in detail. */
import { useEffect, useRef } from 'react';
import { figureText } from '../figure.ts';
import type { Envelope } from '../run/messages.ts';
import { useRun } from '../run/store.ts';
import {
  axisUnit,
  calmLimit,
  figure,
  type Limits,
  limitsFromZero,
  NO_LIMITS,
  timeTicks,
} from './axis.ts';
import { type History as Columns, readDetail, readHistory } from './columns.ts';
import { useFrame, writeText } from './frame.ts';
import { Sample } from './Lane.tsx';
import { type Paint, readPaint } from './paint.ts';

/** Heights from the top, CSS pixels: labels of changes, plot, figures, fan. */
const PLOT_TOP = 18;
const PLOT_HEIGHT = 36;
const PLOT_BOTTOM = PLOT_TOP + PLOT_HEIGHT;
const FAN_TOP = PLOT_BOTTOM + 18;
const HEIGHT = FAN_TOP + 14;

/** CSS pixels between two figures of the time axis, at least. */
const TICK_ROOM = 52;

/** Least width of the bracket, so that a short window is still seen. */
const BRACKET = 6;

/** Past this many entries their steps are finer than the screen, and are drawn as slopes. */
const STEPS = 300;

/** Names and dashes of what the strip shows; both run from zero on scales of their own. */
const VOLTAGE = { label: 'Output voltage', colour: 'output', width: 1.5 } as const;
const CURRENT = { label: 'Primary peak', colour: 'primary', width: 1.5 } as const;

/** Largest magnitude in each entry. */
const peaks = ({ min, max }: Envelope) => max.map((value, i) => Math.max(value, -min[i]));

const extremes = (low: Float64Array, high: Float64Array) => {
  let least = 0;
  let greatest = 0;
  for (let i = 0; i < low.length; i += 1) {
    least = Math.min(least, low[i]);
    greatest = Math.max(greatest, high[i]);
  }
  return { least, greatest };
};

/** What one drawing of the strip needs. */
interface Scene {
  readonly context: CanvasRenderingContext2D;
  readonly paint: Paint;
  readonly width: number;
  readonly leftRoom: number;
  readonly rightRoom: number;
  readonly history: Columns;
  readonly peak: Float64Array;
  readonly voltage: Limits;
  readonly currentLimit: number;
  readonly timeLimit: number;
  /** The window shown in detail, seconds since rest. */
  readonly window: readonly [number, number] | null;
  /** When the run settled, seconds since rest; null while it has not. */
  readonly settled: number | null;
}

/** Draw the strip. Every length is in CSS pixels; the context is scaled to the screen's own. */
function drawStrip(scene: Scene) {
  const { context: c, paint, width, leftRoom, rightRoom, history, voltage, timeLimit } = scene;
  const left = leftRoom;
  const right = width - rightRoom;
  const x = (t: number) => left + (t / timeLimit) * (right - left);
  const yOf = (low: number, high: number) => (value: number) =>
    PLOT_BOTTOM - ((value - low) / (high - low)) * PLOT_HEIGHT;
  const yVoltage = yOf(voltage.low, voltage.high);
  const yCurrent = yOf(0, scene.currentLimit);
  c.clearRect(0, 0, width, HEIGHT);
  c.font = paint.font;
  c.textBaseline = 'alphabetic';

  const stroke = (colour: string, lineWidth: number, dash: number[], trace: () => void) => {
    c.strokeStyle = colour;
    c.lineWidth = lineWidth;
    c.setLineDash(dash);
    c.beginPath();
    trace();
    c.stroke();
  };
  const segment = (x1: number, y1: number, x2: number, y2: number) => {
    c.moveTo(x1, y1);
    c.lineTo(x2, y2);
  };
  const write = (text: string, at: number, y: number, align: CanvasTextAlign) => {
    c.textAlign = align;
    // A rim of paper keeps a trace that passes behind from striking through the letters.
    c.strokeStyle = paint.paper;
    c.lineWidth = 3;
    c.setLineDash([]);
    c.lineJoin = 'round';
    c.strokeText(text, at, y);
    c.fillStyle = paint.secondInk;
    c.fillText(text, at, y);
  };
  const crisp = (value: number) => Math.round(value - 0.5) + 0.5;

  // The fan that opens the window to the width of the lanes: under everything else.
  let bracket: { readonly from: number; readonly to: number } | null = null;
  if (scene.window !== null) {
    const middle = (x(scene.window[0]) + x(scene.window[1])) / 2;
    const half = Math.max(BRACKET, x(scene.window[1]) - x(scene.window[0])) / 2;
    const from = Math.round(middle - half);
    const to = Math.round(middle + half);
    bracket = { from, to };
    c.fillStyle = paint.grid;
    c.globalAlpha = 0.55;
    c.beginPath();
    c.moveTo(from, PLOT_BOTTOM);
    c.lineTo(to, PLOT_BOTTOM);
    c.lineTo(to, FAN_TOP);
    c.lineTo(right, HEIGHT);
    c.lineTo(left, HEIGHT);
    c.lineTo(from, FAN_TOP);
    c.fill();
    c.globalAlpha = 1;
  }

  // Figures and grid.
  const ticks = timeTicks(timeLimit, (right - left) / TICK_ROOM);
  const time = axisUnit(timeLimit, 's');
  stroke(paint.grid, 1, [], () => {
    for (const t of ticks) segment(crisp(x(t)), PLOT_TOP, crisp(x(t)), PLOT_BOTTOM);
  });
  stroke(paint.secondInk, 1, [], () =>
    segment(left, crisp(yVoltage(0)), right, crisp(yVoltage(0))),
  );

  // Traces. An entry stands over its own stretch of time while the steps can be told apart.
  const { length } = history.time;
  const startOf = (i: number) => (i === 0 ? 0 : history.time[i - 1]);
  const along = (values: Float64Array, y: (value: number) => number, backwards = false) => {
    for (let n = 0; n < length; n += 1) {
      const i = backwards ? length - 1 - n : n;
      const begin = x(startOf(i));
      const end = x(history.time[i]);
      if (length <= STEPS) c.lineTo(backwards ? end : begin, y(values[i]));
      c.lineTo(backwards && length <= STEPS ? begin : end, y(values[i]));
    }
  };
  if (length > 0) {
    c.globalAlpha = 0.3;
    c.fillStyle = paint.output;
    c.beginPath();
    along(history.outputVoltage.max, yVoltage);
    along(history.outputVoltage.min, yVoltage, true);
    c.fill();
    c.globalAlpha = 1;
    stroke(paint.primary, CURRENT.width, [], () => along(scene.peak, yCurrent));
    stroke(paint.output, VOLTAGE.width, [], () => along(history.outputVoltage.mean, yVoltage));
  }

  for (const t of ticks) write(figure(t / time.size), x(t), PLOT_BOTTOM + 14, 'center');
  write(time.symbol, right + 16, PLOT_BOTTOM + 14, 'left');
  const volts = axisUnit(Math.max(-voltage.low, voltage.high), 'V');
  for (const value of new Set([voltage.low, 0, voltage.high])) {
    write(figure(value / volts.size), left - 6, yVoltage(value) + 4, 'right');
  }
  const amperes = axisUnit(scene.currentLimit, 'A');
  const top = `${figure(scene.currentLimit / amperes.size)} ${amperes.symbol}`;
  write(top, right + 6, PLOT_TOP + 4, 'left');
  write('0', right + 6, PLOT_BOTTOM + 4, 'left');

  // Changes: a tick each, and the newest labels for which there is room. Settling comes last.
  const labels = history.marks.map(({ time: at, label }) => ({ at: x(at), label }));
  if (scene.settled !== null) labels.push({ at: x(scene.settled), label: 'settled' });
  stroke(paint.secondInk, 1, [2, 2], () => {
    for (const mark of history.marks) {
      segment(crisp(x(mark.time)), PLOT_TOP - 4, crisp(x(mark.time)), PLOT_BOTTOM);
    }
  });
  if (scene.settled !== null) {
    const at = crisp(x(scene.settled));
    stroke(paint.secondInk, 1, [], () => segment(at, PLOT_TOP - 4, at, PLOT_BOTTOM));
  }
  let free = right + rightRoom;
  for (const { at, label } of labels.reverse()) {
    const room = c.measureText(label).width + 8;
    if (at + room <= free) write(label, at + 4, PLOT_TOP - 6, 'left');
    else if (Math.min(at, free) - room >= 0 && at <= free) {
      write(label, at - 4, PLOT_TOP - 6, 'right');
      free = at - room;
      continue;
    } else continue;
    free = at;
  }

  // The window in detail: its bracket, over everything.
  if (bracket !== null) {
    const { from, to } = bracket;
    stroke(paint.ink, 2, [], () => {
      for (const [edge, inward] of [
        [from, 3],
        [to, -3],
      ]) {
        c.moveTo(edge + inward, PLOT_TOP - 4);
        c.lineTo(edge, PLOT_TOP - 4);
        c.lineTo(edge, PLOT_BOTTOM + 1);
        c.lineTo(edge + inward, PLOT_BOTTOM + 1);
      }
    });
  }
}

/** The strip as words, for those who cannot see it. */
function inWords({ time, outputVoltage, marks }: Columns, settled: number | null): string {
  const last = time.length - 1;
  if (last < 0) return 'No drive period done yet.';
  const parts = [
    `From rest to ${figureText(time[last], 's', 4)}`,
    `output voltage now ${figureText(outputVoltage.mean[last], 'V')}`,
    ...marks.map((mark) => `at ${figureText(mark.time, 's')} ${mark.label}`),
  ];
  if (settled !== null) parts.push(`settled at ${figureText(settled, 's')}`);
  return `${parts.join('; ')}.`;
}

/** When the run settled, seconds since rest: counted from the last change, as the state says it. */
function settledAt(history: Columns): number | null {
  const { state, settledAfter, time } = useRun.getState();
  if (state !== 'settled') return null;
  const change = history.marks.at(-1)?.time ?? 0;
  return settledAfter === null ? time : Math.min(change + settledAfter, time);
}

export function History() {
  const host = useRef<HTMLDivElement>(null);
  const canvas = useRef<HTMLCanvasElement>(null);
  const voltageUnit = useRef<HTMLSpanElement>(null);
  const currentUnit = useRef<HTMLSpanElement>(null);
  const voltageNow = useRef<HTMLOutputElement>(null);
  const currentNow = useRef<HTMLOutputElement>(null);
  const paint = useRef<Paint>(null);
  const room = useRef({ width: 0, left: 0, right: 0 });
  const limits = useRef({ voltage: NO_LIMITS, current: 0, time: 0 });

  const request = useFrame(host, ({ sized, themed }) => {
    const element = canvas.current;
    const context = element?.getContext('2d');
    if (!host.current || !element || !context) return;
    if (themed || paint.current === null) paint.current = readPaint();
    if (sized) {
      const style = getComputedStyle(host.current);
      const width = host.current.clientWidth;
      room.current = {
        width,
        left: Number.parseFloat(style.getPropertyValue('--left-room')),
        right: Number.parseFloat(style.getPropertyValue('--right-room')),
      };
      element.width = Math.round(width * devicePixelRatio);
      element.height = Math.round(HEIGHT * devicePixelRatio);
      element.style.width = `${width}px`;
      element.style.height = `${HEIGHT}px`;
    }
    context.setTransform(devicePixelRatio, 0, 0, devicePixelRatio, 0, 0);
    const history = readHistory();
    const detail = readDetail();
    const peak = peaks(history.primaryCurrent);
    const { least, greatest } = extremes(history.outputVoltage.min, history.outputVoltage.max);
    const last = history.time.length - 1;
    const now = last < 0 ? 0 : history.time[last];
    limits.current = {
      voltage: limitsFromZero(limits.current.voltage, least, greatest),
      current: calmLimit(limits.current.current, extremes(peak, peak).greatest),
      time: now > 0 ? calmLimit(limits.current.time, now, 1) : limits.current.time || 1e-3,
    };
    const window = detail && detail.time.length > 1;
    const settled = settledAt(history);
    drawStrip({
      context,
      paint: paint.current,
      width: room.current.width,
      leftRoom: room.current.left,
      rightRoom: room.current.right,
      history,
      peak,
      voltage: limits.current.voltage,
      currentLimit: limits.current.current,
      timeLimit: limits.current.time,
      window: window ? [detail.time[0], detail.time[detail.time.length - 1]] : null,
      settled,
    });
    const { voltage, current } = limits.current;
    writeText(voltageUnit.current, axisUnit(Math.max(-voltage.low, voltage.high), 'V').symbol);
    writeText(currentUnit.current, axisUnit(current, 'A').symbol);
    writeText(
      voltageNow.current,
      last < 0 ? '' : figureText(history.outputVoltage.mean[last], 'V'),
    );
    writeText(currentNow.current, last < 0 ? '' : figureText(peak[last], 'A'));
    element.setAttribute('aria-label', inWords(history, settled));
  });

  useEffect(() => useRun.subscribe(request), [request]);

  return (
    <div className="history">
      <div className="history-names">
        <h2>
          History <small>each drive period, from rest</small>
        </h2>
        <div className="lane-name">
          <Sample trace={VOLTAGE} />
          <span>
            {VOLTAGE.label}
            <span className="lane-unit">
              {', '}
              <span ref={voltageUnit}>V</span>
            </span>
          </span>
          <output className="lane-value" aria-live="off" ref={voltageNow} />
        </div>
        <div className="lane-name">
          <Sample trace={CURRENT} />
          <span>
            {CURRENT.label}
            <span className="lane-unit">
              {', '}
              <span ref={currentUnit}>A</span>
            </span>
          </span>
          <output className="lane-value" aria-live="off" ref={currentNow} />
        </div>
      </div>
      <div className="history-plot" ref={host}>
        <canvas role="img" ref={canvas} />
      </div>
    </div>
  );
}
