/**
 * The design document: the one source of types, units, bounds, defaults and words.
 * SI units throughout (angles in degrees). What each value means in the circuit is stated
 * here, and the plant is assembled from nothing else.
 */
import {
  choice,
  count,
  type Field,
  flag,
  type Group,
  optionalQuantity,
  quantity,
  text,
  type ValuesOf,
} from './field.ts';

/** Version of the document's form; a link or file of a higher version is refused. */
export const DESIGN_VERSION = 1;

/** Most sections a transformer may have. */
export const MAX_SECTIONS = 48;

const PARASITIC = 'a supply of this kind has no use for such a value';

const supply = {
  voltage: quantity({
    label: 'Bus voltage',
    about: 'Open-circuit voltage of the supply that feeds the bus.',
    unit: 'V',
    min: 0,
    max: 5000,
    default: 310,
    why: 'the switches of an H-bridge are not made for more',
  }),
  resistance: quantity({
    label: 'Source resistance',
    about: 'Resistance of the supply and its leads, up to the bus capacitor.',
    unit: 'Ω',
    min: 1e-4,
    max: 1e4,
    default: 0.1,
    why: 'less would short the bus capacitor to an ideal source',
  }),
  currentLimit: optionalQuantity({
    label: 'Current limit',
    about: 'Current at which the supply stops holding its voltage and holds this current instead.',
    unit: 'A',
    min: 1e-4,
    max: 1e5,
    default: null,
    absent: 'none',
    why: 'leave it out where the supply has no limit',
  }),
  absorbs: flag({
    label: 'Can absorb current',
    about:
      'A bench supply usually cannot: energy that returns from the bridge then lifts the bus capacitor.',
    default: false,
  }),
  busCapacitance: optionalQuantity({
    label: 'Bus capacitor',
    about: 'Capacitance across the bus, at the bridge.',
    unit: 'F',
    min: 1e-10,
    max: 10,
    default: 470e-6,
    absent: 'not fitted',
    why: PARASITIC,
  }),
  busCapacitorResistance: quantity({
    label: 'Bus capacitor, series resistance',
    about: 'Equivalent series resistance of the bus capacitor.',
    unit: 'Ω',
    min: 1e-5,
    max: 1e3,
    zero: true,
    default: 0.02,
    why: PARASITIC,
  }),
  earthing: choice({
    label: 'Bus earthing',
    about: 'Which point of the bus is bonded to protective earth.',
    options: [
      { value: 'negative', label: 'negative rail' },
      { value: 'positive', label: 'positive rail' },
      { value: 'midpoint', label: 'midpoint of the bus capacitor' },
      { value: 'leakage', label: 'none: held by its leakage' },
    ],
    default: 'negative',
  }),
  leakageResistance: quantity({
    label: 'Bus leakage',
    about:
      'Leakage from each rail to earth when no rail is earthed; balancing resistor from each rail to the midpoint when the midpoint is.',
    unit: 'Ω',
    min: 1e3,
    max: 1e11,
    default: 1e6,
    why: 'without any leakage the bus would have no defined potential',
  }),
} satisfies Group;

