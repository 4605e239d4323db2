/**
 * From the design document to the network: every bay adds its elements and its signals.
 * The circuit is stated in the schema's words; each bay's file says how it is wired.
 */
import type { Design } from '../design/schema.ts';
import type { GatePattern } from '../network/gates.ts';
import { type Network, NetworkBuilder } from '../network/network.ts';
import { bridgePattern, buildBridge } from './bridge.ts';
import { buildOutput } from './output.ts';
import type { Signal } from './signal.ts';
import type { ProbedSignal, Site } from './site.ts';
import { buildStack } from './stack.ts';
import { buildSupply } from './supply.ts';
import { buildTank } from './tank.ts';
import { buildTransformer } from './transformer.ts';

/** A plant: the network of a design, its gating and its signals. */
export interface Plant {
  readonly design: Design;
  readonly network: Network;
  readonly pattern: GatePattern;
  readonly signals: readonly ProbedSignal[];
}

/** Build the plant of a checked design. */
export function assemble(design: Design): Plant {
  const site: Site = { network: new NetworkBuilder(), signals: [] };
  buildSupply(site, design);
  buildBridge(site, design);
  buildTank(site, design);
  buildTransformer(site, design);
  buildStack(site, design);
  buildOutput(site, design);
  return {
    design,
    network: site.network.finish(),
    pattern: bridgePattern(design),
    signals: site.signals,
  };
}

/** The signals of a design: names, units and bays. */
export function signalsOf(design: Design): readonly Signal[] {
  return assemble(design).signals.map(({ name, unit, bay }) => ({ name, unit, bay }));
}
