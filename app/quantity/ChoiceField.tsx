import { type ChoiceField as Choice, checkField } from '../../sim-core/index.ts';
import { type Take, useAttempt } from './attempt.ts';
import { FieldRow } from './FieldRow.tsx';

/** One of a few named possibilities. */
export function ChoiceField({
  field,
  value,
  onChange,
  place,
}: {
  field: Choice;
  value: string;
  onChange: Take<string>;
  place: string;
}) {
  const attempt = useAttempt(value);
  return (
    <FieldRow field={field} place={place} problem={attempt.problem}>
      {(props) => (
        <select
          {...props}
          value={value}
          onChange={({ currentTarget: { value: chosen } }) =>
            attempt.finish(checkField(field, chosen) ?? onChange(chosen))
          }
        >
          {field.options.map((option) => (
            <option key={option.value} value={option.value}>
              {option.label}
            </option>
          ))}
        </select>
      )}
    </FieldRow>
  );
}
