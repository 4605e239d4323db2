/**
 * The supply bay: a bench supply and its bus capacitor, between the rails.
 * As a one-port the supply is piecewise linear: blocking where it cannot absorb, constant
 * voltage behind its resistance, constant current at its limit.
 */
import type { Design } from '../design/schema.ts';
import { EARTH, type Piece } from '../network/network.ts';
import { voltageBetween } from '../network/probe.ts';
import type { Site } from './site.ts';

/** Nodes of the rails. */
export const POSITIVE_RAIL = 'positive rail';
export const NEGATIVE_RAIL = 'negative rail';

/** Name of the supply's element. */
const SUPPLY = 'supply';

/** Current into the positive terminal of the supply against the bus voltage. */
function supplyCurve(design: Design): Piece[] {
  const { voltage, resistance, currentLimit, absorbs } = design.supply;
  const slope = 1 / resistance;
  const limitAt = currentLimit === null ? -Infinity : voltage - currentLimit * resistance;
  const pieces: Piece[] = [];
  if (currentLimit !== null) {
    pieces.push({ low: -Infinity, high: limitAt, slope: 0, offset: -currentLimit });
  }
  const top = absorbs ? Infinity : voltage;
  pieces.push({ low: limitAt, high: top, slope, offset: -voltage * slope });
  if (!absorbs) pieces.push({ low: voltage, high: Infinity, slope: 0, offset: 0 });
  return pieces;
}

/** Add the supply, its bus capacitor and the earthing of the bus. */
export function buildSupply({ network, signals }: Site, design: Design): void {
  const { voltage, busCapacitance, busCapacitorResistance, earthing, leakageResistance } =
    design.supply;
  network.characteristic(POSITIVE_RAIL, NEGATIVE_RAIL, {
    name: SUPPLY,
    part: 'supply',
    curves: [supplyCurve(design)],
    gate: -1,
    source: voltage,
  });
  const charge = design.start.busCharged ? voltage : 0;
  if (earthing === 'midpoint') {
    // Two capacitors of twice the value, their joint earthed, each with its balancing resistor.
    for (const [from, to, side] of [
      [POSITIVE_RAIL, EARTH, 'upper'],
      [EARTH, NEGATIVE_RAIL, 'lower'],
    ] as const) {
      network.capacitor(
        `bus capacitor, ${side} half`,
        'supply',
        from,
        to,
        busCapacitance === null ? null : 2 * busCapacitance,
        busCapacitorResistance / 2,
        charge / 2,
      );
      network.resistor(`bus balancing, ${side} half`, 'supply', from, to, leakageResistance);
    }
  } else {
    network.capacitor(
      'bus capacitor',
      'supply',
      POSITIVE_RAIL,
      NEGATIVE_RAIL,
      busCapacitance,
      busCapacitorResistance,
      charge,
    );
    if (earthing === 'negative') network.join(NEGATIVE_RAIL, EARTH);
    else if (earthing === 'positive') network.join(POSITIVE_RAIL, EARTH);
    else {
      network.resistor('bus leakage, positive', 'supply', POSITIVE_RAIL, EARTH, leakageResistance);
      network.resistor('bus leakage, negative', 'supply', NEGATIVE_RAIL, EARTH, leakageResistance);
    }
  }
  signals.push(
    {
      name: 'bus voltage',
      unit: 'V',
      bay: 'supply',
      terms: voltageBetween(POSITIVE_RAIL, NEGATIVE_RAIL),
    },
    {
      name: 'supply current',
      unit: 'A',
      bay: 'supply',
      terms: [{ of: 'characteristic', name: SUPPLY, weight: -1 }],
    },
  );
}
