/** How a lane is drawn by uPlot: scales, axes, traces; no frame, legend or cursor of its own. */
import type uPlot from 'uplot';
import { axisUnit, figure, type Limits, timeTicks } from './axis.ts';
import type { Paint } from './paint.ts';
import type { LaneWords, Trace } from './traces.ts';

/** CSS pixels between two figures of the time axis, at least. */
const TICK_ROOM = 52;

/** Room above and below the plotting area for half a figure, CSS pixels. */
export const EDGE = 8;

/** Height of the time axis under the last lane, CSS pixels. */
export const TIME_AXIS = 24;

/** What the drawing looks up each time it draws. */
export interface LaneState {
  paint: Paint;
  left: Limits;
  right: Limits;
  /** Widths kept for the figures beside the plot, CSS pixels. */
  leftRoom: number;
  rightRoom: number;
  /** Without samples a lane shows its zero line and no figures. */
  empty: boolean;
  /** Flux linkage at the knee where the lane shows it, else null. */
  knee: number | null;
}

/** Traces in the order they are painted: the first named lies on top. */
export const painted = (words: LaneWords): Trace[] => [...words.traces].reverse();

function valueAxis(side: 'left' | 'right', unit: string, state: LaneState): uPlot.Axis {
  const limits = () => state[side];
  return {
    scale: side,
    side: side === 'left' ? 3 : 1,
    size: () => (side === 'left' ? state.leftRoom : state.rightRoom),
    font: state.paint.font,
    stroke: () => state.paint.secondInk,
    gap: 6,
    space: 8,
    grid: side === 'left' ? { stroke: () => state.paint.grid, width: 1 } : { show: false },
    ticks: { show: false },
    splits: () => {
      const { low, high } = limits();
      // A limit close to the other one has no room for figures of its own.
      const near = (high - low) / 4;
      const marks = [low, high].filter((mark) => Math.abs(mark) >= near);
      return [0, ...marks].sort((a, b) => a - b);
    },
    values: (_, splits) => {
      if (state.empty) return splits.map(() => '');
      const { low, high } = limits();
      const { size, symbol } = axisUnit(Math.max(-low, high), unit);
      // The left axis has its unit beside the name; the right one says it at its upper end.
      return splits.map((value) =>
        side === 'right' && value === high
          ? `${figure(value / size)} ${symbol}`
          : figure(value / size),
      );
    },
  };
}

/** Lines across the plot at the given values of the left scale. */
function rule(plot: uPlot, values: number[], colour: string, width: number, dash: number[]) {
  const { ctx, bbox } = plot;
  const ratio = devicePixelRatio;
  ctx.save();
  ctx.strokeStyle = colour;
  ctx.lineWidth = width * ratio;
  ctx.setLineDash(dash.map((length) => length * ratio));
  ctx.beginPath();
  for (const value of values) {
    const y = Math.round(plot.valToPos(value, 'left', true)) + 0.5;
    ctx.moveTo(bbox.left, y);
    ctx.lineTo(bbox.left + bbox.width, y);
  }
  ctx.stroke();
  ctx.restore();
}

/**
 * Options of a lane's plot. They hold `state`, so that a later draw sees what has changed in it.
 * @param timed  whether the time axis stands under this lane
 */
export function laneOptions(words: LaneWords, state: LaneState, timed: boolean): uPlot.Options {
  const sides = new Map(words.traces.map((trace) => [trace.side, trace.unit]));
  return {
    width: 300,
    height: words.height,
    padding: [EDGE, () => (sides.has('right') ? 0 : state.rightRoom), timed ? 0 : EDGE, 0],
    legend: { show: false },
    cursor: { show: false },
    scales: {
      x: { time: false, auto: false, range: (_, min, max) => [min, max] },
      left: { auto: false, range: () => [state.left.low, state.left.high] },
      right: { auto: false, range: () => [state.right.low, state.right.high] },
    },
    axes: [
      {
        scale: 'x',
        size: timed ? TIME_AXIS : 0,
        font: state.paint.font,
        stroke: () => state.paint.secondInk,
        gap: 4,
        grid: { stroke: () => state.paint.grid, width: 1 },
        ticks: timed
          ? { stroke: () => state.paint.thirdInk, width: 1, size: 4 }
          : { show: false, size: 0 },
        splits: (plot, _, __, span) => timeTicks(span, plot.over.clientWidth / TICK_ROOM),
        values: (plot, splits) => {
          if (!timed || state.empty) return splits.map(() => '');
          const { size } = axisUnit(plot.scales.x.max ?? 1, 's');
          return splits.map((value) => figure(value / size));
        },
      },
      valueAxis('left', sides.get('left') ?? '', state),
      ...(sides.has('right') ? [valueAxis('right', sides.get('right') ?? '', state)] : []),
    ],
    series: [
      {},
      ...painted(words).map(
        (trace): uPlot.Series => ({
          scale: trace.side,
          stroke: () => state.paint[trace.colour],
          width: trace.width,
          points: { show: false },
          // Whole pixels would turn a slow slope into a flight of steps.
          pxAlign: 0,
        }),
      ),
    ],
    hooks: {
      drawAxes: [
        (plot) => {
          rule(plot, [0], state.paint.rule, 1, []);
          if (state.knee !== null) {
            rule(plot, [-state.knee, state.knee], state.paint.secondInk, 1.25, [10, 3, 2, 3]);
          }
        },
      ],
    },
  };
}
