/** The scale under a large number: where the value stands, and in proportion what comes out. */
import { useCallback, useState } from 'react';
import type { QuantityField } from '../../sim-core/index.ts';
import { unitOf } from '../figure.ts';
import { useRun } from '../run/store.ts';
import { type Tick, ticksBetween } from '../scale.ts';

const AXIS = 18.5;
/** Share of the value that the tape shows on either side of it. */
const REACH = 0.11;
/** Width from which the upper scale has room beside its words. */
const LEAST_WIDTH = 190;
/** Room for the words at the end of the upper scale. */
const WORDS = 92;

/** Widths of a digit and of the space after a figure, CSS pixels. */
const DIGIT = 7;
const SPACE = 7;

/** Ticks from `from` to `to` over so many pixels, as close as their figures can be read. */
function readableTicks(
  from: number,
  to: number,
  width: number,
  figure: (value: number) => string,
): readonly Tick[] {
  for (let most = Math.floor(width / (2 * DIGIT + SPACE)); most > 1; most--) {
    const ticks = ticksBetween(from, to, most);
    const figures = ticks.filter(({ major }) => major);
    const longest = Math.max(0, ...figures.map(({ value }) => figure(value).length));
    const room = figures.length < 2 ? 0 : figures[1].value - figures[0].value;
    if ((room / (to - from)) * width >= longest * DIGIT + SPACE) return ticks;
  }
  return ticksBetween(from, to, 1);
}

/** A scale around `value`. With `ratio` it also carries the output, once the run has settled. */
export function Tape({
  field,
  value,
  ratio,
}: {
  field: QuantityField;
  value: number;
  ratio: boolean;
}) {
  const [width, setWidth] = useState(0);
  const measure = useCallback((element: SVGSVGElement | null) => {
    if (!element) return undefined;
    const observer = new ResizeObserver(([entry]) => setWidth(Math.floor(entry.contentRect.width)));
    observer.observe(element);
    return () => observer.disconnect();
  }, []);
  const wide = width >= LEAST_WIDTH;
  const perValue = useRun((run) => {
    const out = run.readings?.outputVoltage ?? null;
    return ratio && wide && run.state === 'settled' && out !== null && value > 0
      ? out / value
      : null;
  });

  const half = Math.max(value * REACH, field.min * 2, ratio ? 1 : 0);
  const from = Math.max(field.min, value - half);
  const to = Math.min(field.max, value + half);
  const x = (v: number) => width / 2 + ((v - value) / half) * (width / 2);
  const { divisor } = unitOf(Math.max(value, half), field.unit);
  const figureBelow = (v: number) => String(Number((v / divisor).toPrecision(6)));
  const below = readableTicks(from, to, x(to) - x(from), figureBelow);
  const output = perValue === null ? null : unitOf(perValue * value, 'V');
  const figureAbove = (v: number) => String(Number((v / (output?.divisor ?? 1)).toPrecision(4)));
  const above =
    perValue === null
      ? []
      : readableTicks(from * perValue, to * perValue, x(to) - x(from), figureAbove);
  const middle = width / 2;

  return (
    <svg className="tape" ref={measure} aria-hidden="true">
      {width > 0 && (
        <>
          <path className="axis" d={`M${Math.max(0, x(from))} ${AXIS}H${Math.min(width, x(to))}`} />
          {below.map(({ value: v, major }) => (
            <g key={v}>
              <path className="tick" d={`M${x(v)} ${AXIS}v${major ? 8 : 4}`} />
              {major && x(v) > 10 && x(v) < width - 10 && (
                <text className="m center" x={x(v)} y={37}>
                  {figureBelow(v)}
                </text>
              )}
            </g>
          ))}
          {above.map(
            ({ value: v, major }) =>
              major &&
              perValue !== null &&
              x(v / perValue) > 8 &&
              x(v / perValue) < width - WORDS - 8 && (
                <g key={v}>
                  <path className="tick" d={`M${x(v / perValue)} ${AXIS}v-4`} />
                  <text className="m center" x={x(v / perValue)} y={12}>
                    {figureAbove(v)}
                  </text>
                </g>
              ),
          )}
          {output && (
            <text className="m end" x={width} y={12}>
              {output.unit}, in proportion
            </text>
          )}
          <path className="hand-solid" d={`M${middle} 20l-4.5 7h9z`} />
          <path className="hand-line" d={`M${middle} 20V13`} />
        </>
      )}
    </svg>
  );
}
