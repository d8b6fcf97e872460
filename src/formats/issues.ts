import { type Place, pathText } from './json.ts';
import { nearestName } from './nearest.ts';
import type { Problem } from './problems.ts';
import { z } from './zod.ts';

/** What stands around an issue: the schema, the value read, the places in its text. */
export interface IssueContext {
  readonly schema: z.ZodType;
  readonly value: unknown;
  readonly places: ReadonlyMap<string, Place>;
}

type Issue = z.core.$ZodIssue;

/** The value at a path, or undefined; looks at own fields only. */
export function valueAt(value: unknown, path: readonly PropertyKey[]): unknown {
  let current = value;
  for (const key of path) {
    if (typeof current !== 'object' || current === null || !Object.hasOwn(current, key)) return undefined;
    current = (current as Record<PropertyKey, unknown>)[key];
  }
  return current;
}

function unwrap(schema: z.core.$ZodType | undefined): z.core.$ZodType | undefined {
  let inner = schema;
  while (inner instanceof z.ZodOptional || inner instanceof z.ZodNullable) inner = inner.unwrap();
  return inner;
}

/** Of a union, the member a value was meant for: by its discriminator, else the object for an object. */
function memberFor(union: z.ZodUnion, value: unknown): z.core.$ZodType | undefined {
  const members = union.options as readonly z.core.$ZodType[];
  const objects = members.filter((member) => member instanceof z.ZodObject);
  if (union instanceof z.ZodDiscriminatedUnion) {
    const key = union.def.discriminator;
    const wanted = valueAt(value, [key]);
    return objects.find((member) => {
      const literal = unwrap(member.shape[key]);
      return literal instanceof z.ZodLiteral && literal.values.has(wanted as never);
    });
  }
  if (Array.isArray(value)) return members.find((member) => member instanceof z.ZodArray);
  const isObject = typeof value === 'object' && value !== null;
  return isObject ? objects[0] : members.find((member) => !(member instanceof z.ZodObject));
}

/** The schema of the field at a path, as far as the value tells which it is. */
export function schemaAt(schema: z.ZodType, value: unknown, path: readonly PropertyKey[]): z.core.$ZodType | undefined {
  let field = unwrap(schema);
  let current = value;
  for (const key of path) {
    if (field instanceof z.ZodUnion) {
      if (field instanceof z.ZodDiscriminatedUnion && key === field.def.discriminator) return field;
      field = unwrap(memberFor(field, current));
    }
    if (field instanceof z.ZodObject) field = unwrap(field.shape[String(key)]);
    else if (field instanceof z.ZodArray) field = unwrap(field.element);
    else if (field instanceof z.ZodTuple) field = unwrap(field.def.items[Number(key)]);
    else if (field instanceof z.ZodRecord) field = unwrap(field.valueType);
    else return undefined;
    current = valueAt(current, [key]);
  }
  return field;
}

function metaOf(schema: z.core.$ZodType | undefined): { title?: string; unit?: string } {
  return schema instanceof z.ZodType ? ((schema.meta() as { title?: string; unit?: string } | undefined) ?? {}) : {};
}

/** What a field may hold, in words: "0.1 to 200 um", "water or oil". */
export function allowedText(schema: z.core.$ZodType | undefined): string {
  const field = unwrap(schema);
  const { unit } = metaOf(field);
  const withUnit = (text: string) => (unit ? `${text} ${unit}` : text);
  if (field instanceof z.ZodNumber) {
    const whole = field.format === 'safeint' ? 'whole numbers, ' : '';
    const { minValue, maxValue } = field;
    const bounded = minValue !== null && maxValue !== null && Number.isFinite(minValue) && Number.isFinite(maxValue);
    return bounded ? `${whole}${withUnit(`${minValue} to ${maxValue}`)}` : `${whole}${withUnit('a finite number')}`;
  }
  if (field instanceof z.ZodEnum) return field.options.join(', ');
  if (field instanceof z.ZodLiteral) return [...field.values].map(String).join(', ');
  if (field instanceof z.ZodString)
    return field.maxLength === null ? 'text' : `text of at most ${field.maxLength} characters`;
  if (field instanceof z.ZodTuple) return `a list of ${field.def.items.length} in square brackets`;
  if (field instanceof z.ZodArray) {
    const { minimum, maximum } = field._zod.bag as { readonly minimum?: number; readonly maximum?: number };
    const counted = minimum !== undefined && maximum !== undefined && maximum < 1e9;
    return counted ? `a list of ${minimum} to ${maximum} in square brackets` : 'a list in square brackets';
  }
  if (field instanceof z.ZodDiscriminatedUnion) return `one of the kinds ${kindsOf(field).join(', ')}`;
  if (field instanceof z.ZodUnion)
    return field.options.map((member) => allowedText(member as z.core.$ZodType)).join('; or ');
  if (field instanceof z.ZodObject) return `an object with ${Object.keys(field.shape).join(', ')}`;
  return '';
}

