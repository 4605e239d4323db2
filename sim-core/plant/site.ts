/** Where the bays build: the network under construction and the signals found so far. */
import type { NetworkBuilder } from '../network/network.ts';
import type { Term } from '../network/probe.ts';
import type { Signal } from './signal.ts';

/** A signal together with what it is made of. */
export interface ProbedSignal extends Signal {
  readonly terms: readonly Term[];
}

/** What the bays build into. */
export interface Site {
  readonly network: NetworkBuilder;
  readonly signals: ProbedSignal[];
}
