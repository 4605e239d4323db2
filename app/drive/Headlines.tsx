/** The four readings that stand in view all day. */
import { READINGS, type ReadingName } from '../../sim-core/index.ts';
import { readingText } from '../figure.ts';
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
  // Selected as text, so that only a change that shows draws anything again.
  const text = useRun((run) => {
    const value = run.readings?.[reading] ?? null;
    return value === null ? null : readingText(reading, value);
  });
  const below = useRun((run) => {
    const value = run.readings?.[under] ?? null;
    return value === null ? null : readingText(under, value);
  });
  const [number, unit] = text?.split(' ') ?? [];
  return (
    <div>
      <dt className="lab" title={READINGS[reading].definition}>
        {label}
      </dt>
      <dd className="headline">
        {text === null ? (
          <span className="m">–</span>
        ) : (
          <>
            {number} <small>{unit}</small>
          </>
        )}
      </dd>
      <dd className="lab" title={READINGS[under].definition}>
        {below !== null && `${below} ${word}`}
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
