/** The four readings that stand in view all day. */
import { READINGS, type ReadingName } from '../../sim-core/index.ts';
import { figureOf, readingText } from '../figure.ts';
import { useRun } from '../run/store.ts';

const HEADLINES = [
  { reading: 'outputVoltage', label: 'Output voltage', under: 'percentageRipple', word: 'ripple' },
  { reading: 'outputCurrent', label: 'Output current', under: 'loadPower', word: 'load' },
  { reading: 'primaryPeak', label: 'Primary peak', under: 'primaryRms', word: 'rms' },
  { reading: 'supplyPower', label: 'Supply power', under: 'efficiency', word: 'efficient' },
] as const satisfies readonly {
  reading: ReadingName;
  label: string;
  /** The reading in the line below, with the word that follows it. */
  under: ReadingName;
  word: string;
}[];

function Headline({ reading, label, under, word }: (typeof HEADLINES)[number]) {
  const below = useRun((run) => run.readings?.[under] ?? null);
  const value = useRun((run) => run.readings?.[reading] ?? null);
  const figure = value === null ? null : figureOf(value, READINGS[reading].unit);
  return (
    <div>
      <dt className="lab" title={READINGS[reading].definition}>
        {label}
      </dt>
      <dd className="headline">
        {figure === null ? (
          <span className="m">–</span>
        ) : (
          <>
            {figure.number} <small>{figure.unit}</small>
          </>
        )}
      </dd>
      <dd className="lab" title={READINGS[under].definition}>
        {below !== null && `${readingText(under, below)} ${word}`}
      </dd>
    </div>
  );
}

/** Output voltage, output current, primary peak and supply power. */
export function Headlines() {
  return (
    <dl className="headlines">
      {HEADLINES.map((headline) => (
        <Headline key={headline.reading} {...headline} />
      ))}
    </dl>
  );
}
