/** The signals of a plant: what can be plotted, read and written to a file, named in words. */
import type { Unit } from '../design/field.ts';

/** A stage of the power path, from supply to load. */
export type Bay = 'supply' | 'bridge' | 'tank' | 'transformer' | 'stack' | 'output' | 'load';

/** One signal of a plant. */
export interface Signal {
  /** Unique, in the trade's words: "section 3 winding current". */
  readonly name: string;
  readonly unit: Unit;
  readonly bay: Bay;
}
