/**
 * The potential staircase: each section in its own step, height being potential to earth, the
 * core drawn as a tone at its own potential, the earthed joint where a hand may move it.
 */

import { type KeyboardEvent, memo, type PointerEvent, useMemo, useRef } from 'react';
import type { Design } from '../../sim-core/index.ts';
import { setValue } from '../document/actions.ts';
import { applyEdit, useDocument } from '../document/store.ts';
import { unitOf } from '../figure.ts';
import { useRun } from '../run/store.ts';
import { legible, nearestJoint, type Plan, runsOf, type Staircase, type Step } from './layout.ts';
import { SectionCircuit } from './SectionCircuit.tsx';
import { Earth } from './symbols/Earth.tsx';
import { Silent } from './symbols/Silent.tsx';
import { Wire } from './symbols/Wire.tsx';

/** Thickness of the core's tone, and how far it lies below a stack that stands on earth. */
const CORE = 8;
const CORE_GAP = 22;
/** Pointer distance within which a joint is meant. */
const REACH = 24;

function moveEarth(joint: number): void {
  const { design } = useDocument.getState();
  if (design.stack.joint !== joint) applyEdit(setValue(design, 'stack', 'joint', joint));
}

/** The unit that suits the potentials of a stack, and figures in it. */
function potentialScale(joints: readonly number[] | null) {
  const { unit, divisor } = unitOf(Math.max(...(joints ?? [0]).map(Math.abs)), 'V');
  const figure = (volts: number) => {
    const value = Math.abs(volts) / divisor;
    const decimals = value >= 100 ? 0 : value >= 10 ? 1 : 2;
    return `${volts < 0 ? '−' : ''}${value.toFixed(decimals)}`;
  };
  return { unit, divisor, figure };
}

/** Top of the core's tone: under the stairs where they stand on earth, through them elsewhere. */
function coreTop(stairs: Staircase, foot: number): number {
  return Math.abs(stairs.earth - foot) < 1 ? stairs.earth + CORE_GAP : stairs.earth - CORE / 2;
}

function Core({
  plan,
  stairs,
  foot,
  limb,
}: {
  plan: Plan;
  stairs: Staircase;
  foot: number;
  limb: { top: number; foot: number };
}) {
  const top = coreTop(stairs, foot);
  const end = plan.stackEnd;
  if (plan.arrangement === 'narrow') {
    return <path className="core" d={`M${plan.stack} ${top}H${end}v${CORE}H${plan.stack}z`} />;
  }
  const x = plan.core;
  return (
    <path
      className="core"
      d={`M${x} ${Math.min(limb.top, top)}h9V${Math.max(limb.foot, top + CORE)}h-9zM${x + 9} ${top}H${end}v${CORE}H${x + 9}z`}
    />
  );
}

function Scale({ plan, stairs, divisor }: { plan: Plan; stairs: Staircase; divisor: number }) {
  const right = plan.stackEnd + 8;
  return stairs.ticks.map(({ volts, y, major }) =>
    major ? (
      <g key={volts}>
        <path className={volts === 0 ? 'zero' : 'grid'} d={`M${plan.scale + 4} ${y}H${right}`} />
        <text className={volts === 0 ? 'b end' : 'm end'} x={plan.scale} y={y + 4}>
          {volts < 0 ? '−' : ''}
          {Number((Math.abs(volts) / divisor).toPrecision(6))}
        </text>
      </g>
    ) : (
      <path key={volts} className="tick" d={`M${plan.scale + 4} ${y}h4`} />
    ),
  );
}

/** The gap between a step and the core, where there is one: what the insulation has to hold. */
function gapTo(core: number, step: Step): string {
  const x = step.x + step.width / 2;
  if (core > step.low) return `M${x} ${step.low}V${core}`;
  if (core + CORE < step.high) return `M${x} ${step.high}V${core + CORE}`;
  return '';
}

/** One section as a plain box on its tread; solid when it differs from its fellows. */
function Box({ step, differs }: { step: Step; differs: boolean }) {
  const middle = step.x + step.width / 2;
  const breadth = Math.max(3, Math.min(9, step.width * 0.4));
  const head = Math.min(step.low, step.high);
  const height = Math.abs(step.low - step.high);
  return (
    <>
      <Wire d={`M${step.x} ${step.low}H${middle}V${step.high}H${step.x + step.width}`} />
      <rect
        className={differs ? 'box differs' : 'box'}
        x={middle - breadth / 2}
        y={head + Math.min(1, height / 4)}
        width={breadth}
        height={Math.max(1.5, height - 2)}
      />
    </>
  );
}

/** What sets a section apart from its fellows; '' when nothing does. */
function marksOf({ sections, overrides }: Design): readonly string[] {
  return Array.from({ length: sections.count }, (_, i) => {
    const own = overrides.find((o) => o.section === i + 1);
    if (!own) return '';
    const { section: _section, ...values } = own;
    return Object.keys(values).length === 0 ? '' : JSON.stringify(values);
  });
}

const isReversed = ({ sections, overrides }: Design, section: number) =>
  (overrides.find((o) => o.section === section)?.sense ?? sections.sense) === 'reversed';

