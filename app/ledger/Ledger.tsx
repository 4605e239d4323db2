/** The ledger: every reading with its definition, and what the engine did for them. */
import './ledger.css';
import { type ReactNode, useState } from 'react';
import { READINGS, type ReadingName, type Readings } from '../../sim-core/index.ts';
import { figureText } from '../figure.ts';
import type { Effort } from '../run/messages.ts';
import { type RunState, useRun } from '../run/store.ts';

/** Readings of the run itself rather than of the plant: they stand with the engine's counts. */
const OF_THE_RUN: ReadonlySet<ReadingName> = new Set(['energyAudit', 'settledDistance']);

const ALL = Object.keys(READINGS) as ReadingName[];
const OF_THE_PLANT = ALL.filter((name) => !OF_THE_RUN.has(name));

/** Rows between two gaps: a long column is read in fours. */
const GROUP = 4;

const COUNTS = {
  steps: { label: 'Steps', definition: 'Time steps taken since rest.' },
  rejected: {
    label: 'Steps rejected',
    definition: 'Steps taken again with a shorter length, their estimated error being too large.',
  },
  commutations: {
    label: 'Commutations',
    definition: 'Instants at which switches, diodes, the supply or the core changed their segment.',
  },
  factorisations: {
    label: 'Factorisations',
    definition: 'Times the matrix of the network was factorised.',
  },
  solves: { label: 'Solves', definition: 'Times the factorised network was solved.' },
} as const satisfies Record<keyof Effort, { label: string; definition: string }>;

/** How far the readings may be trusted, in words. */
const STANDING: Readonly<Record<RunState, string>> = {
  starting: 'none yet',
  running: 'last period, still moving',
  held: 'last period, held',
  settled: 'settled',
  failed: 'last period before it stopped',
};

/** What stands for a reading that has no meaning yet. */
const NONE = '–';

/**
 * The readings as lines of tab-separated text, for a spreadsheet: label, figure in the unit named
 * and not rounded, unit. A reading without a value leaves its figure empty.
 */
export function tabSeparated(readings: Readings | null, standing: string): string {
  const rows = ALL.map((name) => {
    const { label, unit } = READINGS[name];
    return [label, readings?.[name] ?? '', unit];
  });
  return [['Reading', `Value (${standing})`, 'Unit'], ...rows]
    .map((row) => `${row.join('\t')}\n`)
    .join('');
}

export function Ledger() {
  const state = useRun((run) => run.state);
  const standing = STANDING[state];
  const [told, setTold] = useState('');
  const copy = () =>
    navigator.clipboard.writeText(tabSeparated(useRun.getState().readings, standing)).then(
      () => setTold('Copied'),
      () => setTold('The browser did not allow copying'),
    );
  return (
    <section className="ledger" aria-label="Ledger">
      <table>
        <caption>
          <div className="ledger-head">
            <span className="ledger-title">Readings</span>{' '}
            <span className="ledger-standing">{standing}</span>{' '}
            <span role="status" className="ledger-told">
              {told}
            </span>
            <button type="button" className="ledger-copy" onClick={copy}>
              Copy
            </button>
          </div>
        </caption>
        <tbody>
          {OF_THE_PLANT.map((name, i) => (
            <ReadingRow key={name} name={name} apart={i % GROUP === 0 && i > 0} />
          ))}
        </tbody>
      </table>
      <table className="engine">
        <caption>
          <div className="ledger-head">
            <span className="ledger-title">Engine</span>{' '}
            <span className="ledger-standing">since rest</span>
          </div>
        </caption>
        <tbody>
          {[...OF_THE_RUN].map((name) => (
            <ReadingRow key={name} name={name} apart={false} />
          ))}
          {(Object.keys(COUNTS) as (keyof Effort)[]).map((name, i) => (
            <CountRow key={name} name={name} apart={i === 0} />
          ))}
        </tbody>
      </table>
    </section>
  );
}

function ReadingRow({ name, apart }: { name: ReadingName; apart: boolean }) {
  const { label, unit, definition } = READINGS[name];
  const value = useRun((run) => run.readings?.[name] ?? null);
  return (
    <Row label={label} definition={definition} apart={apart}>
      {value === null ? NONE : figureText(value, unit, 4)}
    </Row>
  );
}

/** Thousands apart by a thin space (ISO 80000-1). */
const grouped = (count: number) => String(count).replace(/\B(?=(\d{3})+$)/g, '\u2009');

function CountRow({ name, apart }: { name: keyof Effort; apart: boolean }) {
  const { label, definition } = COUNTS[name];
  const count = useRun((run) => run.effort?.[name] ?? null);
  return (
    <Row label={label} definition={definition} apart={apart}>
      {count === null ? NONE : grouped(count)}
    </Row>
  );
}

interface RowProperties {
  readonly label: string;
  readonly definition: string;
  /** Whether a gap sets the row off from those above. */
  readonly apart: boolean;
  readonly children: ReactNode;
}

/** A row whose label opens the definition under it. */
function Row({ label, definition, apart, children }: RowProperties) {
  const [open, setOpen] = useState(false);
  return (
    <>
      <tr className={apart ? 'ledger-apart' : undefined}>
        <th scope="row">
          <button type="button" aria-expanded={open} onClick={() => setOpen(!open)}>
            {label}
          </button>
        </th>
        <td aria-label={children === NONE ? 'no value yet' : undefined}>{children}</td>
      </tr>
      {open && (
        <tr className="ledger-definition">
          <td colSpan={2}>{definition}</td>
        </tr>
      )}
    </>
  );
}
