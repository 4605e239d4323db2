/** The drawing from the stack to the load: series resistors, shunts and the load, as fitted. */
import { type Design, formatQuantity } from '../../sim-core/index.ts';
import { figureText } from '../figure.ts';
import type { Plan } from './layout.ts';
import { Capacitor, PLATE_GAP } from './symbols/Capacitor.tsx';
import { Resistor } from './symbols/Resistor.tsx';
import { Silent } from './symbols/Silent.tsx';
import { CurrentSource } from './symbols/Source.tsx';
import { Arrow, Joint, Terminal, Wire } from './symbols/Wire.tsx';

/** One part of the network: in the lead, or across the output. */
interface Part {
  readonly kind: 'series' | 'resistor' | 'capacitor';
  readonly name: string;
  readonly value: string;
}

/** The fitted parts in the order in which the current meets them. */
function partsOf({ output }: Design): readonly Part[] {
  const ohms = (value: number) => formatQuantity(value, 'Ω', 3);
  const parts: Part[] = [];
  if (output.tankResistance > 0) {
    parts.push({ kind: 'series', name: 'in the tank', value: ohms(output.tankResistance) });
  }
  if (output.bleederResistance !== null) {
    parts.push({ kind: 'resistor', name: 'bleeder', value: ohms(output.bleederResistance) });
  }
  if (output.probeResistance !== null) {
    parts.push({ kind: 'resistor', name: 'probe', value: ohms(output.probeResistance) });
  }
  if (output.cableCapacitance > 0) {
    const value = formatQuantity(output.cableCapacitance, 'F', 3);
    parts.push({ kind: 'capacitor', name: 'cable', value });
  }
  if (output.loadEndResistance > 0) {
    parts.push({ kind: 'series', name: 'at the load', value: ohms(output.loadEndResistance) });
  }
  return parts;
}

function Load({
  load,
  x,
  top,
  foot,
  room,
}: {
  load: Design['load'];
  x: number;
  top: number;
  foot: number;
  room: boolean;
}) {
  const m = (top + foot) / 2;
  const length = Math.max(16, Math.min(80, foot - top - 24));
  switch (load.kind) {
    case 'open':
      return <Wire d={`M${x} ${top}v14M${x} ${foot}v-14`} />;
    case 'short':
      return <Wire d={`M${x} ${top}V${foot}`} />;
    case 'resistor':
      return (
        <>
          <Wire d={`M${x} ${top}V${foot}`} />
          <Resistor x={x} y={m} length={length} breadth={11} upright />
        </>
      );
    case 'constant-current': {
      const r = room ? 13 : 10;
      return (
        <>
          <Wire d={`M${x} ${top}V${m - r}M${x} ${m + r}V${foot}`} />
          <CurrentSource x={x} y={m} r={r} />
        </>
      );
    }
  }
}

function loadWords(load: Design['load']): readonly string[] {
  switch (load.kind) {
    case 'open':
      return ['open'];
    case 'short':
      return ['short'];
    case 'resistor':
      return [formatQuantity(load.resistance, 'Ω', 3)];
    case 'constant-current':
      return [
        formatQuantity(load.current, 'A', 3),
        `above ${formatQuantity(load.kneeVoltage, 'V', 3)}`,
      ];
  }
}

/**
 * From the stack to the load.
 * @param top, foot   heights of the positive and of the negative terminal
 * @param potentials  of both load terminals to earth, volts; null before there are any
 */
export function OutputSide({
  design,
  plan,
  top,
  foot,
  potentials,
}: {
  design: Design;
  plan: Plan;
  top: number;
  foot: number;
  potentials: { readonly positive: number; readonly negative: number } | null;
}) {
  const parts = partsOf(design);
  const lead = design.output.lead === 'positive' ? top : foot;
  const rising = lead === top;
  const weight = (part: Part) => (part.kind === 'series' ? 0.7 : 1);
  const total = parts.reduce((sum, part) => sum + weight(part), 0) + 0.5;
  const from = Math.max(plan.stackEnd + 8, plan.output - 20);
  const unit = (plan.load - from) / total;
  const words = plan.arrangement !== 'narrow' && unit >= 56;
  const middle = (top + foot) / 2;
  const x = plan.load;
  let place = from;
  return (
    <Silent>
      <Wire d={`M${plan.stackEnd} ${top}H${x}M${plan.stack} ${foot}H${x}`} />
      {parts.map((part) => {
        const at = place + (weight(part) * unit) / 2;
        place += weight(part) * unit;
        if (part.kind === 'series') {
          return (
            <g key={part.name}>
              <Resistor x={at} y={lead} length={Math.min(22, unit * 0.6)} />
              {plan.arrangement !== 'narrow' && (
                <text className="m center halo" x={at} y={rising ? lead - 10 : lead + 19}>
                  {part.value}
                </text>
              )}
            </g>
          );
        }
        const length = Math.max(16, Math.min(68, foot - top - 24));
        return (
          <g key={part.name}>
            {part.kind === 'resistor' ? (
              <>
                <Wire d={`M${at} ${top}V${foot}`} />
                <Resistor x={at} y={middle} length={length} breadth={9} upright />
              </>
            ) : (
              <>
                <Wire
                  d={`M${at} ${top}V${middle - PLATE_GAP / 2}M${at} ${middle + PLATE_GAP / 2}V${foot}`}
                />
                <Capacitor
                  x={at}
                  y={middle}
                  plate={plan.arrangement === 'narrow' ? 11 : 16}
                  upright
                />
              </>
            )}
            <Joint x={at} y={top} />
            <Joint x={at} y={foot} />
            {words && (
              <>
                <text className="m halo" x={at + 11} y={middle - 9}>
                  {part.name}
                </text>
                <text className="halo" x={at + 11} y={middle + 7}>
                  {part.value}
                </text>
              </>
            )}
          </g>
        );
      })}
      <Arrow x={x - (plan.arrangement === 'narrow' ? 5 : 10)} y={top} />
      <Load load={design.load} x={x} top={top} foot={foot} room={plan.arrangement !== 'narrow'} />
      <Terminal x={x} y={top} />
      <Terminal x={x} y={foot} />
      {plan.arrangement !== 'narrow' && (
        <>
          {loadWords(design.load).map((line, i) => (
            <text
              key={line}
              x={x + (design.load.kind === 'constant-current' ? 18 : 13)}
              y={middle - 4 + i * 16}
            >
              {line}
            </text>
          ))}
          {potentials && (
            <>
              <text className="b" x={x + 13} y={top + 4}>
                {figureText(potentials.positive, 'V')}
              </text>
              <text className="m" x={x + 13} y={foot + 4}>
                {figureText(potentials.negative, 'V')}
              </text>
            </>
          )}
        </>
      )}
    </Silent>
  );
}
