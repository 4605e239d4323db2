import type { FlagField as Flag } from '../../sim-core/index.ts';
import { type Take, useAttempt } from './attempt.ts';
import { FieldRow } from './FieldRow.tsx';

/** Yes or no. */
export function FlagField({
  field,
  value,
  onChange,
  place,
}: {
  field: Flag;
  value: boolean;
  onChange: Take<boolean>;
  place: string;
}) {
  const attempt = useAttempt(String(value));
  return (
    <FieldRow field={field} place={place} problem={attempt.problem}>
      {(props) => (
        <input
          {...props}
          type="checkbox"
          checked={value}
          onChange={(event) => attempt.finish(onChange(event.currentTarget.checked))}
        />
      )}
    </FieldRow>
  );
}
