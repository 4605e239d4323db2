/** One lane: its names, its plot and the values at the cursor. Samples pass React by. */
import { type ReactNode, type Ref, useEffect, useImperativeHandle, useRef } from 'react';
import uPlot from 'uplot';
import { figureText } from '../figure.ts';
import type { DetailColumns } from '../run/messages.ts';
import { axisUnit, evenLimits, type Limits, limitsFromZero, NO_LIMITS } from './axis.ts';
import { writeText } from './frame.ts';
import { EDGE, type LaneState, laneOptions, painted, TIME_AXIS } from './options.ts';
import { type Paint, readPaint } from './paint.ts';
import { type LaneWords, nameOf, samplesOf, type Trace, thin, valueAt } from './traces.ts';

/** Most samples a lane draws, each with a value for every trace. */
const MOST_SAMPLES = 2500;

/**
 * A knee comes into view when it is at most this many times above the flux, and leaves it again
 * further up: drawn, a far one would flatten the trace.
 */
const KNEE_COMES = 4;
const KNEE_LEAVES = 8;

/** A value below this share of its axis is drawn at zero, and is read as zero. */
const UNSEEN = 1e-6;

/** Value of one trace at the cursor, in words. */
interface ReadOut {
  readonly name: string;
  readonly text: string;
}

/** The room of a plot, the same in every lane; CSS pixels. */
export interface PlotFrame {
  /** Figures on both sides included. */
  readonly width: number;
  /** Room for the figures beside the plotting area. */
  readonly leftRoom: number;
  readonly rightRoom: number;
  /** Factor on the height of the plotting area. */
  readonly stretch: number;
}

/** What the stack of lanes asks of one. */
export interface LaneHandle {
  resize(frame: PlotFrame): void;
  repaint(paint: Paint): void;
  /** Draw the detail, or an empty plot when there is none. */
  draw(detail: DetailColumns | null, section: number, knee: number | null): void;
  /** Show the values at a time of the detail drawn last, or none; the same in words. */
  readAt(time: number | null): ReadOut[];
}

const EMPTY = new Float64Array();

/** A trace's line as it looks in the plot, to stand beside its name. */
export function Sample({ trace }: { trace: Pick<Trace, 'colour' | 'width' | 'dash'> }) {
  return (
    <svg className="line-sample" width="18" height="8" aria-hidden="true">
      <path
        d="M0 4H18"
        style={{
          stroke: `var(--sig-${trace.colour})`,
          strokeWidth: trace.width,
          strokeDasharray: trace.dash?.join(' '),
        }}
      />
    </svg>
  );
}

interface Properties {
  readonly words: LaneWords;
  /** Whether the time axis stands under this lane. */
  readonly timed: boolean;
  /** Section (from 1) whose winding is shown. */
  readonly section: number;
  /** What stands above the names. */
  readonly heading?: ReactNode;
  /** What stands below them. */
  readonly note?: ReactNode;
  readonly ref: Ref<LaneHandle>;
}