/** Brackets under runs of equal sections; a run too short for its words keeps only its bracket. */
function Runs({ marks, stairs, y }: { marks: readonly string[]; stairs: Staircase; y: number }) {
  const { steps } = stairs;
  return runsOf(marks).map(({ from, to, differs }) => {
    const left = steps[from - 1].x + 1;
    const right = steps[to - 1].x + steps[to - 1].width - 1;
    const words = from === to ? `${from}` : `${from}–${to} ${differs ? 'alike' : 'equal'}`;
    const fits = right - left > words.length * 6;
    const short = `${from}`.length * 7 + 2 < right - left + 6;
    return (
      <g key={from}>
        <path className="bracket" d={`M${left} ${y}v4H${right}v-4`} />
        {(fits || (from === to && short)) && (
          <text className="m center" x={(left + right) / 2} y={y + 15}>
            {words}
          </text>
        )}
      </g>
    );
  });
}

/** One section drawn large beside stairs whose steps are too small for their circuits. */
function Loupe({
  design,
  stairs,
  plan,
  top,
  section,
  ends,
}: {
  design: Design;
  stairs: Staircase;
  plan: Plan;
  top: number;
  section: number;
  /** Potentials of its lower and its upper joint, in figures. */
  ends: readonly [string, string] | null;
}) {
  const small = plan.stackEnd - plan.stack < 340;
  const width = small ? 58 : 108;
  const height = small ? 54 : 68;
  const x = plan.stack + (small ? 4 : 12);
  const low = top + 24 + height;
  const step = stairs.steps[section - 1];
  const edge = x + width + (small ? 6 : 40);
  const seen = Math.min(step.low, step.high);
  const foot = Math.max(step.low, step.high);
  const target = step.x + step.width / 2 - 5;
  const clear = target > edge + 8;
  return (
    <g>
      {clear && (
        <path className="fan" d={`M${edge} ${top}L${target} ${seen}V${foot}L${edge} ${low + 6}z`} />
      )}
      {clear && <path className="bracket" d={`M${edge} ${top}V${low + 6}`} />}
      <text className="b" x={x} y={top + 8}>
        {small ? `section ${section}` : `section ${section}, drawn large`}
      </text>
      <SectionCircuit
        step={{ section, x, width, low, high: low - height }}
        rectifier={design.rectifier}
        reversed={isReversed(design, section)}
      />
      {ends && !small && (
        <>
          <text className="m" x={x + width + 4} y={low + 4}>
            {ends[0]}
          </text>
          <text className="b" x={x + width + 4} y={low - height + 4}>
            {ends[1]}
          </text>
        </>
      )}
    </g>
  );
}

function EarthHandle({
  design,
  stairs,
  plan,
  onMove,
}: {
  design: Design;
  stairs: Staircase;
  plan: Plan;
  onMove: (event: PointerEvent) => void;
}) {
  const { joint } = design.stack;
  const { count } = design.sections;
  const { x, y } = stairs.joints[Math.min(joint, count)];
  const onKeyDown = (event: KeyboardEvent) => {
    const steps: Readonly<Record<string, number>> = {
      ArrowUp: joint + 1,
      ArrowRight: joint + 1,
      ArrowDown: joint - 1,
      ArrowLeft: joint - 1,
      Home: 0,
      End: count,
    };
    const next = steps[event.key];
    if (next === undefined) return;
    event.preventDefault();
    if (next >= 0 && next <= count) moveEarth(next);
  };
  const which =
    joint === 0 ? ', the negative terminal' : joint === count ? ', the positive terminal' : '';
  return (
    <g
      className="earth-handle"
      role="slider"
      tabIndex={0}
      aria-label="Earthed joint"
      aria-valuemin={0}
      aria-valuemax={count}
      aria-valuenow={joint}
      aria-valuetext={`joint ${joint} of ${count}${which}`}
      onKeyDown={onKeyDown}
      onPointerDown={(event) => event.currentTarget.setPointerCapture(event.pointerId)}
      onPointerMove={(event) => {
        if (event.currentTarget.hasPointerCapture(event.pointerId)) onMove(event);
      }}
    >
      <rect className="grip" x={x - 22} y={y - 12} width={44} height={44} />
      <Earth x={x} y={y} drop={10} movable />
      <circle className="hand-solid" cx={x} cy={y} r={4.5} />
      {plan.arrangement !== 'narrow' && (
        <text className="hand halo" x={x + 13} y={y + 17}>
          earth at joint {joint}
        </text>
      )}
    </g>
  );
}

