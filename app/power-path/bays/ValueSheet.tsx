/** The values of an open bay, walked from the schema. */

import type { Bay } from '../../../sim-core/index.ts';
import { type Field, GROUPS, type Group, type GroupName } from '../../../sim-core/index.ts';
import { setValue } from '../../document/actions.ts';
import { applyEdit, useDocument } from '../../document/store.ts';
import { FieldEditor, type FieldValue } from '../../quantity/FieldEditor.tsx';
import { BAYS } from './bays.ts';
import { OneSection } from './OneSection.tsx';
import { relevant } from './relevant.ts';

function Row({ group, name, field }: { group: GroupName; name: string; field: Field }) {
  const value = useDocument(
    (state) => (state.design[group] as Readonly<Record<string, FieldValue>>)[name],
  );
  const counts = useDocument((state) => relevant(state.design, group, name));
  if (!counts) return null;
  return (
    <FieldEditor
      field={field}
      value={value}
      place={`${group}.${name}`}
      onChange={(next) => applyEdit(setValue(useDocument.getState().design, group, name, next))}
    />
  );
}

/** The sheet of one bay; it lies right under its drawing. */
export function ValueSheet({ bay }: { bay: Bay }) {
  const { title, groups } = BAYS[bay];
  return (
    <section className="sheet" id="bay-sheet" aria-label={`${title}, values`}>
      <div className="sheet-columns" key={bay}>
        {groups.map(({ group, heading }) => (
          <div className="sheet-group" key={group}>
            <h2>{heading}</h2>
            {Object.entries(GROUPS[group] as Group).map(([name, field]) => (
              <Row key={name} group={group} name={name} field={field} />
            ))}
            {group === 'sections' && <OneSection />}
          </div>
        ))}
      </div>
    </section>
  );
}
