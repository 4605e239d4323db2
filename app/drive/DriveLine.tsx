/** The drive line: what is turned all day, what the run is doing, and four readings. */
import './drive.css';
import { type Design, fieldOf, GROUPS } from '../../sim-core/index.ts';
import { setValue } from '../document/actions.ts';
import { applyEdit, useDocument } from '../document/store.ts';
import { BAYS, bayOfPlace, openBayOf } from '../power-path/bays/bays.ts';
import { FieldEditor } from '../quantity/FieldEditor.tsx';
import { useRun } from '../run/store.ts';
import { Headlines } from './Headlines.tsx';
import { RunState } from './RunState.tsx';
import { REFUSAL_ID, useRefusal } from './refusal.ts';
import { Turn } from './Turn.tsx';

/** Values of the bridge that stand beside the two large ones. */
const SMALL = [
  'phaseShift',
  'widthError',
  'deadTime',
] as const satisfies readonly (keyof Design['bridge'])[];

function SmallField({ name }: { name: (typeof SMALL)[number] }) {
  const value = useDocument((state) => state.design.bridge[name]);
  const field = fieldOf('bridge', name);
  if (!field) return null;
  return (
    <FieldEditor
      field={field}
      value={value}
      place={`bridge.${name}`}
      onChange={(next) => applyEdit(setValue(useDocument.getState().design, 'bridge', name, next))}
    />
  );
}

/** Why the run failed or the design was refused, with the way to the place. */
function ProblemNote() {
  const problem = useRun((run) => run.problem);
  if (!problem) return null;
  const bay = bayOfPlace(problem.place);
  return (
    <div className="note" role="alert">
      {problem.message}{' '}
      {bay && (
        <button type="button" className="link" onClick={() => openBayOf(problem.place)}>
          Open {BAYS[bay].title.toLowerCase()}
        </button>
      )}
    </div>
  );
}

/** Why a turned or typed value was refused. */
function RefusalNote() {
  const message = useRefusal((state) => state.message);
  if (message === null) return null;
  return (
    <div className="note" id={REFUSAL_ID} role="alert">
      {message}
    </div>
  );
}

/** The band that stays in view. */
export function DriveLine() {
  const voltage = useDocument((state) => state.design.supply.voltage);
  const frequency = useDocument((state) => state.design.bridge.frequency);
  return (
    <section className="drive" aria-label="Drive line">
      <Turn
        group="supply"
        name="voltage"
        field={GROUPS.supply.voltage}
        value={voltage}
        least={3}
        first={1}
      />
      <Turn
        group="bridge"
        name="frequency"
        field={GROUPS.bridge.frequency}
        value={frequency}
        least={4}
        first={2}
      />
      <div className="small-set">
        {SMALL.map((name) => (
          <SmallField key={name} name={name} />
        ))}
      </div>
      <RunState />
      <Headlines />
      <RefusalNote />
      <ProblemNote />
    </section>
  );
}