function kindsOf(union: z.ZodDiscriminatedUnion): string[] {
  return union.options.flatMap((member) => {
    const literal = member instanceof z.ZodObject ? unwrap(member.shape[union.def.discriminator]) : undefined;
    return literal instanceof z.ZodLiteral ? [...literal.values].map(String) : [];
  });
}

/** Every field name of a schema with the paths it has, for a name that stands in the wrong place. */
function pathsByName(
  schema: z.core.$ZodType | undefined,
  base = '',
  into = new Map<string, string>(),
): Map<string, string> {
  const field = unwrap(schema);
  if (field instanceof z.ZodUnion) {
    for (const member of field.options) pathsByName(member as z.core.$ZodType, base, into);
  }
  if (field instanceof z.ZodArray) pathsByName(field.element, `${base}[]`, into);
  if (!(field instanceof z.ZodObject)) return into;
  for (const [name, inner] of Object.entries(field.shape)) {
    const path = base === '' ? name : `${base}.${name}`;
    if (!into.has(name)) into.set(name, path);
    pathsByName(inner as z.core.$ZodType, path, into);
  }
  return into;
}

const knownNames = new WeakMap<z.ZodType, ReadonlyMap<string, string>>();

/** `pathsByName` of a schema, kept: schemas do not change. */
function namesOf(schema: z.ZodType): ReadonlyMap<string, string> {
  const names = knownNames.get(schema) ?? pathsByName(schema);
  knownNames.set(schema, names);
  return names;
}

/** A context with every name of its schema. */
interface NamedContext extends IssueContext {
  readonly names: ReadonlyMap<string, string>;
}

function problem(context: IssueContext, path: readonly PropertyKey[], message: string, allowed: string): Problem {
  const text = pathText(path);
  const place = context.places.get(text) ?? context.places.get(pathText(path.slice(0, -1)));
  return {
    path: text,
    value: valueAt(context.value, path),
    allowed,
    message,
    severity: 'refuse',
    ...(place && { place }),
  };
}

function unknownField(context: NamedContext, parent: readonly PropertyKey[], key: string): Problem {
  const path = [...parent, key];
  const field = schemaAt(context.schema, context.value, parent);
  const shape = field instanceof z.ZodUnion ? unwrap(memberFor(field, valueAt(context.value, parent))) : field;
  const known = shape instanceof z.ZodObject ? Object.keys(shape.shape) : [];
  const allowed = known.length > 0 ? `the fields ${known.join(', ')}` : 'nothing';
  const say = (what: string) => problem(context, path, `There is no field of this name here. ${what}`, allowed);
  const near = nearestName(key, known);
  const elsewhere = context.names;
  const exact = elsewhere.get(key);
  if (exact !== undefined) return say(`It belongs at ${exact}.`);
  if (near !== undefined) return say(`Did you mean ${near}?`);
  const far = nearestName(key, elsewhere.keys());
  return say(far === undefined ? 'Take it out.' : `Did you mean ${elsewhere.get(far)}?`);
}

function kindOf(value: unknown): string {
  if (value === null) return 'null';
  if (Array.isArray(value)) return 'a list';
  if (typeof value === 'object') return 'an object';
  if (typeof value === 'string') return 'a text';
  return `a ${typeof value}`;
}

