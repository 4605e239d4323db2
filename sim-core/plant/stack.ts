/**
 * The stack bay: every section's rectifier between its two joints, the joints in series from the
 * negative terminal (joint 0) to the positive (joint S), and the earth.
 */
import type { Design } from '../design/schema.ts';
import { EARTH, type NetworkBuilder, piecesThrough } from '../network/network.ts';
import { voltageBetween } from '../network/probe.ts';
import type { Site } from './site.ts';
import { windingEnd, windingStart } from './transformer.ts';

/** Node of joint k, counted from 0 at the negative terminal. */
export const joint = (k: number): string => `joint ${k}`;

/** Adds the diodes and capacitors of one section, naming them after it. */
class Section {
  private readonly network: NetworkBuilder;
  private readonly design: Design;
  private readonly k: number;
  private readonly curve;
  readonly diodes: { readonly name: string; readonly anode: string; readonly cathode: string }[] =
    [];

  constructor(network: NetworkBuilder, design: Design, k: number) {
    const { diodeVoltage, diodeResistance, diodeOffResistance } = design.rectifier;
    const leak = 1 / diodeOffResistance;
    this.network = network;
    this.design = design;
    this.k = k;
    this.curve = piecesThrough([[diodeVoltage, diodeVoltage * leak]], leak, 1 / diodeResistance);
  }

  /** A diode stick with its junction capacitance. */
  diode(anode: string, cathode: string): void {
    const name = `section ${this.k} diode ${this.diodes.length + 1}`;
    this.diodes.push({ name, anode, cathode });
    this.network.characteristic(anode, cathode, {
      name,
      part: 'rectifier',
      curves: [this.curve],
      gate: -1,
      source: 0,
    });
    this.network.capacitor(
      `${name}, capacitance`,
      'rectifier',
      anode,
      cathode,
      this.design.rectifier.diodeCapacitance,
    );
  }

  /** A smoothing capacitor, or a coupling capacitor of the ladder. */
  capacitor(what: string, from: string, to: string, coupling = false): void {
    const { capacitance, couplingCapacitance, capacitorResistance } = this.design.rectifier;
    this.network.capacitor(
      `section ${this.k} ${what}`,
      'rectifier',
      from,
      to,
      coupling ? (couplingCapacitance ?? capacitance) : capacitance,
      capacitorResistance,
    );
  }
}

/** Wire the rectifier of section k between the ends of its winding and its joints. */
function buildRectifier(network: NetworkBuilder, design: Design, k: number): Section['diodes'] {
  const section = new Section(network, design, k);
  const a = windingStart(k);
  const b = windingEnd(k);
  const minus = joint(k - 1);
  const plus = joint(k);
  switch (design.rectifier.kind) {
    case 'bridge':
      section.diode(a, plus);
      section.diode(b, plus);
      section.diode(minus, a);
      section.diode(minus, b);
      section.capacitor('capacitor', plus, minus);
      break;
    case 'half-wave':
      network.join(b, minus);
      section.diode(a, plus);
      section.capacitor('capacitor', plus, minus);
      break;
    case 'doubler':
      section.diode(a, plus);
      section.diode(minus, a);
      section.capacitor('upper capacitor', plus, b);
      section.capacitor('lower capacitor', b, minus);
      break;
    case 'ladder': {
      network.join(b, minus);
      const { stages } = design.rectifier;
      const coupling = (j: number): string => (j === 0 ? a : `section ${k}, coupling joint ${j}`);
      const smoothing = (j: number): string =>
        j === 0 ? minus : j === stages ? plus : `section ${k}, smoothing joint ${j}`;
      for (let j = 1; j <= stages; j++) {
        section.diode(smoothing(j - 1), coupling(j));
        section.diode(coupling(j), smoothing(j));
        section.capacitor(`coupling capacitor ${j}`, coupling(j - 1), coupling(j), true);
        section.capacitor(`smoothing capacitor ${j}`, smoothing(j), smoothing(j - 1));
      }
      break;
    }
    case 'none':
      network.join(a, plus);
      network.join(b, minus);
      break;
  }
  return section.diodes;
}

/** Add all rectifiers and the earth of the stack. */
export function buildStack({ network, signals }: Site, design: Design): void {
  const last = design.sections.count;
  const { earth, leakageResistance, strayCapacitance } = design.stack;
  if (earth === 'joint') network.join(joint(design.stack.joint), EARTH);
  else {
    for (const [k, sign] of [
      [0, 'negative'],
      [last, 'positive'],
    ] as const) {
      network.resistor(`stack leakage, ${sign}`, 'output', joint(k), EARTH, leakageResistance);
      network.capacitor(`stack stray, ${sign}`, 'output', joint(k), EARTH, strayCapacitance);
    }
  }
  for (let k = 1; k <= last; k++) {
    const diodes = buildRectifier(network, design, k);
    signals.push({
      name: `section ${k} output voltage`,
      unit: 'V',
      bay: 'stack',
      terms: voltageBetween(joint(k), joint(k - 1)),
    });
    for (const { name, anode, cathode } of diodes) {
      signals.push(
        {
          name: `${name} voltage`,
          unit: 'V',
          bay: 'stack',
          terms: voltageBetween(anode, cathode),
        },
        {
          name: `${name} current`,
          unit: 'A',
          bay: 'stack',
          terms: [{ of: 'characteristic', name, weight: 1 }],
        },
      );
    }
  }
  for (let k = 0; k <= last; k++) {
    signals.push({
      name: `joint ${k} potential`,
      unit: 'V',
      bay: 'stack',
      terms: [{ of: 'node', node: joint(k), weight: 1 }],
    });
  }
  signals.push({
    name: 'stack voltage',
    unit: 'V',
    bay: 'stack',
    terms: voltageBetween(joint(last), joint(0)),
  });
}
