/**
 * The circuit of one section in its step: the lower joint enters at the foot on the left, the
 * upper joint leaves at the head on the right; capacitors left, diodes right, the winding as the
 * rung between them, so that nothing crosses.
 */
import type { Design } from '../../sim-core/index.ts';
import type { Step } from './layout.ts';
import { Capacitor, PLATE_GAP } from './symbols/Capacitor.tsx';
import { Coil, PolarityDot } from './symbols/Coil.tsx';
import { Diode } from './symbols/Diode.tsx';
import { Wire } from './symbols/Wire.tsx';

/** Smallest height in which one ladder stage can be read. */
const STAGE = 30;

interface Room {
  readonly left: number;
  readonly right: number;
  /** Head (upper joint), foot (lower joint) and the middle between. */
  readonly head: number;
  readonly foot: number;
  readonly middle: number;
  readonly plate: number;
  readonly diode: number;
}

function roomOf(step: Step): Room {
  const height = step.low - step.high;
  const { x, width } = step;
  return {
    left: x + Math.max(8, width * 0.2),
    right: x + Math.min(width - 9, width * 0.8),
    head: step.high,
    foot: step.low,
    middle: (step.high + step.low) / 2,
    plate: Math.max(9, Math.min(16, width * 0.2)),
    diode: Math.max(7, Math.min(10, height / 4)),
  };
}

/** A column of capacitors in a vertical wire between two heights. */
function Capacitors({
  x,
  head,
  foot,
  count,
  plate,
}: {
  x: number;
  head: number;
  foot: number;
  count: number;
  plate: number;
}) {
  const part = (foot - head) / count;
  return Array.from({ length: count }, (_, i) => {
    const y = head + (i + 0.5) * part;
    return (
      // biome-ignore lint/suspicious/noArrayIndexKey: equal parts in a fixed order
      <g key={i}>
        <Wire
          d={`M${x} ${head + i * part}V${y - PLATE_GAP / 2}M${x} ${y + PLATE_GAP / 2}V${head + (i + 1) * part}`}
        />
        <Capacitor x={x} y={y} plate={plate} upright />
      </g>
    );
  });
}

/** A winding lying between two verticals, with its polarity dot at the end that is `a`. */
function Rung({
  from,
  to,
  y,
  reversed,
}: {
  from: number;
  to: number;
  y: number;
  reversed: boolean;
}) {
  const lead = Math.min(6, (to - from) * 0.12);
  const turns = to - from > 60 ? 5 : 4;
  const r = Math.min(7, (to - from - 2 * lead) / (2 * turns));
  const start = (from + to) / 2 - turns * r;
  const end = (from + to) / 2 + turns * r;
  return (
    <>
      <Wire d={`M${from} ${y}H${start}M${end} ${y}H${to}`} />
      <Coil x={start} y={y} turns={turns} r={r} />
      <PolarityDot
        x={reversed ? Math.max(start + 1, from + 9) : Math.min(end - 1, to - 9)}
        y={y - r - 3.5}
      />
    </>
  );
}

function Doubler({ step, reversed }: { step: Step; reversed: boolean }) {
  const { left, right, head, foot, middle, plate, diode } = roomOf(step);
  const quarter = (foot - head) / 4;
  return (
    <>
      <Wire d={`M${step.x} ${foot}H${right}V${head}M${left} ${head}H${step.x + step.width}`} />
      <Capacitors x={left} head={head} foot={foot} count={2} plate={plate} />
      <Diode x={right} y={middle - quarter} size={diode} />
      <Diode x={right} y={middle + quarter} size={diode} />
      <Rung from={left} to={right} y={middle} reversed={reversed} />
    </>
  );
}

function HalfWave({ step, reversed }: { step: Step; reversed: boolean }) {
  const { left, right, head, foot, plate, diode } = roomOf(step);
  const height = foot - head;
  const r = Math.min(5, (height * 0.5) / 8);
  const coil = foot - 3 - 8 * r;
  return (
    <>
      <Wire
        d={`M${step.x} ${foot}H${right}V${foot - 3}M${right} ${coil}V${head}M${left} ${head}H${step.x + step.width}`}
      />
      <Capacitors x={left} head={head} foot={foot} count={1} plate={plate} />
      <Coil x={right} y={coil} turns={4} r={r} upright />
      <PolarityDot x={right - 4} y={reversed ? foot - 5 : coil + 2} />
      <Diode x={right} y={(coil + head) / 2} size={diode} />
    </>
  );
}

