/** The scale under a large number: where the value stands, and in proportion what comes out. */
import { useCallback, useState } from 'react';
import type { QuantityField } from '../../sim-core/index.ts';
import { unitOf } from '../figure.ts';
import { useRun } from '../run/store.ts';
import { ticksBetween } from '../scale.ts';

const AXIS = 18.5;
/** Share of the value that the tape shows on either side of it. */
const REACH = 0.11;
/** Width from which the upper scale has room beside its words. */
const LEAST_WIDTH = 190;
/** Room for the words at the end of the upper scale. */
const WORDS = 92;

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
  const below = ticksBetween(from, to, Math.max(2, Math.floor(width / 27)));
  const output = perValue === null ? null : unitOf(perValue * value, 'V');
  const above =
    perValue === null
      ? []
      : ticksBetween(from * perValue, to * perValue, Math.max(2, Math.floor(width / 30)));
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
                  {Number((v / divisor).toPrecision(6))}
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
                    {Number((v / (output?.divisor ?? 1)).toPrecision(4))}
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