/** What lies under the stack: the core at its own potential, the scale, the gaps to the core. */
export function StackGround({
  plan,
  stairs,
  joints,
  foot,
  limb,
}: {
  plan: Plan;
  stairs: Staircase;
  joints: readonly number[] | null;
  /** Foot of the room of the stairs; top and foot of the core's limb at the primary. */
  foot: number;
  limb: { top: number; foot: number };
}) {
  const { divisor } = potentialScale(joints);
  const narrow = plan.arrangement === 'narrow';
  const core = coreTop(stairs, foot);
  return (
    <Silent>
      <Core plan={plan} stairs={stairs} foot={foot} limb={limb} />
      <Scale plan={plan} stairs={stairs} divisor={divisor} />
      {narrow ? (
        core > foot && (
          <text className="m" x={plan.stackEnd + 5} y={core + CORE}>
            core
          </text>
        )
      ) : (
        <text className="m end" x={plan.core + 9} y={Math.min(limb.top, core) - 6}>
          core, earthed
        </text>
      )}
      {!stairs.folded &&
        stairs.steps.map((step) => (
          <path key={step.section} className="drop" d={gapTo(core, step)} />
        ))}
    </Silent>
  );
}

/** The stack, from joint 0 at the left to its positive terminal at the right. */
export const Stack = memo(function Stack({
  design,
  plan,
  stairs,
  joints,
  foot,
  top,
}: {
  design: Design;
  plan: Plan;
  stairs: Staircase;
  /** Mean potentials of the joints, volts; null before there are any. */
  joints: readonly number[] | null;
  /** Top and foot of the room of the stairs. */
  top: number;
  foot: number;
}) {
  const hits = useRef<SVGRectElement>(null);
  const shown = useRun((run) => run.section);
  const marks = useMemo(() => marksOf(design), [design]);
  const section = Math.min(shown, design.sections.count);
  const floating = design.stack.earth === 'floating';
  const narrow = plan.arrangement === 'narrow';
  const wide = plan.arrangement === 'wide';
  const { unit, figure } = potentialScale(joints);
  const jointAt = (event: PointerEvent) => {
    const box = hits.current?.getBoundingClientRect();
    return nearestJoint(stairs, event.clientX - (box?.left ?? 0) + plan.stack - REACH);
  };
  const spacing = stairs.joints.length > 1 ? stairs.joints[1].x - stairs.joints[0].x : 99;
  const seatEvery = Math.max(1, Math.ceil(9 / spacing));

  return (
    <g>
      <Silent>
        {stairs.folded && (
          <Loupe
            design={design}
            stairs={stairs}
            plan={plan}
            top={top + 12}
            section={section}
            ends={
              joints && stairs.scaled
                ? [figure(joints[section - 1]), figure(joints[section])]
                : null
            }
          />
        )}
        {stairs.steps.map((step) => {
          const open = !stairs.folded && legible(step);
          const middle = (step.low + step.high) / 2 + 4;
          const k = step.section;
          return (
            <g key={k}>
              {open ? (
                <SectionCircuit
                  step={step}
                  rectifier={design.rectifier}
                  reversed={isReversed(design, k)}
                />
              ) : (
                <Box step={step} differs={marks[k - 1] !== ''} />
              )}
              {open && !narrow && (
                <>
                  <text className="b end" x={step.x - 1} y={middle}>
                    {k}
                  </text>
                  {wide && joints && stairs.scaled && (
                    <text className="m end" x={step.x - 14} y={middle}>
                      {figure(joints[k] - joints[k - 1])}
                    </text>
                  )}
                </>
              )}
              {stairs.folded && (k === 1 || k % 6 === 0) && design.sections.count >= 9 && (
                <text className="m end halo" x={step.x + step.width / 2 - 7} y={step.high - 1}>
                  {k}
                </text>
              )}
              {open && joints && stairs.scaled && !narrow && (
                <text className="m center" x={step.x + step.width / 2} y={foot + 46}>
                  {figure(Math.max(Math.abs(joints[k]), Math.abs(joints[k - 1])))}
                </text>
              )}
            </g>
          );
        })}
        {!stairs.folded && joints && stairs.scaled && !narrow && (
          <text className="m" x={plan.stackEnd + 6} y={foot + 46}>
            {unit} to core, mean
          </text>
        )}
        {stairs.folded && <Runs marks={marks} stairs={stairs} y={foot + 31} />}
        {!floating &&
          stairs.joints.map(
            ({ x, y }, j) =>
              j !== design.stack.joint &&
              j % seatEvery === 0 && <circle key={x} className="seat" cx={x} cy={y} r={3} />,
          )}
        {floating && (
          <text className="m halo" x={plan.stack + 12} y={foot + 16}>
            floating
          </text>
        )}
      </Silent>
      {!floating && (
        <>
          <rect
            ref={hits}
            className="reach"
            x={plan.stack - REACH}
            y={top - REACH}
            width={plan.stackEnd - plan.stack + 2 * REACH}
            height={foot - top + 2 * REACH}
            onPointerUp={(event) => {
              const j = jointAt(event);
              const box = event.currentTarget.getBoundingClientRect();
              const y = event.clientY - box.top + top - REACH;
              const x = event.clientX - box.left + plan.stack - REACH;
              const joint = stairs.joints[j];
              if (Math.hypot(x - joint.x, y - joint.y) <= REACH) moveEarth(j);
            }}
          />
          <EarthHandle
            design={design}
            stairs={stairs}
            plan={plan}
            onMove={(event) => moveEarth(jointAt(event))}
          />
        </>
      )}
    </g>
  );
});