const bridge = {
  frequency: quantity({
    label: 'Drive frequency',
    about: 'Frequency at which the bridge is driven.',
    unit: 'Hz',
    min: 1,
    max: 1e6,
    default: 22e3,
    why: 'below 1 Hz no transformer of this kind can follow, above 1 MHz the switch model does not hold',
  }),
  deadTime: quantity({
    label: 'Dead time',
    about: 'Time between one switch of a leg turning off and the other turning on.',
    unit: 's',
    min: 1e-9,
    max: 0.5,
    zero: true,
    default: 1e-6,
    why: 'and no more than half a drive period',
  }),
  phaseShift: quantity({
    label: 'Phase shift',
    about: 'Shift between the two legs: 180° is the full square wave, 0° no voltage at all.',
    unit: '°',
    min: 0,
    max: 180,
    default: 180,
    why: '180° is the full square wave',
  }),
  widthError: quantity({
    label: 'Width error',
    about:
      'How much longer the positive half cycle lasts than half a period, the negative being that much shorter: it makes the flux walk.',
    unit: 's',
    min: -0.25,
    max: 0.25,
    default: 0,
    why: 'and less than half a drive period less the dead time',
  }),
  switchKind: choice({
    label: 'Switches',
    about:
      'Insulated-gate bipolar: a threshold and forward current only. Field-effect: a resistance both ways.',
    options: [
      { value: 'insulated-gate', label: 'insulated-gate bipolar' },
      { value: 'field-effect', label: 'field-effect' },
    ],
    default: 'insulated-gate',
  }),
  switchVoltage: quantity({
    label: 'Switch threshold voltage',
    about: 'Voltage at which an insulated-gate bipolar switch begins to conduct.',
    unit: 'V',
    min: 0,
    max: 20,
    default: 1,
    why: 'a larger drop is a damaged switch',
  }),
  switchResistance: quantity({
    label: 'Switch on resistance',
    about: 'Resistance of a switch that is on, above its threshold.',
    unit: 'Ω',
    min: 1e-4,
    max: 1e3,
    default: 0.02,
    why: PARASITIC,
  }),
  switchOffResistance: quantity({
    label: 'Switch off resistance',
    about: 'Resistance of a switch that is off, with its diode blocking.',
    unit: 'Ω',
    min: 1e3,
    max: 1e12,
    default: 1e7,
    why: 'a sound switch leaks less than 1 kΩ would',
  }),
  diodeVoltage: quantity({
    label: 'Antiparallel diode, threshold',
    about: 'Forward threshold of the diode across each switch.',
    unit: 'V',
    min: 0,
    max: 20,
    default: 0.8,
    why: 'a larger drop is a damaged diode',
  }),
  diodeResistance: quantity({
    label: 'Antiparallel diode, slope',
    about: 'Slope resistance of that diode above its threshold.',
    unit: 'Ω',
    min: 1e-4,
    max: 1e3,
    default: 0.02,
    why: PARASITIC,
  }),
  outputCapacitance: quantity({
    label: 'Output capacitance',
    about: 'Capacitance across each switch, C_oss, taken as constant.',
    unit: 'F',
    min: 1e-13,
    max: 1e-5,
    zero: true,
    default: 300e-12,
    why: PARASITIC,
  }),
} satisfies Group;

const tank = {
  seriesInductance: optionalQuantity({
    label: 'Series inductor',
    about: 'Inductor between leg A and the primary.',
    unit: 'H',
    min: 1e-9,
    max: 10,
    default: null,
    absent: 'not fitted',
    why: PARASITIC,
  }),
  seriesInductorResistance: quantity({
    label: 'Series inductor, resistance',
    about: 'Series resistance of that inductor at the drive frequency.',
    unit: 'Ω',
    min: 1e-6,
    max: 1e4,
    zero: true,
    default: 0.02,
    why: PARASITIC,
  }),
  seriesCapacitance: optionalQuantity({
    label: 'Series capacitor',
    about: 'Capacitor in series with the primary, resonant or for blocking direct current.',
    unit: 'F',
    min: 1e-12,
    max: 1,
    default: null,
    absent: 'not fitted',
    why: PARASITIC,
  }),
  seriesCapacitorResistance: quantity({
    label: 'Series capacitor, series resistance',
    about: 'Equivalent series resistance of that capacitor.',
    unit: 'Ω',
    min: 1e-6,
    max: 1e4,
    zero: true,
    default: 0.005,
    why: PARASITIC,
  }),
  parallelCapacitance: optionalQuantity({
    label: 'Parallel capacitor',
    about: 'Capacitor across the primary.',
    unit: 'F',
    min: 1e-13,
    max: 1e-2,
    default: null,
    absent: 'not fitted',
    why: PARASITIC,
  }),
  parallelCapacitorResistance: quantity({
    label: 'Parallel capacitor, series resistance',
    about: 'Equivalent series resistance of that capacitor.',
    unit: 'Ω',
    min: 1e-6,
    max: 1e4,
    zero: true,
    default: 0.005,
    why: PARASITIC,
  }),
} satisfies Group;

