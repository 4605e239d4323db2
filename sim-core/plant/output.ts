/**
 * The output and load bays: resistor in the tank, bleeder, probe and cable across the output,
 * resistor at the load, load. The series resistors stand in the lead of one terminal.
 */
import type { Design } from '../design/schema.ts';
import type { Piece } from '../network/network.ts';
import { type Term, voltageBetween } from '../network/probe.ts';
import type { Site } from './site.ts';
import { joint } from './stack.ts';

const LOAD = 'load';

/** Current of the constant-current load: in proportion up to the knee, constant beyond it. */
function loadCurve(design: Design): Piece[] {
  const { current, kneeVoltage } = design.load;
  return [
    { low: -Infinity, high: -kneeVoltage, slope: 0, offset: -current },
    { low: -kneeVoltage, high: kneeVoltage, slope: current / kneeVoltage, offset: 0 },
    { low: kneeVoltage, high: Infinity, slope: 0, offset: current },
  ];
}

/** Add the output network and the load. */
export function buildOutput({ network, signals }: Site, design: Design): void {
  const { output, load } = design;
  const terminals = { positive: joint(design.sections.count), negative: joint(0) };
  const lead = output.lead;
  const other = lead === 'positive' ? 'negative' : 'positive';
  const outputLead = `output, ${lead}`;
  const loadLead = `load, ${lead}`;
  network.resistor(
    'resistor in the tank',
    'output',
    terminals[lead],
    outputLead,
    output.tankResistance,
  );
  network.resistor(
    'resistor at the load',
    'output',
    outputLead,
    loadLead,
    output.loadEndResistance,
  );
  const ends = { [lead]: outputLead, [other]: terminals[other] };
  const loadEnds = { [lead]: loadLead, [other]: terminals[other] };
  const plus = ends.positive;
  const minus = ends.negative;
  network.resistor('bleeder', 'output', plus, minus, output.bleederResistance);
  network.resistor('probe', 'output', plus, minus, output.probeResistance);
  network.capacitor('probe capacitance', 'output', plus, minus, output.probeCapacitance);
  network.capacitor('cable', 'output', plus, minus, output.cableCapacitance);

  const loadPlus = loadEnds.positive;
  const loadMinus = loadEnds.negative;
  let current: Term[] = [];
  if (load.kind === 'constant-current') {
    network.characteristic(loadPlus, loadMinus, {
      name: LOAD,
      part: 'load',
      curves: [loadCurve(design)],
      gate: -1,
      source: 0,
    });
    current = [{ of: 'characteristic', name: LOAD, weight: 1 }];
  } else if (load.kind !== 'open') {
    const resistance = load.kind === 'short' ? load.shortResistance : load.resistance;
    network.resistor(LOAD, 'load', loadPlus, loadMinus, resistance);
    current = voltageBetween(loadPlus, loadMinus, 1 / resistance);
  }
  signals.push(
    { name: 'output voltage', unit: 'V', bay: 'output', terms: voltageBetween(plus, minus) },
    { name: 'load voltage', unit: 'V', bay: 'load', terms: voltageBetween(loadPlus, loadMinus) },
    { name: 'load current', unit: 'A', bay: 'load', terms: current },
  );
}
