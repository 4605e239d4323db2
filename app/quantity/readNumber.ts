/** What is typed into a number field, held against the field. */
import { type CountField, checkField, type QuantityField } from '../../sim-core/index.ts';
import { parseQuantity, type Unreadable } from './parse.ts';

/**
 * The value that `typed` means for `field` (null: absent), or the sentence that says why it
 * means none or may not be. An optional field takes nothing, or its word for absent, as null.
 */
export function readNumber(
  field: QuantityField | CountField,
  typed: string,
): { readonly value: number | null } | Unreadable {
  const optional = field.kind === 'quantity' && field.optional;
  const absent = optional && typed.trim().toLowerCase() === field.absent.toLowerCase();
  const value = absent ? null : parseQuantity(typed, field.kind === 'quantity' ? field.unit : '');
  if (value !== null && typeof value === 'object') return value;
  const problem = checkField(field, value);
  if (problem === null) return { value };
  // The likeliest slip of all, and the one with the widest gap: 22 mHz for 22 MHz.
  const mixed = /\d ?[mM]/.test(typed) ? ' m is milli, M is mega.' : '';
  return { problem: problem + mixed };
}
