/** The tank bay: series inductor and capacitor from leg A, parallel capacitor across the primary. */
import type { Design } from '../design/schema.ts';
import { voltageBetween } from '../network/probe.ts';
import { LEG_A, LEG_B } from './bridge.ts';
import type { Site } from './site.ts';

/** Node of the primary's terminal behind the tank; the other terminal is leg B. */
export const PRIMARY = 'primary terminal';

/** Add whatever parts of the tank are fitted. */
export function buildTank({ network, signals }: Site, design: Design): void {
  const { tank } = design;
  const afterInductor = 'after the series inductor';
  if (tank.seriesInductance === null) network.join(LEG_A, afterInductor);
  else {
    network.inductor(
      'series inductor',
      'tank',
      LEG_A,
      afterInductor,
      tank.seriesInductance,
      tank.seriesInductorResistance,
    );
    signals.push(
      {
        name: 'series inductor voltage',
        unit: 'V',
        bay: 'tank',
        terms: voltageBetween(LEG_A, afterInductor),
      },
      {
        name: 'series inductor current',
        unit: 'A',
        bay: 'tank',
        terms: [{ of: 'inductor', name: 'series inductor', weight: 1 }],
      },
    );
  }
  if (tank.seriesCapacitance === null) network.join(afterInductor, PRIMARY);
  else {
    network.capacitor(
      'series capacitor',
      'tank',
      afterInductor,
      PRIMARY,
      tank.seriesCapacitance,
      tank.seriesCapacitorResistance,
    );
    signals.push({
      name: 'series capacitor voltage',
      unit: 'V',
      bay: 'tank',
      terms: voltageBetween(afterInductor, PRIMARY),
    });
  }
  network.capacitor(
    'parallel capacitor',
    'tank',
    PRIMARY,
    LEG_B,
    tank.parallelCapacitance,
    tank.parallelCapacitorResistance,
  );
}
