/**
 * A large number that is turned digit by digit: arrow keys, wheel, vertical drag, the two round
 * buttons, or a typed value. Shift turns the digit above, Alt the digit below.
 */
import { type KeyboardEvent, type PointerEvent, useCallback, useId, useRef, useState } from 'react';
import { formatQuantity, type GroupName, type QuantityField } from '../../sim-core/index.ts';
import { setValue } from '../document/actions.ts';
import { applyEdit, useDocument } from '../document/store.ts';
import { parseQuantity } from '../quantity/parse.ts';
import { digitsOf, stepDigit } from './digits.ts';
import { REFUSAL_ID, refuse, useRefusal } from './refusal.ts';
import { Tape } from './Tape.tsx';

/** Pixels of vertical drag, and of wheel travel, to a step. */
const DRAG = 12;
const WHEEL = 60;
/** More characters than this have no room in the largest size on most screens. */
const LONG = 5;

const shiftOf = (event: { shiftKey: boolean; altKey: boolean }) =>
  event.shiftKey ? 1 : event.altKey ? -1 : 0;

/** Name of a digit's place: "tens", "tenths of a kilo" is said as the step it makes. */
const placeOf = (power: number, unit: QuantityField['unit']) =>
  `steps of ${formatQuantity(10 ** power, unit)}`;

/** Typing a value in place of turning it. */
function TypedValue({
  field,
  first,
  onCommit,
  onClose,
}: {
  field: QuantityField;
  first: string;
  /** Takes the value; returns the sentence that refuses it, or null. */
  onCommit: (value: number) => string | null;
  /** Puts the number back; `keepFocus` gives it the focus as well. */
  onClose: (keepFocus: boolean) => void;
}) {
  const [text, setText] = useState(first);
  const refused = useRefusal((state) => state.message !== null);
  const meant = parseQuantity(text, field.unit);
  const done = useRef(false);
  const close = (keepFocus: boolean) => {
    done.current = true;
    onClose(keepFocus);
  };
  const commit = (keepFocus: boolean) => {
    if (done.current) return;
    if (meant === null) return close(keepFocus);
    const message = typeof meant === 'number' ? onCommit(meant) : meant.problem;
    refuse(message);
    if (message === null) close(keepFocus);
  };
  return (
    <>
      <span className="lab meant">
        {typeof meant === 'number'
          ? `means ${formatQuantity(meant, field.unit, 9)}`
          : 'Enter takes it'}
      </span>
      <input
        className={refused ? 'big typed bad' : 'big typed'}
        // biome-ignore lint/a11y/noAutofocus: the field replaces the number that had the focus
        autoFocus
        aria-label={`${field.label}, new value`}
        aria-invalid={refused}
        aria-describedby={refused ? REFUSAL_ID : undefined}
        autoComplete="off"
        spellCheck={false}
        value={text}
        onChange={(event) => setText(event.target.value)}
        onFocus={(event) => first.length > 1 && event.currentTarget.select()}
        onBlur={() => commit(false)}
        onKeyDown={(event) => {
          if (event.key === 'Enter') commit(true);
          if (event.key === 'Escape') close(true);
        }}
      />
    </>
  );
}

