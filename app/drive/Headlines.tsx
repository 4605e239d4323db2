/** The four readings that stand in view all day. */
import { READINGS, type ReadingName } from '../../sim-core/index.ts';
import { figureOf } from '../figure.ts';
import { useRun } from '../run/store.ts';

const HEADLINES = [
  { reading: 'outputVoltage', label: 'Output voltage' },
  { reading: 'outputCurrent', label: 'Output current' },
  { reading: 'primaryPeak', label: 'Primary peak' },
  { reading: 'supplyPower', label: 'Supply power' },
] as const satisfies readonly { reading: ReadingName; label: string }[];

function Headline({ reading, label }: { reading: ReadingName; label: string }) {
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
    </div>
  );
}

/** Output voltage, output current, primary peak and supply power. */
export function Headlines() {
  return (
    <dl className="headlines">
      {HEADLINES.map(({ reading, label }) => (
        <Headline key={reading} reading={reading} label={label} />
      ))}
    </dl>
  );
}
