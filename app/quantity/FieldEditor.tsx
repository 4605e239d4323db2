import type { Field } from '../../sim-core/index.ts';
import type { Take } from './attempt.ts';
import { ChoiceField } from './ChoiceField.tsx';
import { FlagField } from './FlagField.tsx';
import { NumberField } from './NumberField.tsx';
import { TextField } from './TextField.tsx';

/** What a value of a design may be. */
export type FieldValue = number | string | boolean | null;

/**
 * The row that edits any value of a design, as its field says. `onChange` puts a new value into
 * force and returns null, or returns the sentence that refuses it, which the row then shows.
 */
export function FieldEditor({
  field,
  value,
  onChange,
  place,
}: {
  field: Field;
  value: FieldValue;
  onChange: Take<FieldValue>;
  place: string;
}) {
  // The schema ties each field to the type of its value; the casts say so once, here.
  switch (field.kind) {
    case 'quantity':
    case 'count':
      return <NumberField {...{ field, onChange, place }} value={value as number | null} />;
    case 'choice':
      return <ChoiceField {...{ field, onChange, place }} value={value as string} />;
    case 'flag':
      return <FlagField {...{ field, onChange, place }} value={value as boolean} />;
    case 'text':
      return <TextField {...{ field, onChange, place }} value={value as string} />;
  }
}
