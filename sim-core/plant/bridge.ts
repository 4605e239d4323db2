/**
 * The bridge bay: two legs of controlled switches with antiparallel diodes and output
 * capacitances. Between gating edges the circuit decides the leg voltages.
 */
import type { Design, Values } from '../design/schema.ts';
import { type GatePattern, gatePattern } from '../network/gates.ts';
import { type Piece, piecesThrough } from '../network/network.ts';
import { voltageBetween } from '../network/probe.ts';
import type { Site } from './site.ts';
import { NEGATIVE_RAIL, POSITIVE_RAIL } from './supply.ts';

/** Nodes of the legs' midpoints. */
export const LEG_A = 'leg A';
export const LEG_B = 'leg B';

const POSITIONS = [
  { name: 'leg A upper switch', from: POSITIVE_RAIL, to: LEG_A },
  { name: 'leg A lower switch', from: LEG_A, to: NEGATIVE_RAIL },
  { name: 'leg B upper switch', from: POSITIVE_RAIL, to: LEG_B },
  { name: 'leg B lower switch', from: LEG_B, to: NEGATIVE_RAIL },
] as const;

/** Current of a switch position against its voltage, [gate off, gate on]. */
function switchCurves(bridge: Values<'bridge'>): Piece[][] {
  const { diodeVoltage, diodeResistance, switchVoltage, switchResistance } = bridge;
  const leak = 1 / bridge.switchOffResistance;
  const diode = 1 / diodeResistance;
  const off = piecesThrough([[-diodeVoltage, -diodeVoltage * leak]], diode, leak);
  if (bridge.switchKind === 'field-effect') {
    const on = 1 / switchResistance;
    return [off, piecesThrough([[-diodeVoltage, -diodeVoltage * on]], on + diode, on)];
  }
  if (diodeVoltage === 0 && switchVoltage === 0) {
    return [off, piecesThrough([[0, 0]], diode, 1 / switchResistance)];
  }
  const corners = [
    [-diodeVoltage, -diodeVoltage * leak],
    [switchVoltage, switchVoltage * leak],
  ] as const;
  return [off, piecesThrough(corners, diode, 1 / switchResistance)];
}

/** Add the two legs. Gate signals: 0 A high, 1 A low, 2 B high, 3 B low. */
export function buildBridge({ network, signals }: Site, design: Design): void {
  const curves = switchCurves(design.bridge);
  POSITIONS.forEach(({ name, from, to }, gate) => {
    network.characteristic(from, to, { name, part: 'bridge', curves, gate, source: 0 });
    network.capacitor(`${name}, capacitance`, 'bridge', from, to, design.bridge.outputCapacitance);
    signals.push(
      { name: `${name} voltage`, unit: 'V', bay: 'bridge', terms: voltageBetween(from, to) },
      {
        name: `${name} current`,
        unit: 'A',
        bay: 'bridge',
        terms: [{ of: 'characteristic', name, weight: 1 }],
      },
    );
  });
  signals.push({
    name: 'bridge voltage',
    unit: 'V',
    bay: 'bridge',
    terms: voltageBetween(LEG_A, LEG_B),
  });
}

/**
 * The gate signals over one drive period. Leg A: high for half a period plus the width error,
 * then low. Leg B runs opposite to leg A, delayed by the phase shift short of 180°. Every switch
 * turns on later by the dead time.
 */
export function bridgePattern(design: Design): GatePattern {
  const { frequency, deadTime, phaseShift, widthError } = design.bridge;
  const period = 1 / frequency;
  const width = period / 2 + widthError;
  const shift = ((180 - phaseShift) / 360) * period;
  return gatePattern(
    period,
    [
      { gate: 0, from: deadTime, length: width - deadTime },
      { gate: 1, from: width + deadTime, length: period - width - deadTime },
      { gate: 2, from: shift + width + deadTime, length: period - width - deadTime },
      { gate: 3, from: shift + deadTime, length: width - deadTime },
    ],
    // The first commands come at time 0 to switches that were all off: they wait as any other.
    deadTime,
  );
}
