/** The drawing from the supply to the primary winding; only fitted parts are drawn. */

import { memo } from 'react';
import { type Design, formatQuantity } from '../../sim-core/index.ts';
import type { Plan } from './layout.ts';
import { Capacitor, PLATE_GAP } from './symbols/Capacitor.tsx';
import { Coil, PolarityDot } from './symbols/Coil.tsx';
import { Earth } from './symbols/Earth.tsx';
import { Resistor } from './symbols/Resistor.tsx';
import { Silent } from './symbols/Silent.tsx';
import { VoltageSource } from './symbols/Source.tsx';
import { Switch } from './symbols/Switch.tsx';
import { Arrow, Joint, Wire } from './symbols/Wire.tsx';

const SWITCH = 30;
/** Half the distance between the two wires to the primary. */
const WIRES = 9;

/** What every part of the side is drawn from: the upper rail is at `top`, the lower `rails` below. */
interface SideProps {
  readonly design: Design;
  readonly plan: Plan;
  readonly top: number;
  readonly rails: number;
}

/** What a part is called and its value, above it. */
function Part({
  x,
  y,
  symbol,
  index,
  value,
}: {
  x: number;
  y: number;
  symbol: string;
  index: string;
  value: string | null;
}) {
  return (
    <>
      <text className="m center" x={x} y={y - (value === null ? 13 : 26)}>
        {symbol}
        <tspan className="index" dy={3}>
          {index}
        </tspan>
      </text>
      {value !== null && (
        <text className="center" x={x} y={y - 12}>
          {value}
        </text>
      )}
    </>
  );
}

/** Capacitor in a vertical wire between two heights. */
function Across({
  x,
  from,
  to,
  plate = 16,
}: {
  x: number;
  from: number;
  to: number;
  plate?: number;
}) {
  const m = (from + to) / 2;
  return (
    <>
      <Wire d={`M${x} ${from}V${m - PLATE_GAP / 2}M${x} ${m + PLATE_GAP / 2}V${to}`} />
      <Capacitor x={x} y={m} plate={plate} upright />
      <Joint x={x} y={from} />
      <Joint x={x} y={to} />
    </>
  );
}

function Supply({ design, plan, top, rails }: SideProps) {
  const narrow = plan.arrangement === 'narrow';
  const wide = plan.arrangement === 'wide';
  const { busCapacitance, earthing, currentLimit } = design.supply;
  const foot = top + rails;
  const middle = top + rails / 2;
  const r = narrow ? 10 : 13;
  const x = plan.supply + r + (wide ? 2 : 0.5);
  const resistor = x + (narrow ? 21 : 34);
  const capacitor = x + (narrow ? 47 : wide ? 74 : 54);
  const end = plan.bridge;
  const midpoint = earthing === 'midpoint';
  return (
    <>
      <Wire d={`M${x} ${middle - r}V${top}H${end}M${x} ${middle + r}V${foot}H${end}`} />
      <VoltageSource x={x} y={middle} r={r} />
      <Resistor x={resistor} y={top} length={18} breadth={7} />
      <text x={x + r + 4} y={middle - 8}>
        +
      </text>
      <text x={x + r + 4} y={middle + 17}>
        −
      </text>
      {currentLimit !== null && !narrow && (
        <text className="m" x={x + r + 4} y={foot - 8}>
          ≤ {formatQuantity(currentLimit, 'A', 3)}
        </text>
      )}
      {midpoint ? (
        <>
          {busCapacitance === null ? (
            <>
              <Wire d={`M${capacitor} ${top}V${foot}`} />
              <Resistor x={capacitor} y={top + rails / 4} length={20} upright />
              <Resistor x={capacitor} y={foot - rails / 4} length={20} upright />
            </>
          ) : (
            <>
              <Across x={capacitor} from={top} to={middle} />
              <Across x={capacitor} from={middle} to={foot} />
            </>
          )}
          <Wire d={`M${capacitor} ${middle}h14`} />
          <Earth x={capacitor + 14} y={middle} drop={8} />
        </>
      ) : (
        busCapacitance !== null && <Across x={capacitor} from={top} to={foot} />
      )}
      {busCapacitance !== null && wide && !midpoint && (
        <text className="m end" x={capacitor - 11} y={middle - 4}>
          C
          <tspan className="index" dy={3}>
            bus
          </tspan>
        </text>
      )}
      {earthing === 'negative' && <Earth x={x} y={foot} drop={7} />}
      {earthing === 'positive' && <Earth x={(resistor + 9 + capacitor) / 2} y={top} drop={8} />}
    </>
  );
}

