/** The bays of the power path: which groups of values each one opens, and which is open. */

import { create } from 'zustand';
import type { Bay, GroupName } from '../../../sim-core/index.ts';

/** A group of values on a sheet, under its heading. */
interface Sheet {
  readonly title: string;
  readonly groups: readonly { readonly group: GroupName; readonly heading: string }[];
}

/** The one table of what stands where. */
export const BAYS: Readonly<Record<Bay, Sheet>> = {
  supply: {
    title: 'Supply',
    groups: [
      { group: 'supply', heading: 'Bench supply and bus' },
      { group: 'start', heading: 'At the start' },
    ],
  },
  bridge: { title: 'Bridge', groups: [{ group: 'bridge', heading: 'Drive and switches' }] },
  tank: { title: 'Tank', groups: [{ group: 'tank', heading: 'Between bridge and primary' }] },
  transformer: {
    title: 'Transformer',
    groups: [
      { group: 'transformer', heading: 'Primary and core' },
      { group: 'sections', heading: 'Sections, entered once for all' },
    ],
  },
  stack: {
    title: 'Stack',
    groups: [
      { group: 'rectifier', heading: 'Rectifier of every section' },
      { group: 'stack', heading: 'Earth' },
    ],
  },
  output: { title: 'Output', groups: [{ group: 'output', heading: 'Output network' }] },
  load: { title: 'Load', groups: [{ group: 'load', heading: 'What the supply feeds' }] },
};

/** Names of the bays, in the direction the energy flows. */
export const BAY_NAMES = Object.keys(BAYS) as readonly Bay[];

/** The bay that holds a place of the design ("bridge.deadTime"); null for the design as a whole. */
export function bayOfPlace(place: string): Bay | null {
  const head = place.split('.')[0];
  if (head === 'overrides') return 'transformer';
  return BAY_NAMES.find((bay) => BAYS[bay].groups.some(({ group }) => group === head)) ?? null;
}

/** Which bay is open; view state, kept nowhere. */
export const useOpenBay = create<{ readonly bay: Bay | null }>(() => ({
  // On a wide page the sheet has a place of its own beside the stairs.
  bay:
    typeof matchMedia === 'function' && matchMedia('(min-width: 1360px)').matches
      ? 'transformer'
      : null,
}));

/** Open a bay, or close it if it is the one that is open. */
export function toggleBay(bay: Bay): void {
  useOpenBay.setState((state) => ({ bay: state.bay === bay ? null : bay }));
}

/** Open the bay that holds a place of the design, if one does. */
export function openBayOf(place: string): void {
  const bay = bayOfPlace(place);
  if (bay) useOpenBay.setState({ bay });
}