const transformer = {
  primaryResistance: quantity({
    label: 'Primary resistance',
    about: 'Resistance of the primary winding at the drive frequency.',
    unit: 'Ω',
    min: 1e-6,
    max: 1e5,
    zero: true,
    default: 0.05,
    why: PARASITIC,
  }),
  primaryLeakage: quantity({
    label: 'Primary leakage inductance',
    about:
      'Leakage on the primary side, shared by all sections; the magnetising branch lies behind it.',
    unit: 'H',
    min: 1e-9,
    max: 100,
    default: 6e-6,
    why: 'less than 1 nH is less than the leads have',
  }),
  magnetisingInductance: quantity({
    label: 'Magnetising inductance',
    about:
      'Inductance of the magnetising branch below the knee: with all sections open the primary shows this plus the primary leakage.',
    unit: 'H',
    min: 1e-7,
    max: 1e4,
    default: 2.4e-3,
    why: PARASITIC,
  }),
  kneeFluxLinkage: optionalQuantity({
    label: 'Saturation, flux linkage',
    about:
      'Primary flux linkage at the knee, N·B·A. Absent: the core stays linear however hard it is driven.',
    unit: 'Wb',
    min: 1e-9,
    max: 1e3,
    default: null,
    absent: 'linear core',
    why: PARASITIC,
  }),
  saturatedInductance: quantity({
    label: 'Saturated inductance',
    about: 'Slope inductance of the magnetising branch far above the knee.',
    unit: 'H',
    min: 1e-9,
    max: 1e3,
    default: 40e-6,
    why: 'and no more than the magnetising inductance',
  }),
  remanence: quantity({
    label: 'Remanence at the start',
    about: 'Primary flux linkage that the core holds before the first pulse.',
    unit: 'Wb',
    min: -1e3,
    max: 1e3,
    default: 0,
    why: PARASITIC,
  }),
  coreLossResistance: optionalQuantity({
    label: 'Core-loss resistance, held',
    about:
      'Resistance across the magnetising branch. Held as given: its loss does not follow frequency as a material does.',
    unit: 'Ω',
    min: 1e-2,
    max: 1e12,
    default: 2e3,
    absent: 'no core loss',
    why: PARASITIC,
  }),
} satisfies Group;

const winding = {
  ratio: quantity({
    label: 'Ratio to primary',
    about: 'Turns of the section over turns of the primary.',
    unit: '',
    min: 1e-3,
    max: 1e5,
    default: 10,
    why: PARASITIC,
  }),
  sense: choice({
    label: 'Sense',
    about: 'A reversed section has its ends exchanged.',
    options: [
      { value: 'forward', label: '+' },
      { value: 'reversed', label: '−' },
    ],
    default: 'forward',
  }),
  leakageInductance: quantity({
    label: 'Leakage inductance',
    about: 'Leakage of the section alone, on the secondary side, behind the primary leakage.',
    unit: 'H',
    min: 1e-10,
    max: 1e5,
    zero: true,
    default: 9.6e-3,
    why: PARASITIC,
  }),
  resistance: quantity({
    label: 'Resistance',
    about: 'Resistance of the section at the drive frequency.',
    unit: 'Ω',
    min: 1e-5,
    max: 1e8,
    zero: true,
    default: 14,
    why: 'and not zero together with the leakage inductance',
  }),
  ownCapacitance: quantity({
    label: 'Own layers',
    about: 'Capacitance of the section between its own ends.',
    unit: 'F',
    min: 1e-15,
    max: 1e-5,
    zero: true,
    default: 24e-12,
    why: PARASITIC,
  }),
  screenCapacitance: quantity({
    label: 'To screen and core',
    about:
      'Capacitance of the section to the earthed screen and core: half stands at each end, less one sixth across the ends, which keeps the energy of a linear voltage along the winding.',
    unit: 'F',
    min: 1e-15,
    max: 1e-5,
    zero: true,
    default: 38e-12,
    why: PARASITIC,
  }),
} satisfies Group;

const sections = {
  count: count({
    label: 'Sections',
    about: 'Number of separate secondary windings, each with its own rectifier.',
    min: 1,
    max: MAX_SECTIONS,
    default: 8,
    why: 'the stack is built for 1 to 48',
  }),
  ...winding,
} satisfies Group;

