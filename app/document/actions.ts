/** Edits as pure functions: a design and a wish in, a checked design or the refusal out. */
import {
  checkDesign,
  type Design,
  type GroupName,
  type Outcome,
  type SectionOverride,
  type WindingValues,
} from '../../sim-core/index.ts';

/**
 * The design with one value of a group changed. Fewer sections take the overrides of the
 * sections that are gone with them.
 */
export function setValue(
  design: Design,
  group: GroupName,
  name: string,
  value: unknown,
): Outcome<Design> {
  const next = { ...design, [group]: { ...design[group], [name]: value } };
  if (group === 'sections' && name === 'count' && typeof value === 'number') {
    const overrides = design.overrides.filter((override) => override.section <= value);
    return checkDesign({ ...next, overrides });
  }
  return checkDesign(next);
}

/** The design with its name or its notes changed. */
export function setTitle(design: Design, name: 'name' | 'notes', value: unknown): Outcome<Design> {
  return checkDesign({ ...design, [name]: value });
}

/** The design with one value of one section (from 1) set apart; undefined takes it back. */
export function setOverride(
  design: Design,
  section: number,
  name: keyof WindingValues,
  value: unknown,
): Outcome<Design> {
  const present = design.overrides.find((override) => override.section === section);
  const others = design.overrides.filter((override) => override.section !== section);
  return checkDesign({
    ...design,
    overrides: [...others, { ...present, section, [name]: value }],
  });
}

/** The design with one section (from 1) like its fellows again. */
export function clearOverride(design: Design, section: number): Outcome<Design> {
  const stays = (override: SectionOverride) => override.section !== section;
  return checkDesign({ ...design, overrides: design.overrides.filter(stays) });
}