function Bridge({ step, reversed }: { step: Step; reversed: boolean }) {
  const { left, right, head, foot, middle, plate, diode } = roomOf(step);
  const inner = left + Math.max(9, (right - left) * 0.34);
  const quarter = (foot - head) / 4;
  return (
    <>
      <Wire
        d={`M${step.x} ${foot}H${right}V${head}M${left} ${head}H${step.x + step.width}M${inner} ${foot}V${head}`}
      />
      <Capacitors x={left} head={head} foot={foot} count={1} plate={plate} />
      {[inner, right].map((x) => (
        <g key={x}>
          <Diode x={x} y={middle - quarter} size={diode} />
          <Diode x={x} y={middle + quarter} size={diode} />
        </g>
      ))}
      <Rung from={inner} to={right} y={middle} reversed={reversed} />
    </>
  );
}

/**
 * The half-wave multiplier: smoothing capacitors stand on the right between the joints, coupling
 * capacitors left of them, half a stage lower; the diodes climb from one column to the other.
 */
function Ladder({ step, stages, reversed }: { step: Step; stages: number; reversed: boolean }) {
  const { left, right, head, foot, plate } = roomOf(step);
  const stage = (foot - head) / stages;
  if (stage < STAGE) {
    const wide = right - left;
    return (
      <>
        <Wire
          d={`M${step.x} ${foot}H${right - wide / 2}M${right - wide / 2} ${head}H${step.x + step.width}`}
        />
        <rect className="body" x={left} y={head} width={wide} height={foot - head} />
        <text className="center" x={left + wide / 2} y={(head + foot) / 2 + 4}>
          {wide >= 56 ? `${stages} stages` : `×${stages}`}
        </text>
      </>
    );
  }
  const winding = step.x + 7;
  const coupling = left + 14;
  const size = Math.min(9, stage / 4);
  const angle = (Math.atan2(right - coupling, stage / 2) * 180) / Math.PI;
  const middle = (coupling + right) / 2;
  const r = Math.min(5, stage / 12);
  const top = foot - stage / 2;
  const coil = foot - 2 - 6 * r;
  return (
    <>
      <Wire d={`M${step.x} ${foot}H${right}M${right} ${head}H${step.x + step.width}`} />
      <Wire d={`M${winding} ${foot}V${foot - 2}M${winding} ${coil}V${top}`} />
      <Coil x={winding} y={coil} turns={3} r={r} upright />
      <PolarityDot x={winding - 4} y={reversed ? foot - 4 : coil + 2} />
      <Capacitors x={right} head={head} foot={foot} count={stages} plate={plate} />
      {Array.from({ length: stages }, (_, i) => {
        const low = foot - i * stage;
        const joint = low - stage / 2;
        return (
          // biome-ignore lint/suspicious/noArrayIndexKey: equal stages in a fixed order
          <g key={i}>
            <Wire d={`M${right} ${low}L${coupling} ${joint}L${right} ${low - stage}`} />
            <Diode x={middle} y={low - stage / 4} size={size} angle={-angle} />
            <Diode x={middle} y={low - (3 * stage) / 4} size={size} angle={angle} />
          </g>
        );
      })}
      {Array.from({ length: stages - 1 }, (_, i) => {
        const joint = foot - (i + 0.5) * stage;
        return (
          <Capacitors
            // biome-ignore lint/suspicious/noArrayIndexKey: equal stages in a fixed order
            key={i}
            x={coupling}
            head={joint - stage}
            foot={joint}
            count={1}
            plate={plate}
          />
        );
      })}
      <Capacitor x={(winding + coupling) / 2} y={top} plate={plate} />
      <Wire
        d={`M${winding} ${top}H${(winding + coupling) / 2 - PLATE_GAP / 2}M${(winding + coupling) / 2 + PLATE_GAP / 2} ${top}H${coupling}`}
      />
    </>
  );
}

function Bare({ step, reversed }: { step: Step; reversed: boolean }) {
  const { foot, head } = roomOf(step);
  const x = step.x + step.width / 2;
  const r = Math.min(7, (foot - head) / 10);
  const top = (foot + head) / 2 - 4 * r;
  return (
    <>
      <Wire
        d={`M${step.x} ${foot}H${x}V${top + 8 * r}M${x} ${top}V${head}H${step.x + step.width}`}
      />
      <Coil x={x} y={top} turns={4} r={r} upright />
      <PolarityDot x={x - 5} y={reversed ? top + 8 * r - 2 : top + 2} />
    </>
  );
}

/** The section's winding and rectifier, drawn as they are connected. */
export function SectionCircuit({
  step,
  rectifier,
  reversed,
}: {
  step: Step;
  rectifier: Design['rectifier'];
  reversed: boolean;
}) {
  switch (rectifier.kind) {
    case 'doubler':
      return <Doubler step={step} reversed={reversed} />;
    case 'half-wave':
      return <HalfWave step={step} reversed={reversed} />;
    case 'bridge':
      return <Bridge step={step} reversed={reversed} />;
    case 'ladder':
      return <Ladder step={step} stages={rectifier.stages} reversed={reversed} />;
    case 'none':
      return <Bare step={step} reversed={reversed} />;
  }
}
