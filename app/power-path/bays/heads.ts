/** What stands under the head of each bay: the readings that belong to it, in one line. */
import {
  type Bay,
  type Design,
  formatQuantity,
  type ReadingName,
  type Readings,
} from '../../../sim-core/index.ts';
import { figureText, readingText } from '../../figure.ts';

/** Sections whose voltages lie within this share of their mean are said to have it each. */
const EQUAL = 0.02;

/** Parts joined by commas; what is not known yet is left out. */
const list = (...parts: readonly (string | null)[]) => parts.filter((p) => p !== null).join(', ');

/**
 * The line under a bay's head.
 * @param joints  mean potential of the joints of the stack, volts; null before there are any
 * @param brief   keep to the first part, where there is little room
 */
export function headOf(
  bay: Bay,
  design: Design,
  readings: Readings | null,
  joints: readonly number[] | null,
  brief: boolean,
): string {
  const read = (name: ReadingName, word = '') => {
    const value = readings?.[name] ?? null;
    return value === null ? null : readingText(name, value) + word;
  };
  const { tank, transformer, sections } = design;
  const fitted = (value: number | null, unit: 'H' | 'F') =>
    value === null ? null : formatQuantity(value, unit, 3);

  switch (bay) {
    case 'supply':
      return brief
        ? (read('supplyCurrent') ?? '')
        : list(read('busVoltage'), read('supplyCurrent'));
    case 'bridge':
      return brief
        ? list(read('primaryPeak', ' peak'))
        : list(read('primaryPeak', ' peak'), read('primaryRms', ' rms'));
    case 'tank': {
      const parts = [
        fitted(tank.seriesInductance, 'H'),
        fitted(tank.seriesCapacitance, 'F'),
        fitted(tank.parallelCapacitance, 'F'),
      ].filter((part) => part !== null);
      if (parts.length === 0) return brief ? 'none' : 'no part fitted';
      return parts.length < 3 ? list(...parts) : `${parts.length} parts`;
    }
    case 'transformer': {
      const flux = readings?.fluxPeak ?? null;
      const knee = transformer.kneeFluxLinkage;
      if (flux === null) return '';
      if (brief)
        return knee === null
          ? figureText(flux, 'Wb')
          : `${((100 * flux) / knee).toFixed(0)} % of knee`;
      return knee === null
        ? `${figureText(flux, 'Wb')} peak`
        : `${figureText(flux, 'Wb')} of ${formatQuantity(knee, 'Wb', 3)}`;
    }
    case 'stack': {
      const n = sections.count;
      const alternating = design.rectifier.kind === 'none';
      const each = joints === null || alternating ? null : (joints[n] - joints[0]) / n;
      const words = n === 1 ? '1 section' : `${n} in series`;
      if (joints === null || each === null) return words;
      if (brief) return n === 1 ? figureText(each, 'V') : `${n} × ${figureText(each, 'V')}`;
      const unequal = joints.some(
        (potential, k) => k > 0 && Math.abs(potential - joints[k - 1] - each) > EQUAL * each,
      );
      return `${words}, ${figureText(each, 'V')}${n === 1 ? '' : unequal ? ' on average' : ' each'}`;
    }
    case 'output':
      return brief
        ? list(read('percentageRipple'))
        : list(read('percentageRipple', ' ripple'), read('ripplePeakToPeak', ' p-p'));
    case 'load':
      return brief ? list(read('outputCurrent')) : list(read('outputCurrent'), read('loadPower'));
  }
}