function Bridge({ design, plan, top, rails }: SideProps) {
  const narrow = plan.arrangement === 'narrow';
  const foot = top + rails;
  const upper = top + rails / 2 - WIRES;
  const lower = top + rails / 2 + WIRES;
  const room = plan.tank - plan.bridge;
  const a = plan.bridge + (narrow ? 28 : Math.min(40, room * 0.27));
  const b = a + Math.min(72, room * 0.45);
  const kind = design.bridge.switchKind;
  return (
    <>
      <Wire d={`M${plan.bridge} ${top}H${b}M${plan.bridge} ${foot}H${b}`} />
      {[a, b].map((x) => (
        <g key={x}>
          <Wire d={`M${x} ${top + SWITCH}V${foot - SWITCH}`} />
          <Switch kind={kind} x={x} y={top} height={SWITCH} />
          <Switch kind={kind} x={x} y={foot - SWITCH} height={SWITCH} />
        </g>
      ))}
      <Joint x={a} y={top} />
      <Joint x={a} y={foot} />
      <Joint x={a} y={upper} />
      <Joint x={b} y={lower} />
      <Wire d={`M${a} ${upper}H${plan.tank}M${b} ${lower}H${plan.tank}`} />
      {!narrow && (
        <>
          <text className="b end" x={a - 9} y={upper + 4}>
            A
          </text>
          <text className="b end" x={b - 9} y={lower + 4}>
            B
          </text>
        </>
      )}
      <Arrow x={plan.tank - (narrow ? 4 : 14)} y={upper} />
    </>
  );
}

function Tank({ design, plan, top, rails }: SideProps) {
  const narrow = plan.arrangement === 'narrow';
  const { seriesInductance, seriesCapacitance, parallelCapacitance } = design.tank;
  const y = top + rails / 2 - WIRES;
  const back = top + rails / 2 + WIRES;
  const end = plan.transformer;
  const value = (v: number, unit: 'H' | 'F') => (narrow ? null : formatQuantity(v, unit, 3));
  const room = end - plan.tank;
  const inductor = plan.tank + room * 0.26;
  const capacitor = plan.tank + room * (seriesInductance === null ? 0.4 : 0.66);
  const parallel = end + (narrow ? 2 : 6);
  const r = narrow ? 3.5 : 4;
  const gaps = [
    ...(seriesInductance === null ? [] : [[inductor - 4 * r, inductor + 4 * r]]),
    ...(seriesCapacitance === null ? [] : [[capacitor - PLATE_GAP / 2, capacitor + PLATE_GAP / 2]]),
  ];
  const wire = `M${plan.tank} ${y}${gaps.map(([from, to]) => `H${from}M${to} ${y}`).join('')}H${end}`;
  return (
    <>
      <Wire d={`${wire}M${plan.tank} ${back}H${end}`} />
      {seriesInductance !== null && (
        <>
          <Coil x={inductor - 4 * r} y={y} turns={4} r={r} />
          <Part x={inductor} y={y} symbol="L" index="s" value={value(seriesInductance, 'H')} />
        </>
      )}
      {seriesCapacitance !== null && (
        <>
          <Capacitor x={capacitor} y={y} />
          <Part x={capacitor} y={y} symbol="C" index="s" value={value(seriesCapacitance, 'F')} />
        </>
      )}
      {parallelCapacitance !== null && (
        <>
          <Across x={parallel} from={y} to={back} plate={14} />
          <text className="m end" x={parallel + 10} y={back + 16}>
            C
            <tspan className="index" dy={3}>
              p
            </tspan>
          </text>
          {!narrow && (
            <text className="end" x={parallel + 10} y={back + 31}>
              {value(parallelCapacitance, 'F')}
            </text>
          )}
        </>
      )}
    </>
  );
}

function Primary({ design, plan, top, rails }: SideProps) {
  const narrow = plan.arrangement === 'narrow';
  const x = plan.core - 14;
  const lead = x - (narrow ? 10 : 12);
  const upper = top + rails / 2 - WIRES;
  const lower = top + rails / 2 + WIRES;
  const r = 6;
  const head = top + rails / 2 - 6 * r;
  const foot = head + 12 * r;
  const ratio = formatQuantity(design.sections.ratio, '', 3);
  return (
    <>
      <Wire
        d={`M${plan.transformer} ${upper}H${lead}V${head}H${x}M${plan.transformer} ${lower}H${lead}V${foot}H${x}`}
      />
      <Coil x={x} y={head} turns={6} r={r} upright />
      <PolarityDot x={x - 4} y={head + 6} />
      <text className="m end" x={narrow ? plan.core - 4 : plan.core - 16} y={foot + 15}>
        1 : {ratio}
        {!narrow && design.sections.count > 1 ? ' each' : ''}
      </text>
    </>
  );
}

/** From the supply to the primary, between two rails. */
export const PrimarySide = memo(function PrimarySide(props: SideProps) {
  return (
    <Silent>
      <Supply {...props} />
      <Bridge {...props} />
      <Tank {...props} />
      <Primary {...props} />
    </Silent>
  );
});
