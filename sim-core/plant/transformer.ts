/**
 * The transformer bay: primary resistance and leakage to the star point, magnetising branch and
 * core-loss resistance there, and one winding per section behind its own leakage (star model).
 * The screen and core are earthed.
 */
import type { Design, WindingValues } from '../design/schema.ts';
import { EARTH, type Piece, piecesThrough } from '../network/network.ts';
import { voltageBetween } from '../network/probe.ts';
import { LEG_B } from './bridge.ts';
import type { Site } from './site.ts';
import { PRIMARY } from './tank.ts';

const STAR = 'star point';
const CORE = 'core';
const PRIMARY_LEAKAGE = 'primary leakage';

/** Nodes of the ends of section k, counted from 1. */
export const windingStart = (k: number): string => `section ${k}, end a`;
export const windingEnd = (k: number): string => `section ${k}, end b`;

/** Name of section k's winding. */
const windingName = (k: number): string => `section ${k} winding`;

/** The values of section k, counted from 1, with what it overrides. */
export function windingOf(design: Design, k: number): WindingValues {
  const override = design.overrides.find((o) => o.section === k);
  return { ...design.sections, ...override };
}

/** Magnetising current against flux linkage: the inductance below the knee, less above it. */
function magnetisingCurve(design: Design): Piece[] {
  const { magnetisingInductance, kneeFluxLinkage, saturatedInductance } = design.transformer;
  const slope = 1 / magnetisingInductance;
  if (kneeFluxLinkage === null) return [{ low: -Infinity, high: Infinity, slope, offset: 0 }];
  const kneeCurrent = kneeFluxLinkage * slope;
  return piecesThrough(
    [
      [-kneeFluxLinkage, -kneeCurrent],
      [kneeFluxLinkage, kneeCurrent],
    ],
    1 / saturatedInductance,
    1 / saturatedInductance,
  );
}

/** Add the primary side, the core and every section's winding with its capacitances. */
export function buildTransformer({ network, signals }: Site, design: Design): void {
  const { primaryResistance, primaryLeakage, remanence, coreLossResistance } = design.transformer;
  network.inductor(
    PRIMARY_LEAKAGE,
    'transformer',
    PRIMARY,
    STAR,
    primaryLeakage,
    primaryResistance,
  );
  network.core(STAR, LEG_B, {
    name: CORE,
    part: 'transformer',
    pieces: magnetisingCurve(design),
    fluxLinkage: remanence,
  });
  network.resistor('core loss', 'transformer', STAR, LEG_B, coreLossResistance);
  signals.push(
    {
      name: 'primary voltage',
      unit: 'V',
      bay: 'transformer',
      terms: voltageBetween(PRIMARY, LEG_B),
    },
    {
      name: 'primary current',
      unit: 'A',
      bay: 'transformer',
      terms: [{ of: 'inductor', name: PRIMARY_LEAKAGE, weight: 1 }],
    },
    {
      name: 'flux linkage',
      unit: 'Wb',
      bay: 'transformer',
      terms: [{ of: 'core', name: CORE, weight: 1 }],
    },
  );
  for (let k = 1; k <= design.sections.count; k++) {
    const winding = windingOf(design, k);
    const a = windingStart(k);
    const b = windingEnd(k);
    // The EMF drives current out of a: the branch runs from b to a through the winding.
    network.inductor(
      windingName(k),
      'transformer',
      b,
      a,
      winding.leakageInductance,
      winding.resistance,
      {
        ratio: winding.sense === 'forward' ? winding.ratio : -winding.ratio,
        from: STAR,
        to: LEG_B,
      },
    );
    // Halves at the ends alone would overstate the differential part threefold: hence −1/6.
    network.capacitor(
      `section ${k} winding capacitance`,
      'transformer',
      a,
      b,
      winding.ownCapacitance - winding.screenCapacitance / 6,
    );
    network.capacitor(
      `section ${k} screen capacitance at a`,
      'transformer',
      a,
      EARTH,
      winding.screenCapacitance / 2,
    );
    network.capacitor(
      `section ${k} screen capacitance at b`,
      'transformer',
      b,
      EARTH,
      winding.screenCapacitance / 2,
    );
    signals.push(
      {
        name: `section ${k} winding voltage`,
        unit: 'V',
        bay: 'transformer',
        terms: voltageBetween(a, b),
      },
      {
        name: `section ${k} winding current`,
        unit: 'A',
        bay: 'transformer',
        terms: [{ of: 'inductor', name: windingName(k), weight: 1 }],
      },
    );
  }
}
