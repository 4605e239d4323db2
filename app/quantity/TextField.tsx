import type { KeyboardEvent } from 'react';
import { checkField, type TextField as Text } from '../../sim-core/index.ts';
import { type Take, useAttempt } from './attempt.ts';
import { FieldRow } from './FieldRow.tsx';

/** From this length on a text has lines, and Enter begins a new one. */
const LONG = 200;

/** Plain text. Leaving the field commits, as does Enter in a single line; Escape restores. */
export function TextField({
  field,
  value,
  onChange,
  place,
}: {
  field: Text;
  value: string;
  onChange: Take<string>;
  place: string;
}) {
  const attempt = useAttempt(value);
  const lines = field.maxLength >= LONG;
  const commit = () => {
    if (attempt.typed === null) return;
    attempt.finish(checkField(field, attempt.typed) ?? onChange(attempt.typed));
  };
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key === 'Enter' && !lines) commit();
    else if (event.key === 'Escape' && attempt.typed !== null) attempt.finish(null);
    else return;
    event.preventDefault();
    event.stopPropagation();
  };
  return (
    <FieldRow field={field} place={place} problem={attempt.problem}>
      {(props) => {
        const shared = {
          ...props,
          value: attempt.text,
          onChange: (event: { currentTarget: { value: string } }) =>
            attempt.type(event.currentTarget.value),
          onKeyDown,
          onBlur: commit,
        };
        return lines ? (
          <textarea rows={3} {...shared} />
        ) : (
          <input type="text" autoComplete="off" {...shared} />
        );
      }}
    </FieldRow>
  );
}