export function Lane({ words, timed, section, heading, note, ref }: Properties) {
  const host = useRef<HTMLDivElement>(null);
  const units = useRef<(HTMLElement | null)[]>([]);
  const values = useRef<(HTMLElement | null)[]>([]);
  const handle = useRef<LaneHandle | null>(null);

  useEffect(() => {
    const state: LaneState = {
      paint: readPaint(),
      left: NO_LIMITS,
      right: NO_LIMITS,
      leftRoom: 44,
      rightRoom: 48,
      empty: true,
      knee: null,
    };
    const plot = new uPlot(laneOptions(words, state, timed), undefined, host.current!);
    let time: Float64Array = EMPTY;
    let samples: (Float64Array | null)[] = [];
    let names: string[] = [];
    let kneeInView = false;

    /** Limits of one side for the samples drawn on it; null stands for a trace without any. */
    const limitsOf = (side: 'left' | 'right', drawn: (Float64Array | null)[]): Limits => {
      let least = 0;
      let greatest = 0;
      painted(words).forEach((trace, i) => {
        if (trace.side !== side) return;
        for (const value of drawn[i] ?? EMPTY) {
          if (value < least) least = value;
          else if (value > greatest) greatest = value;
        }
      });
      if (side === 'left' && state.knee !== null) {
        const times = kneeInView ? KNEE_LEAVES : KNEE_COMES;
        kneeInView = state.knee <= times * Math.max(-least, greatest);
        if (kneeInView) greatest = Math.max(greatest, state.knee);
        else state.knee = null;
      }
      return (words.fromZero ? limitsFromZero : evenLimits)(state[side], least, greatest);
    };

    handle.current = {
      resize({ width, leftRoom, rightRoom, stretch }) {
        state.leftRoom = leftRoom;
        state.rightRoom = rightRoom;
        painted(words).forEach((trace, i) => {
          // uPlot takes dashes in the screen's own pixels.
          plot.series[i + 1].dash = trace.dash?.map((length) => length * devicePixelRatio) ?? [];
        });
        plot.setSize({
          width,
          height: Math.round(words.height * stretch) + 2 * EDGE + (timed ? TIME_AXIS - EDGE : 0),
        });
      },
      repaint(paint) {
        state.paint = paint;
        plot.redraw(false);
      },
      draw(detail, section, knee) {
        time = detail?.time ?? EMPTY;
        samples = words.traces.map((trace) => detail && samplesOf(detail, trace, section));
        names = words.traces.map((trace) => nameOf(trace, section));
        const known = painted(words).map((trace) => samples[words.traces.indexOf(trace)]);
        const thinned = thin(
          time,
          known.filter((column) => column !== null),
          MOST_SAMPLES,
        );
        let next = 0;
        const drawn = known.map((column) => (column === null ? null : thinned.columns[next++]));
        state.empty = time.length === 0;
        state.knee = words.knee ? knee : null;
        state.left = limitsOf('left', drawn);
        state.right = limitsOf('right', drawn);
        words.traces.forEach((trace, i) => {
          const { low, high } = state[trace.side];
          writeText(units.current[i], axisUnit(Math.max(-low, high), trace.unit).symbol);
        });
        const start = time[0] ?? 0;
        const span = time.length > 0 ? time[time.length - 1] - start : 0;
        const fromStart = thinned.time.map((t) => t - start);
        const blank = () => new Array<null>(fromStart.length).fill(null);
        const data: uPlot.AlignedData = [fromStart, ...drawn.map((column) => column ?? blank())];
        plot.batch(() => {
          plot.setData(data, false);
          plot.setScale('left', { min: state.left.low, max: state.left.high });
          plot.setScale('right', { min: state.right.low, max: state.right.high });
          // Setting the time scale, changed or not, is what makes uPlot draw the new samples.
          plot.setScale('x', { min: 0, max: span > 0 ? span : 1 });
        });
      },
      readAt(at) {
        return words.traces.map((trace, i) => {
          const column = samples[i];
          const known = at !== null && column !== null && time.length > 0;
          const value = known ? valueAt(time, column, at) : 0;
          const { low, high } = state[trace.side];
          const seen = Math.abs(value) < UNSEEN * Math.max(-low, high) ? 0 : value;
          const text = known ? figureText(seen, trace.unit) : '';
          writeText(values.current[i], text);
          return { name: names[i], text };
        });
      },
    };
    return () => {
      handle.current = null;
      plot.destroy();
    };
  }, [words, timed]);

  useImperativeHandle(
    ref,
    () => ({
      resize: (frame) => handle.current?.resize(frame),
      repaint: (paint) => handle.current?.repaint(paint),
      draw: (...what) => handle.current?.draw(...what),
      readAt: (time) => handle.current?.readAt(time) ?? [],
    }),
    [],
  );

  return (
    <div className={timed ? 'lane lane-timed' : 'lane'}>
      <div className="lane-names">
        {heading}
        {words.traces.map((trace, i) => (
          <div className="lane-name" key={trace.label}>
            <Sample trace={trace} />
            <span>
              {trace.label}
              <span className="lane-unit">
                {', '}
                <span
                  ref={(element) => {
                    units.current[i] = element;
                  }}
                >
                  {trace.unit}
                </span>
              </span>
            </span>
            <output
              className="lane-value"
              aria-live="off"
              aria-label={`${nameOf(trace, section)} at the cursor`}
              ref={(element) => {
                values.current[i] = element;
              }}
            />
          </div>
        ))}
        {note}
      </div>
      <div className="lane-plot" ref={host} />
    </div>
  );
}
