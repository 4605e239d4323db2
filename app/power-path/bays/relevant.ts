/** Which values have a meaning in a design as it stands; the others are not shown on its sheets. */
import type { Design, GroupName } from '../../../sim-core/index.ts';

type Rule = (design: Design) => boolean;

const fieldEffect: Rule = (d) => d.bridge.switchKind === 'field-effect';
const smoothing: Rule = (d) => d.rectifier.kind !== 'none';
const floating: Rule = (d) => d.stack.earth === 'floating';

/** Values that depend on another; every value not named here always counts. */
const RULES: { readonly [G in GroupName]?: { readonly [N in keyof Design[G]]?: Rule } } = {
  supply: {
    busCapacitorResistance: (d) => d.supply.busCapacitance !== null,
    leakageResistance: (d) => d.supply.earthing === 'midpoint' || d.supply.earthing === 'leakage',
  },
  bridge: {
    switchVoltage: (d) => !fieldEffect(d),
  },
  tank: {
    seriesInductorResistance: (d) => d.tank.seriesInductance !== null,
    seriesCapacitorResistance: (d) => d.tank.seriesCapacitance !== null,
    parallelCapacitorResistance: (d) => d.tank.parallelCapacitance !== null,
  },
  transformer: {
    saturatedInductance: (d) => d.transformer.kneeFluxLinkage !== null,
  },
  rectifier: {
    stages: (d) => d.rectifier.kind === 'ladder',
    couplingCapacitance: (d) => d.rectifier.kind === 'ladder',
    capacitance: smoothing,
    capacitorResistance: (d) =>
      smoothing(d) &&
      (d.rectifier.capacitance !== null || d.rectifier.couplingCapacitance !== null),
    diodeVoltage: smoothing,
    diodeResistance: smoothing,
    diodeOffResistance: smoothing,
    diodeCapacitance: smoothing,
  },
  stack: {
    joint: (d) => !floating(d),
    leakageResistance: floating,
    strayCapacitance: floating,
  },
  output: {
    probeCapacitance: (d) => d.output.probeResistance !== null,
    lead: (d) => d.output.tankResistance > 0 || d.output.loadEndResistance > 0,
  },
  load: {
    resistance: (d) => d.load.kind === 'resistor',
    current: (d) => d.load.kind === 'constant-current',
    kneeVoltage: (d) => d.load.kind === 'constant-current',
    shortResistance: (d) => d.load.kind === 'short',
  },
  start: {
    busCharged: (d) => d.supply.busCapacitance !== null,
  },
};

/** Whether `group.name` has a meaning in this design. */
export function relevant(design: Design, group: GroupName, name: string): boolean {
  const rules: Readonly<Record<string, Rule | undefined>> = RULES[group] ?? {};
  return !Object.hasOwn(rules, name) || rules[name]?.(design) !== false;
}
