import { type ComponentProps, type ReactNode, useId } from 'react';
import type { Field } from '../../sim-core/index.ts';
import './field.css';

/** What ties a control to its label, its meaning and its refusal. */
export interface ControlProps {
  readonly id: string;
  readonly 'aria-describedby': string;
  readonly 'aria-invalid': true | undefined;
}

/**
 * One line of a value sheet: label, control, and the sentence that refuses what was tried.
 * `place` is the path of the value in the document, by which the page finds the row.
 */
export function FieldRow({
  field,
  place,
  problem,
  scrub,
  children,
}: {
  field: Field;
  place: string;
  problem: string | null;
  /** Handlers that let the label be dragged. */
  scrub?: ComponentProps<'label'>;
  children: (props: ControlProps) => ReactNode;
}) {
  const id = useId();
  const about = `${id}-about`;
  const refusal = `${id}-problem`;
  return (
    <div className="field" data-place={place} data-kind={field.kind}>
      <label htmlFor={id} title={field.about} {...scrub}>
        {field.label}
      </label>
      {children({
        id,
        'aria-describedby': problem === null ? about : `${refusal} ${about}`,
        'aria-invalid': problem === null ? undefined : true,
      })}
      <span id={about} hidden>
        {field.about}
      </span>
      {problem !== null && (
        <p id={refusal} role="alert">
          {problem}
        </p>
      )}
    </div>
  );
}