/** The message for a value that is missing, of the wrong type, out of range or not one of the words. */
function wrongValue(context: IssueContext, issue: Issue): Problem {
  const value = valueAt(context.value, issue.path);
  const field = schemaAt(context.schema, context.value, issue.path);
  const allowed = allowedText(field);
  const { title } = metaOf(field);
  const name = title ?? (pathText(issue.path) || 'The whole file');
  const say = (message: string) => problem(context, issue.path, message, allowed);
  if (value === undefined) return say(`${name} is missing. Add it.`);
  if (typeof value === 'number' && !Number.isFinite(value)) return say(`${name} must be a finite number.`);
  if (issue.code === 'too_small' || issue.code === 'too_big') {
    const bound = issue.code === 'too_small' ? `below ${issue.minimum}` : `above ${issue.maximum}`;
    if (typeof value === 'string') return say(`${name} is too ${issue.code === 'too_big' ? 'long' : 'short'}.`);
    if (Array.isArray(value)) return say(`${name} has too ${issue.code === 'too_big' ? 'many' : 'few'} items.`);
    return say(`${name} is ${bound}. Enter a value in the allowed range.`);
  }
  if (field instanceof z.ZodNumber && typeof value === 'number') return say(`${name} must be a whole number.`);
  if (field instanceof z.ZodEnum || field instanceof z.ZodDiscriminatedUnion || field instanceof z.ZodLiteral) {
    return say(`${name}: ${suggestWord(value, field)}`);
  }
  return say(`${name} cannot be ${kindOf(value)}. Enter ${allowed === '' ? 'another value' : allowed}.`);
}

function suggestWord(value: unknown, field: z.ZodEnum | z.ZodDiscriminatedUnion | z.ZodLiteral): string {
  if (field instanceof z.ZodLiteral) {
    return `this program reads ${[...field.values].map(String).join(', ')}. Correct it, or use the version that wrote the file.`;
  }
  const known = field instanceof z.ZodEnum ? field.options.map(String) : kindsOf(field);
  const near = typeof value === 'string' ? nearestName(value, known) : undefined;
  return near === undefined ? 'enter one of the allowed words.' : `did you mean ${near}?`;
}

/** Unknown fields of one object that are each explained; of more than these only the number is told. */
const MOST_EXPLAINED = 30;

function unknownFields(context: NamedContext, parent: readonly PropertyKey[], keys: readonly string[]): Problem[] {
  const explained = keys.slice(0, MOST_EXPLAINED).map((key) => unknownField(context, parent, key));
  const more = keys.length - explained.length;
  if (more === 0) return explained;
  const path = [...parent, keys[MOST_EXPLAINED] as string];
  return [
    ...explained,
    problem(context, path, `${more} fields here, from this one on, have unknown names. Take them out.`, ''),
  ];
}

/** Turns what the schema library reports into problems, each with path, value, allowed range and what to do. */
export function problemsOf(issues: readonly Issue[], context: IssueContext): Problem[] {
  return explain(issues, { ...context, names: namesOf(context.schema) });
}

function explain(issues: readonly Issue[], context: NamedContext): Problem[] {
  return issues.flatMap((issue) => {
    if (issue.code === 'unrecognized_keys') return unknownFields(context, issue.path, issue.keys);
    if (issue.code === 'invalid_union' && issue.errors.length > 0) {
      const deeper = (list: readonly Issue[]) =>
        list.some((one) => one.path.length > 0 || one.code === 'unrecognized_keys');
      const inner = issue.errors.find(deeper) ?? issue.errors[0] ?? [];
      return explain(
        inner.map((one) => ({ ...one, path: [...issue.path, ...one.path] })),
        context,
      );
    }
    if (issue.code === 'custom') return [problem(context, issue.path, issue.message, '')];
    if (issue.code === 'invalid_format') return [problem(context, issue.path, issue.message, 'a plain name')];
    return [wrongValue(context, issue)];
  });
}

/**
 * A copy of a value without the fields at and under the given paths, for judging what is left. Lists keep their places.
 */
export function without(value: unknown, paths: ReadonlySet<string>, path: readonly PropertyKey[] = []): unknown {
  if (path.length > 0 && paths.has(pathText(path))) return undefined;
  if (Array.isArray(value)) return value.map((item, index) => without(item, paths, [...path, index]));
  if (typeof value !== 'object' || value === null) return value;
  const kept: Record<string, unknown> = {};
  for (const [key, item] of Object.entries(value)) {
    const left = key === '__proto__' ? undefined : without(item, paths, [...path, key]);
    if (left !== undefined) kept[key] = left;
  }
  return kept;
}