/** One of the two numbers that are turned all day: a value of the design with its tape. */
export function Turn({
  group,
  name,
  field,
  value,
  least,
  first,
}: {
  group: GroupName;
  name: string;
  field: QuantityField;
  value: number;
  /** Digits shown at the least. */
  least: number;
  /** Power of ten of the digit that is chosen at first. */
  first: number;
}) {
  const [power, setPower] = useState(first);
  const [typing, setTyping] = useState<string | null>(null);
  const drag = useRef<{ y: number; power: number } | null>(null);
  const spin = useRef<HTMLDivElement>(null);
  const label = useId();
  const shown = digitsOf(value, least, power);

  const put = (next: number): string | null => {
    const message = applyEdit(setValue(useDocument.getState().design, group, name, next));
    return message && `${message} Still ${formatQuantity(value, field.unit, 7)}.`;
  };
  const turn = useCallback(
    (steps: number, at: number) => {
      // Always from the store: several steps may come before the page is drawn again.
      const { design } = useDocument.getState();
      const now = (design[group] as Readonly<Record<string, unknown>>)[name] as number;
      const next = stepDigit(now, at, steps, field.min, field.max);
      const message = next === now ? null : applyEdit(setValue(design, group, name, next));
      refuse(message === null ? null : `${message} Still ${formatQuantity(now, field.unit, 7)}.`);
    },
    [group, name, field],
  );

  const onKeyDown = (event: KeyboardEvent) => {
    const steps: Readonly<Record<string, number>> = {
      ArrowUp: 1,
      ArrowDown: -1,
      PageUp: 10,
      PageDown: -10,
    };
    if (event.key in steps) {
      turn(steps[event.key], power + shiftOf(event));
    } else if (event.key === 'ArrowLeft') {
      setPower(Math.min(power + 1, shown.top + 1, Math.floor(Math.log10(field.max))));
    } else if (event.key === 'ArrowRight') {
      setPower(Math.max(power - 1, shown.top - 6, shown.bottom - 1));
    } else if (event.key === 'Enter' || event.key === 'F2') {
      setTyping(formatQuantity(value, field.unit, 9));
    } else if (/^[\d.,+−-]$/.test(event.key) && !event.ctrlKey && !event.metaKey) {
      setTyping(event.key);
    } else {
      return;
    }
    event.preventDefault();
  };

  // React listens to wheels passively; turning must keep the page from scrolling as well.
  const wheel = useCallback(
    (element: HTMLElement | null) => {
      if (!element) return undefined;
      let travel = 0;
      const onWheel = (event: WheelEvent) => {
        if (document.activeElement !== element) return;
        event.preventDefault();
        travel -= event.deltaY || event.deltaX;
        const steps = Math.trunc(travel / WHEEL);
        if (steps === 0) return;
        travel -= steps * WHEEL;
        turn(steps, power + shiftOf(event));
      };
      element.addEventListener('wheel', onWheel, { passive: false });
      return () => element.removeEventListener('wheel', onWheel);
    },
    [power, turn],
  );

  const onDigitDown = (event: PointerEvent<HTMLElement>, digit: number) => {
    setPower(digit);
    spin.current?.focus();
    event.preventDefault();
    event.currentTarget.setPointerCapture(event.pointerId);
    drag.current = { y: event.clientY, power: digit };
  };
  const onDigitMove = (event: PointerEvent) => {
    if (!drag.current) return;
    const steps = Math.trunc((drag.current.y - event.clientY) / DRAG);
    if (steps === 0) return;
    drag.current.y -= steps * DRAG;
    turn(steps, drag.current.power + shiftOf(event));
  };
  const close = (keepFocus: boolean) => {
    setTyping(null);
    refuse(null);
    // After the input has gone, the number takes the focus back.
    if (keepFocus) requestAnimationFrame(() => spin.current?.focus());
  };

  return (
    <div className="turn">
      <span className="lab" id={label}>
        {field.label}
      </span>
      {typing === null ? (
        <div className={shown.digits.length > LONG ? 'big long' : 'big'}>
          {/* The ref callback also wires the wheel, hence the small merge. */}
          <div
            ref={(element) => {
              spin.current = element;
              return wheel(element);
            }}
            className="digits"
            role="spinbutton"
            tabIndex={0}
            aria-labelledby={label}
            aria-valuenow={value}
            aria-valuemin={field.min}
            aria-valuemax={field.max}
            aria-valuetext={`${formatQuantity(value, field.unit, 7)}, ${placeOf(power, field.unit)}`}
            onKeyDown={onKeyDown}
          >
            {shown.digits.map(({ char, power: digit, leading }) =>
              digit === null ? (
                <span key="point">{char}</span>
              ) : (
                <span
                  key={digit}
                  className={`digit${digit === power ? ' on' : ''}${leading ? ' leading' : ''}`}
                  onPointerDown={(event) => onDigitDown(event, digit)}
                  onPointerMove={onDigitMove}
                  onPointerUp={() => {
                    drag.current = null;
                  }}
                  onPointerCancel={() => {
                    drag.current = null;
                  }}
                >
                  {char}
                </span>
              ),
            )}
          </div>
          <button
            type="button"
            className="big-unit"
            aria-label={`Type the ${field.label.toLowerCase()}`}
            title="Type a value"
            onClick={() => setTyping(formatQuantity(value, field.unit, 9))}
          >
            {shown.prefix}
            {field.unit}
          </button>
          <span className="plus-minus">
            <button
              type="button"
              aria-label={`${field.label}, less`}
              onClick={() => turn(-1, power)}
            >
              −
            </button>
            <button
              type="button"
              aria-label={`${field.label}, more`}
              onClick={() => turn(1, power)}
            >
              +
            </button>
          </span>
        </div>
      ) : (
        <TypedValue field={field} first={typing} onCommit={put} onClose={close} />
      )}
      <Tape field={field} value={value} ratio={name === 'voltage'} />
    </div>
  );
}
