/** What the run is doing, as a word and a shape, and the two hands on it. */
import { figureText } from '../figure.ts';
import { hold, restart, resume } from '../run/session.ts';
import { type RunState as State, useRun } from '../run/store.ts';

const WORDS: Readonly<Record<State, string>> = {
  starting: 'Starting',
  running: 'Running',
  held: 'Held',
  settled: 'Settled',
  failed: 'Failed',
};

/** Shapes of the states, in a field 16 wide and 16 high. */
const SHAPES: Readonly<Record<State, string>> = {
  starting: 'M2 13H14',
  running: 'M1 8C3 1 6 1 8 8S13 15 15 8',
  held: 'M5 3V13M11 3V13',
  settled: 'M2 13C4 4 6 4 8 4H14',
  failed: 'M3 3L13 13M13 3L3 13',
};

function Detail() {
  const state = useRun((run) => run.state);
  const text = useRun((run) => {
    const distance = run.readings?.settledDistance ?? null;
    const steady = distance === null ? '' : `${figureText(distance, '%', 2)} from steady`;
    if (run.state === 'settled') {
      const after =
        run.settledAfter === null ? '' : `after ${figureText(run.settledAfter, 's', 2)}`;
      return [after, steady].filter((part) => part !== '').join('; ');
    }
    return run.time > 0 ? `at ${figureText(run.time, 's', 3)}${steady && `; ${steady}`}` : '';
  });
  return <span className="lab">{state === 'failed' ? 'see the note' : text || 'from rest'}</span>;
}

/** State of the run with its buttons. */
export function RunState() {
  const state = useRun((run) => run.state);
  const stands = state === 'held';
  return (
    <div className="state">
      <div>
        <span className="lab">State: simulated, not connected</span>
        <div className={`word ${state}`} role="status">
          <svg width="16" height="16" viewBox="0 0 16 16" aria-hidden="true">
            <path d={SHAPES[state]} />
          </svg>
          {WORDS[state]}
        </div>
        <Detail />
      </div>
      <div className="buttons">
        <button
          type="button"
          className="pill"
          disabled={state === 'failed'}
          onClick={() => (stands ? resume() : hold())}
        >
          {stands ? 'Run' : 'Hold'}
        </button>
        <button type="button" className="pill" onClick={() => restart()}>
          From rest
        </button>
      </div>
    </div>
  );
}
