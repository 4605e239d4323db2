/**
 * The kinds of value a design document is made of, and the types that follow from them.
 * A field says everything there is to say about one value: unit, bounds, default, words.
 */

/** Units of ISO 80000 used by design values, signals and readings; '' is a pure number. */
export type Unit =
  | 'V'
  | 'A'
  | 'Ω'
  | 'F'
  | 'H'
  | 'Hz'
  | 's'
  | 'Wb'
  | 'W'
  | 'J'
  | 'C'
  | '°'
  | '%'
  | '';

interface Words {
  /** Name on a value sheet, in the trade's words. */
  readonly label: string;
  /** One sentence: what the value means. */
  readonly about: string;
}

/** A real number in SI units (angles in degrees). */
export interface QuantityField<Optional extends boolean = boolean> extends Words {
  readonly kind: 'quantity';
  readonly unit: Unit;
  /** Bounds, inclusive. `zero` allows 0 as well when the lower bound is above it. */
  readonly min: number;
  readonly max: number;
  readonly zero: boolean;
  /** Why the bounds lie where they do; ends the sentence that refuses a value. */
  readonly why: string;
  /** An optional quantity may be null: the part is not fitted, the limit is absent. */
  readonly optional: Optional;
  /** What null means, in words ("not fitted"). */
  readonly absent: string;
  readonly default: Optional extends true ? number | null : number;
}

/** A whole number. */
export interface CountField extends Words {
  readonly kind: 'count';
  readonly min: number;
  readonly max: number;
  readonly why: string;
  readonly default: number;
}

/** One of a few named possibilities. */
export interface ChoiceField<T extends string = string> extends Words {
  readonly kind: 'choice';
  readonly options: readonly { readonly value: T; readonly label: string }[];
  readonly default: T;
}

/** Yes or no. */
export interface FlagField extends Words {
  readonly kind: 'flag';
  readonly default: boolean;
}

/** Plain text of bounded length; never interpreted. */
export interface TextField extends Words {
  readonly kind: 'text';
  readonly maxLength: number;
  readonly default: string;
}

/** The field of any value of a design. */
export type Field = QuantityField | CountField | ChoiceField | FlagField | TextField;

/** A group of fields: one object of the document. */
export type Group = Readonly<Record<string, Field>>;

/** The value that a field holds. */
export type ValueOf<F> =
  F extends QuantityField<infer Optional>
    ? Optional extends true
      ? number | null
      : number
    : F extends CountField
      ? number
      : F extends ChoiceField<infer T>
        ? T
        : F extends FlagField
          ? boolean
          : F extends TextField
            ? string
            : never;

/** The object that a group of fields describes. */
export type ValuesOf<G> = { readonly [K in keyof G]: ValueOf<G[K]> };

type QuantityWords = Words & {
  unit: Unit;
  min: number;
  max: number;
  zero?: boolean;
  why: string;
};

/** Declare a quantity that is always present. */
export function quantity(field: QuantityWords & { default: number }): QuantityField<false> {
  return { kind: 'quantity', zero: false, optional: false, absent: '', ...field };
}

/** Declare a quantity that may be absent (null). */
export function optionalQuantity(
  field: QuantityWords & { default: number | null; absent: string },
): QuantityField<true> {
  return { kind: 'quantity', zero: false, optional: true, ...field };
}

/** Declare a whole number. */
export function count(field: Omit<CountField, 'kind'>): CountField {
  return { kind: 'count', ...field };
}

/** Declare a choice; the type of its value is the union of the options' values. */
export function choice<const T extends string>(
  field: Words & {
    options: readonly { readonly value: T; readonly label: string }[];
    default: NoInfer<T>;
  },
): ChoiceField<T> {
  return { kind: 'choice', ...field };
}

/** Declare a yes-or-no value. */
export function flag(field: Omit<FlagField, 'kind'>): FlagField {
  return { kind: 'flag', ...field };
}

/** Declare a text. */
export function text(field: Omit<TextField, 'kind'>): TextField {
  return { kind: 'text', ...field };
}
