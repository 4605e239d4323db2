/**
 * The door to the engine's data: the design's types, schema, check and examples, the signals
 * and the readings. Nothing here computes a run; that is solve.ts, for the worker alone.
 */
export {
  checkDesign,
  checkField,
  defaultDesign,
  differences,
  placesThatDiffer,
} from './design/check.ts';
export { formatQuantity, PREFIXES, takesPrefix } from './design/engineering.ts';
export { EXAMPLES } from './design/examples.ts';
export type {
  ChoiceField,
  CountField,
  Field,
  FlagField,
  Group,
  QuantityField,
  TextField,
  Unit,
} from './design/field.ts';
export type { Outcome, Problem } from './design/problem.ts';
export {
  type Design,
  fieldOf,
  GROUPS,
  type GroupName,
  type SectionOverride,
  WINDING_FIELDS,
  type WindingValues,
} from './design/schema.ts';
export type { Bay, Signal } from './plant/signal.ts';
export { READINGS, type ReadingName, type Readings } from './readings/catalogue.ts';