const rectifier = {
  kind: choice({
    label: 'Rectifier',
    about: 'The rectifier that every section carries.',
    options: [
      { value: 'bridge', label: 'bridge: 4 diodes, 1 capacitor' },
      { value: 'half-wave', label: 'half-wave: 1 diode, 1 capacitor' },
      { value: 'doubler', label: 'doubler: 2 diodes, 2 capacitors' },
      { value: 'ladder', label: 'multiplier ladder' },
      { value: 'none', label: 'none: alternating output' },
    ],
    default: 'doubler',
  }),
  stages: count({
    label: 'Ladder stages',
    about: 'Stages of the multiplier ladder, two diodes and two capacitors each.',
    min: 1,
    max: 12,
    default: 3,
    why: 'a longer ladder droops more than it gains',
  }),
  capacitance: optionalQuantity({
    label: 'Capacitor',
    about: 'Each smoothing capacitor of the rectifier.',
    unit: 'F',
    min: 1e-15,
    max: 1,
    default: 10e-9,
    absent: 'not fitted',
    why: PARASITIC,
  }),
  couplingCapacitance: optionalQuantity({
    label: 'Coupling capacitor',
    about: 'Each coupling capacitor of the ladder.',
    unit: 'F',
    min: 1e-15,
    max: 1,
    default: null,
    absent: 'as the smoothing capacitors',
    why: PARASITIC,
  }),
  capacitorResistance: quantity({
    label: 'Capacitors, series resistance',
    about: 'Equivalent series resistance of each of these capacitors.',
    unit: 'Ω',
    min: 1e-4,
    max: 1e6,
    zero: true,
    default: 0,
    why: PARASITIC,
  }),
  diodeVoltage: quantity({
    label: 'Diode stick, threshold',
    about: 'Forward threshold of one diode stick, all its junctions together.',
    unit: 'V',
    min: 0,
    max: 1e3,
    default: 10,
    why: 'no stick of diodes drops more',
  }),
  diodeResistance: quantity({
    label: 'Diode stick, slope',
    about: 'Slope resistance of one stick above its threshold.',
    unit: 'Ω',
    min: 1e-3,
    max: 1e6,
    default: 20,
    why: PARASITIC,
  }),
  diodeOffResistance: quantity({
    label: 'Diode stick, off',
    about: 'Leakage resistance of one blocking stick.',
    unit: 'Ω',
    min: 1e4,
    max: 1e14,
    default: 1e9,
    why: 'a sound stick leaks less than 10 kΩ would',
  }),
  diodeCapacitance: quantity({
    label: 'Diode stick, capacitance',
    about: 'Junction capacitance of one blocking stick, taken as constant.',
    unit: 'F',
    min: 1e-16,
    max: 1e-6,
    zero: true,
    default: 2e-12,
    why: PARASITIC,
  }),
} satisfies Group;

const stack = {
  earth: choice({
    label: 'Earth',
    about: 'Whether a joint of the stack is bonded to earth.',
    options: [
      { value: 'joint', label: 'at a joint' },
      { value: 'floating', label: 'floating' },
    ],
    default: 'joint',
  }),
  joint: count({
    label: 'Earthed joint',
    about:
      'Joint 0 is the negative terminal; the joint above the last section is the positive terminal.',
    min: 0,
    max: MAX_SECTIONS,
    default: 0,
    why: 'and no more than there are sections',
  }),
  leakageResistance: quantity({
    label: 'Leakage to earth',
    about: 'Leakage from each terminal to earth that holds a floating stack.',
    unit: 'Ω',
    min: 1e4,
    max: 1e13,
    default: 1e9,
    why: 'without leakage a floating stack has no settled potential',
  }),
  strayCapacitance: quantity({
    label: 'Stray capacitance to earth',
    about: 'Capacitance from each terminal to earth when the stack floats.',
    unit: 'F',
    min: 1e-15,
    max: 1e-5,
    zero: true,
    default: 20e-12,
    why: PARASITIC,
  }),
} satisfies Group;

