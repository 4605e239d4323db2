import type { Design } from '../../../sim-core/index.ts';
import { Diode } from './Diode.tsx';

/**
 * One switch of a bridge with its antiparallel diode, in a vertical wire at x from y to y + height
 * (IEC 60617: insulated-gate bipolar transistor; insulated-gate field-effect transistor,
 * enhancement type, N channel).
 */
export function Switch({
  kind,
  x,
  y,
  height,
}: {
  kind: Design['bridge']['switchKind'];
  x: number;
  y: number;
  height: number;
}) {
  const m = y + height / 2;
  const foot = y + height;
  return (
    <>
      {kind === 'insulated-gate' ? (
        <>
          <path
            className="wire"
            d={`M${x} ${y}V${m - 7}l-7 4M${x - 7} ${m + 3}L${x} ${m + 8}V${foot}`}
          />
          <path className="plate" d={`M${x - 7} ${m - 8}V${m + 8}`} />
          <path className="wire" d={`M${x - 10.5} ${m - 6}V${m + 6}M${x - 10.5} ${m}h-4`} />
          <path className="solid" d={`M${x} ${m + 8}l-5.6 -.6 2.7 -4z`} />
        </>
      ) : (
        <>
          <path
            className="wire"
            d={`M${x} ${y}V${m - 6}h-7M${x - 7} ${m + 6}H${x}V${foot}M${x} ${m + 6}V${m}h-7`}
          />
          <path
            className="plate"
            d={`M${x - 7} ${m - 9}v5.5M${x - 7} ${m - 2.75}v5.5M${x - 7} ${m + 3.5}v5.5`}
          />
          <path className="wire" d={`M${x - 10.5} ${m - 6}V${m + 6}h-4`} />
          <path className="solid" d={`M${x - 6.5} ${m}l5 -2.5v5z`} />
        </>
      )}
      <path className="wire" d={`M${x} ${y + 3}h11V${foot - 3}H${x}`} />
      <Diode x={x + 11} y={m} size={8} />
    </>
  );
}
