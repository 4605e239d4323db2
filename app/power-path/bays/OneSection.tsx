/** One section set apart from its fellows: which one, what differs, and the way back. */
import { useState } from 'react';
import {
  type Group,
  type SectionOverride,
  WINDING_FIELDS,
  type WindingValues,
} from '../../../sim-core/index.ts';
import { clearOverride, setOverride } from '../../document/actions.ts';
import { applyEdit, useDocument } from '../../document/store.ts';
import { FieldEditor, type FieldValue } from '../../quantity/FieldEditor.tsx';

const FIELDS = Object.entries(WINDING_FIELDS as Group);

/** "3: Own capacitance" in words, for the list of sections that differ. */
function words(override: SectionOverride): string {
  const names = FIELDS.filter(([name]) => name in override).map(([, field]) =>
    field.label.toLowerCase(),
  );
  return `section ${override.section} differs in ${names.join(', ')}`;
}

/** Chooser of a section and the values that are its own. */
export function OneSection() {
  const count = useDocument((state) => state.design.sections.count);
  const overrides = useDocument((state) => state.design.overrides);
  const common = useDocument((state) => state.design.sections) as Readonly<
    Record<string, FieldValue>
  >;
  const [chosen, setChosen] = useState<number | null>(null);
  const section = chosen !== null && chosen <= count ? chosen : null;
  const own = overrides.find((override) => override.section === section);

  return (
    <>
      <div className="differs-row">
        <label>
          One section alone{' '}
          <select
            value={section ?? ''}
            onChange={(event) => setChosen(Number(event.currentTarget.value) || null)}
          >
            <option value="">none chosen</option>
            {Array.from({ length: count }, (_, i) => i + 1).map((k) => (
              <option key={k} value={k}>
                section {k}
                {overrides.some((override) => override.section === k) ? ', differs' : ''}
              </option>
            ))}
          </select>
        </label>
        {own && section !== null && (
          <button
            type="button"
            className="link"
            onClick={() => applyEdit(clearOverride(useDocument.getState().design, section))}
          >
            Like the others
          </button>
        )}
        {overrides.map((override) => (
          <span className="m" key={override.section}>
            {words(override)}
          </span>
        ))}
      </div>
      {section !== null &&
        FIELDS.map(([name, field]) => (
          <FieldEditor
            key={`${section}.${name}`}
            field={field}
            value={
              (own as Readonly<Record<string, FieldValue>> | undefined)?.[name] ?? common[name]
            }
            place={`overrides.${section}.${name}`}
            onChange={(next) => {
              const { design } = useDocument.getState();
              return applyEdit(setOverride(design, section, name as keyof WindingValues, next));
            }}
          />
        ))}
    </>
  );
}