const output = {
  lead: choice({
    label: 'Series resistors in',
    about: 'The terminal whose lead carries the resistors of the output network.',
    options: [
      { value: 'positive', label: 'the positive terminal' },
      { value: 'negative', label: 'the negative terminal' },
    ],
    default: 'positive',
  }),
  tankResistance: quantity({
    label: 'Resistor in the tank',
    about: 'Resistor between the stack and the output terminal.',
    unit: 'Ω',
    min: 1e-3,
    max: 1e9,
    zero: true,
    default: 10e3,
    why: PARASITIC,
  }),
  bleederResistance: optionalQuantity({
    label: 'Bleeder',
    about: 'Resistor across the output that discharges the stack.',
    unit: 'Ω',
    min: 1,
    max: 1e14,
    default: 600e6,
    absent: 'not fitted',
    why: PARASITIC,
  }),
  probeResistance: optionalQuantity({
    label: 'Probe resistance',
    about: 'Resistance of the measuring divider across the output.',
    unit: 'Ω',
    min: 1e3,
    max: 1e14,
    default: 1e9,
    absent: 'not fitted',
    why: PARASITIC,
  }),
  probeCapacitance: quantity({
    label: 'Probe capacitance',
    about: 'Capacitance of the measuring divider across the output.',
    unit: 'F',
    min: 1e-15,
    max: 1e-6,
    zero: true,
    default: 3e-12,
    why: PARASITIC,
  }),
  cableCapacitance: quantity({
    label: 'Cable capacitance',
    about: 'Capacitance of the output cable, lumped, across the output.',
    unit: 'F',
    min: 1e-15,
    max: 1e-3,
    zero: true,
    default: 1.5e-9,
    why: PARASITIC,
  }),
  loadEndResistance: quantity({
    label: 'Resistor at the load',
    about: 'Resistor between the cable and the load.',
    unit: 'Ω',
    min: 1e-3,
    max: 1e9,
    zero: true,
    default: 0,
    why: PARASITIC,
  }),
} satisfies Group;

const load = {
  kind: choice({
    label: 'Load',
    about: 'What the supply feeds.',
    options: [
      { value: 'open', label: 'open' },
      { value: 'resistor', label: 'resistor' },
      { value: 'constant-current', label: 'constant current with knee' },
      { value: 'short', label: 'short' },
    ],
    default: 'resistor',
  }),
  resistance: quantity({
    label: 'Load resistance',
    about: 'Resistance of the load.',
    unit: 'Ω',
    min: 1e-2,
    max: 1e14,
    default: 3e6,
    why: 'use a short below and an open load above',
  }),
  current: quantity({
    label: 'Load current',
    about: 'Current that the load takes above its knee.',
    unit: 'A',
    min: 1e-12,
    max: 1e4,
    default: 20e-3,
    why: PARASITIC,
  }),
  kneeVoltage: quantity({
    label: 'Knee voltage',
    about: 'Voltage up to which the load current rises in proportion.',
    unit: 'V',
    min: 1e-2,
    max: 1e6,
    default: 1e3,
    why: PARASITIC,
  }),
  shortResistance: quantity({
    label: 'Resistance of the short',
    about: 'What is left in the loop of a shorted output.',
    unit: 'Ω',
    min: 1e-3,
    max: 1e6,
    default: 1,
    why: 'even a bolted short has a loop',
  }),
} satisfies Group;

const start = {
  busCharged: flag({
    label: 'Bus charged at the start',
    about: 'Whether the bus capacitor holds the bus voltage before the first pulse.',
    default: true,
  }),
} satisfies Group;

/** Every group of the document, in the direction the energy flows. */
export const GROUPS = {
  supply,
  bridge,
  tank,
  transformer,
  sections,
  rectifier,
  stack,
  output,
  load,
  start,
} as const;

/** Fields of `sections` that a single section may override. */
export const WINDING_FIELDS = winding;

/** The document's own name and notes. */
export const TITLE_FIELDS = {
  name: text({
    label: 'Name',
    about: 'What the design is called.',
    maxLength: 80,
    default: 'Unnamed supply',
  }),
  notes: text({
    label: 'Notes',
    about: 'Anything worth keeping with the design.',
    maxLength: 4000,
    default: '',
  }),
} satisfies Group;

/** Name of a group of values. */
export type GroupName = keyof typeof GROUPS;

/** Values of one winding that may differ from its fellows. */
export type WindingValues = ValuesOf<typeof winding>;

/** What one section has different from the others; `section` counts from 1. */
export type SectionOverride = { readonly section: number } & Partial<WindingValues>;

/** The whole design document. */
export type Design = {
  readonly version: typeof DESIGN_VERSION;
  readonly name: string;
  readonly notes: string;
  /** At most one entry per section, in rising order. */
  readonly overrides: readonly SectionOverride[];
} & { readonly [G in GroupName]: ValuesOf<(typeof GROUPS)[G]> };

/** Values of one group. */
export type Values<G extends GroupName> = Design[G];

/** The field behind `group.name`, or undefined if there is none. */
export function fieldOf(group: GroupName, name: string): Field | undefined {
  const fields: Group = GROUPS[group];
  return Object.hasOwn(fields, name) ? fields[name] : undefined;
}
