import { type KeyboardEvent, type PointerEvent, useRef } from 'react';
import { type CountField, formatQuantity, type QuantityField } from '../../sim-core/index.ts';
import { type Take, useAttempt } from './attempt.ts';
import { FieldRow } from './FieldRow.tsx';
import { readNumber } from './readNumber.ts';
import { type Pace, stepValue } from './step.ts';

/** Digits that a field shows; what was typed with more stays in force in full. */
const DIGITS = 6;
/** Sideways travel of the pointer that makes one step, pixels. */
const TRAVEL = 4;

const plainDecimal = new Intl.NumberFormat('en', {
  useGrouping: false,
  maximumSignificantDigits: 15,
});

/**
 * A number for ARIA, whose attributes know no powers of ten: 0.000000001, not 1e-9. It is text,
 * as any attribute, though React's types ask for a number.
 */
const decimal = (value: number) => plainDecimal.format(value) as unknown as number;

const paceOf = (event: { shiftKey: boolean; altKey: boolean }): Pace =>
  event.shiftKey ? 'coarse' : event.altKey ? 'fine' : 'normal';

/**
 * A number with its unit, as people type it. Enter and leaving the field commit, Escape restores;
 * the arrow keys and dragging the label sideways turn it (Shift coarse, Alt fine). What is
 * refused stays visible with its reason while the last good value stays in force.
 */
export function NumberField({
  field,
  value,
  onChange,
  place,
}: {
  field: QuantityField | CountField;
  value: number | null;
  onChange: Take<number | null>;
  place: string;
}) {
  const print = (number: number) =>
    formatQuantity(number, field.kind === 'quantity' ? field.unit : '', DIGITS);
  const attempt = useAttempt(value === null ? '' : print(value));
  const input = useRef<HTMLInputElement>(null);
  const drag = useRef<{ x: number; readonly start: number } | null>(null);
  const dragged = useRef(false);
  const absent = field.kind === 'quantity' ? field.absent : '';

  const commit = () => {
    if (attempt.typed === null) return;
    const meant = readNumber(field, attempt.typed);
    attempt.finish('problem' in meant ? meant.problem : onChange(meant.value));
  };

  const step = (steps: number, pace: Pace) => {
    const meant = attempt.typed === null ? null : readNumber(field, attempt.typed);
    const from = (meant !== null && 'value' in meant ? meant.value : value) ?? field.default;
    // An absent part has no value to turn; it is typed first.
    if (from !== null) attempt.finish(onChange(stepValue(field, from, steps, pace)));
  };

  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key === 'Enter') commit();
    else if (event.key === 'ArrowUp' || event.key === 'ArrowDown') {
      step(event.key === 'ArrowUp' ? 1 : -1, paceOf(event));
    } else if (event.key === 'Escape') {
      const untouched = attempt.typed === null && attempt.problem === null && drag.current === null;
      // Nothing to restore: the key belongs to whatever encloses the field.
      if (untouched) return;
      if (drag.current !== null) onChange(drag.current.start);
      drag.current = null;
      attempt.finish(null);
    } else return;
    event.preventDefault();
    event.stopPropagation();
  };

  const scrub = {
    onPointerDown: (event: PointerEvent<HTMLLabelElement>) => {
      if (event.button !== 0 || value === null) return;
      event.currentTarget.setPointerCapture(event.pointerId);
      drag.current = { x: event.clientX, start: value };
      dragged.current = false;
    },
    onPointerMove: (event: PointerEvent<HTMLLabelElement>) => {
      if (drag.current === null) return;
      const steps = Math.trunc((event.clientX - drag.current.x) / TRAVEL);
      if (steps === 0) return;
      drag.current.x += steps * TRAVEL;
      // So that Escape reaches the field; a finger would only raise the keyboard over it.
      if (!dragged.current && event.pointerType === 'mouse') input.current?.focus();
      dragged.current = true;
      step(steps, paceOf(event));
    },
    onPointerUp: () => {
      drag.current = null;
    },
    onPointerCancel: () => {
      drag.current = null;
    },
    onClick: (event: { preventDefault(): void }) => {
      // The end of a drag is no click on the label.
      if (dragged.current) event.preventDefault();
      dragged.current = false;
    },
  };

  const inForce = value === null ? '' : ` Still ${print(value)}.`;
  const problem = attempt.problem === null ? null : attempt.problem + inForce;
  return (
    <FieldRow field={field} place={place} problem={problem} scrub={scrub}>
      {(props) => (
        <input
          {...props}
          ref={input}
          type="text"
          role="spinbutton"
          inputMode="text"
          autoComplete="off"
          autoCapitalize="off"
          spellCheck={false}
          enterKeyHint="done"
          placeholder={absent}
          value={attempt.text}
          aria-valuenow={value === null ? undefined : decimal(value)}
          aria-valuemin={field.kind === 'quantity' && field.zero ? 0 : decimal(field.min)}
          aria-valuemax={decimal(field.max)}
          aria-valuetext={attempt.text === '' ? absent : attempt.text}
          onChange={(event) => attempt.type(event.currentTarget.value)}
          onKeyDown={onKeyDown}
          onBlur={commit}
        />
      )}
    </FieldRow>
  );
}
