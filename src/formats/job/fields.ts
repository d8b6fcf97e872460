import { z } from '../zod.ts';

/** What a field says about itself: for help, for messages and for the JSON schema. */
export interface FieldMeta {
  readonly title: string;
  readonly description: string;
  /** Unit as people write it; empty for a plain number or a name. */
  readonly unit: string;
}

/** A finite number from min to max, both allowed. */
export function quantity(min: number, max: number, unit: string, title: string, description: string) {
  return z.number().min(min).max(max).meta({ title, description, unit });
}

/** A length in millimetres. */
export function mm(min: number, max: number, title: string, description: string) {
  return quantity(min, max, 'mm', title, description);
}

/** A length in micrometres. */
export function um(min: number, max: number, title: string, description: string) {
  return quantity(min, max, 'um', title, description);
}

/** A whole number from min to max. */
export function count(min: number, max: number, title: string, description: string) {
  return z.int().min(min).max(max).meta({ title, description, unit: '' });
}

/** One of a few words. */
export function choice<const W extends readonly string[]>(words: W, title: string, description: string) {
  return z.enum(words).meta({ title, description, unit: '' });
}

/** True or false. */
export function flag(title: string, description: string) {
  return z.boolean().meta({ title, description, unit: '' });
}

/** A text of at most `longest` characters. */
export function words(longest: number, title: string, description: string) {
  return z.string().max(longest).meta({ title, description, unit: '' });
}

/** A list of `fewest` to `most` items. */
export function list<T extends z.ZodType>(item: T, fewest: number, most: number, title: string, description: string) {
  return z.array(item).min(fewest).max(most).meta({ title, description, unit: '' });
}

/** Two numbers from min to max, as [x, y]. */
export function pair(min: number, max: number, unit: string, title: string, description: string) {
  const number = (name: string) => quantity(min, max, unit, `${title}, ${name}`, description);
  return z.tuple([number('x'), number('y')]).meta({ title, description, unit });
}

/** A property of an own material: a number, or a number with its range. */
export function property(min: number, max: number, unit: string, title: string, description: string) {
  const number = quantity(min, max, unit, title, description);
  const bound = (which: string) => quantity(min, max, unit, `${title}, ${which}`, `The ${which} the lot may have.`);
  const ranged = z
    .strictObject({ nominal: number, min: bound('least').optional(), max: bound('most').optional() })
    .meta({ title, description: `${description} With its range.`, unit });
  return z.union([number, ranged]).meta({ title, description, unit });
}
