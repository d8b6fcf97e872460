/** A place in a text, both counted from 1. */
export interface Place {
  readonly line: number;
  readonly column: number;
}

/** Why a text is not JSON, and where. */
export interface JsonFault extends Place {
  readonly message: string;
}

/** A JSON text read: its value, where each path stands, and the names given more than once. */
export interface JsonText {
  readonly value: unknown;
  /** Place of the value (for a field: of its name) by path, as written by `pathText`. */
  readonly places: ReadonlyMap<string, Place>;
  /** Fields given more than once in one object; the last value was kept. */
  readonly repeated: readonly Repeated[];
}

/** A field given again, with that later value. */
export interface Repeated {
  readonly path: string;
  readonly value: unknown;
}

/** Deepest nesting read; no file of this program comes near it. */
const DEEPEST = 64;

interface Cursor {
  readonly text: string;
  at: number;
  readonly places: Map<string, Place>;
  readonly repeated: Repeated[];
  readonly lineStarts: readonly number[];
}

class Fault {
  readonly at: number;
  readonly message: string;
  constructor(at: number, message: string) {
    this.at = at;
    this.message = message;
  }
}

/** A path as people write it: `cavity.limits.floorRaUm`, `passes[0].depthMm`; odd names in brackets and quotes. */
export function pathText(path: readonly PropertyKey[]): string {
  return path.reduce<string>((text, key) => joinPath(text, typeof key === 'number' ? key : String(key)), '');
}

function joinPath(base: string, key: string | number): string {
  if (typeof key === 'number') return `${base}[${key}]`;
  if (!/^[A-Za-z_$][\w$]*$/.test(key)) return `${base}[${JSON.stringify(key)}]`;
  return base === '' ? key : `${base}.${key}`;
}

/**
 * Reads JSON as RFC 8259 has it, and more strictly: fields given twice are reported, nesting is bounded, and every value's
 * place is kept. Never throws. Names such as `__proto__` become plain own fields and touch no prototype.
 */
export function readJson(text: string): JsonText | { readonly fault: JsonFault } {
  const lineStarts = [0];
  for (let at = text.indexOf('\n'); at >= 0; at = text.indexOf('\n', at + 1)) lineStarts.push(at + 1);
  const start = text.charCodeAt(0) === 0xfeff ? 1 : 0;
  const cursor: Cursor = { text, at: start, places: new Map(), repeated: [], lineStarts };
  try {
    const value = readValue(cursor, '', 0);
    skipSpace(cursor);
    if (cursor.at < text.length) throw new Fault(cursor.at, 'something follows after the end of the value');
    return { value, places: cursor.places, repeated: cursor.repeated };
  } catch (fault) {
    if (!(fault instanceof Fault)) throw fault;
    return { fault: { ...placeOf(cursor, fault.at), message: fault.message } };
  }
}

function placeOf({ lineStarts }: Cursor, at: number): Place {
  let low = 0;
  let high = lineStarts.length - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if ((lineStarts[middle] as number) <= at) low = middle;
    else high = middle - 1;
  }
  return { line: low + 1, column: at - (lineStarts[low] as number) + 1 };
}

function skipSpace(cursor: Cursor): void {
  const { text } = cursor;
  for (;;) {
    const code = text.charCodeAt(cursor.at);
    if (code !== 0x20 && code !== 0x0a && code !== 0x0d && code !== 0x09) return;
    cursor.at++;
  }
}

/** What stands here, for a message. */
function shown(cursor: Cursor): string {
  if (cursor.at >= cursor.text.length) return 'the end of the file';
  const word = /^[\w+.-]{1,20}/.exec(cursor.text.slice(cursor.at, cursor.at + 20));
  return JSON.stringify(word ? word[0] : String.fromCodePoint(cursor.text.codePointAt(cursor.at) as number));
}

function readValue(cursor: Cursor, path: string, depth: number): unknown {
  skipSpace(cursor);
  if (!cursor.places.has(path)) cursor.places.set(path, placeOf(cursor, cursor.at));
  const head = cursor.text[cursor.at];
  if (head === '{' || head === '[') {
    if (depth >= DEEPEST) throw new Fault(cursor.at, `values are nested more than ${DEEPEST} deep`);
    return head === '{' ? readObject(cursor, path, depth + 1) : readArray(cursor, path, depth + 1);
  }
  if (head === '"') return readString(cursor);
  return readWord(cursor);
}

const NUMBER = /-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?/y;
const WORD = /[-+]?[\w.]+/y;
const WORDS = new Map<string, unknown>([
  ['true', true],
  ['false', false],
  ['null', null],
]);

function readWord(cursor: Cursor): unknown {
  WORD.lastIndex = cursor.at;
  const word = WORD.exec(cursor.text)?.[0];
  if (word !== undefined && WORDS.has(word)) {
    cursor.at += word.length;
    return WORDS.get(word);
  }
  if (word !== undefined && /^[-+]?(?:nan|infinity|inf)$/i.test(word)) {
    throw new Fault(cursor.at, `${word} is not a number a file may hold: write a finite number`);
  }
  NUMBER.lastIndex = cursor.at;
  const number = NUMBER.exec(cursor.text)?.[0];
  if (number === undefined) throw new Fault(cursor.at, `a value is expected here, not ${shown(cursor)}`);
  cursor.at += number.length;
  if (/[\w.]/.test(cursor.text[cursor.at] ?? '')) {
    throw new Fault(cursor.at - number.length, `${JSON.stringify(word)} is not a number`);
  }
  return Number(number);
}

function readString(cursor: Cursor): string {
  const { text } = cursor;
  const start = cursor.at;
  let at = start + 1;
  for (; at < text.length && text[at] !== '"'; at++) {
    if (text.charCodeAt(at) < 0x20) throw new Fault(at, 'a text ends at its closing quote, within its line');
    if (text[at] === '\\') at++;
  }
  if (at >= text.length) throw new Fault(start, 'the closing quote of this text is missing');
  cursor.at = at + 1;
  try {
    return JSON.parse(text.slice(start, cursor.at)) as string;
  } catch {
    throw new Fault(start, 'this text holds a backslash sequence that JSON does not know');
  }
}

function readArray(cursor: Cursor, path: string, depth: number): unknown[] {
  const items: unknown[] = [];
  cursor.at++;
  skipSpace(cursor);
  if (cursor.text[cursor.at] === ']') {
    cursor.at++;
    return items;
  }
  for (;;) {
    items.push(readValue(cursor, joinPath(path, items.length), depth));
    if (endsList(cursor, ']')) return items;
  }
}

function readObject(cursor: Cursor, path: string, depth: number): Record<string, unknown> {
  const fields: Record<string, unknown> = {};
  cursor.at++;
  skipSpace(cursor);
  if (cursor.text[cursor.at] === '}') {
    cursor.at++;
    return fields;
  }
  for (;;) {
    skipSpace(cursor);
    if (cursor.text[cursor.at] !== '"') throw new Fault(cursor.at, nameExpected(cursor));
    const nameAt = cursor.at;
    const name = readString(cursor);
    const own = joinPath(path, name);
    cursor.places.set(own, placeOf(cursor, nameAt));
    skipSpace(cursor);
    if (cursor.text[cursor.at] !== ':') throw new Fault(cursor.at, `a colon is expected here, not ${shown(cursor)}`);
    cursor.at++;
    const value = readValue(cursor, own, depth);
    if (Object.hasOwn(fields, name)) cursor.repeated.push({ path: own, value });
    Object.defineProperty(fields, name, { value, writable: true, enumerable: true, configurable: true });
    if (endsList(cursor, '}')) return fields;
  }
}

function nameExpected(cursor: Cursor): string {
  const before = cursor.text.slice(Math.max(0, cursor.at - 8), cursor.at);
  if (/\d,$/.test(before) && /\d/.test(cursor.text[cursor.at] ?? '')) return 'decimals are written with a point';
  if (/,\s*$/.test(before) && cursor.text[cursor.at] === '}') return 'the comma before this bracket has to go';
  return `a field name in double quotes is expected here, not ${shown(cursor)}`;
}

/** Steps over a comma (false) or the closing bracket (true). */
function endsList(cursor: Cursor, close: ']' | '}'): boolean {
  skipSpace(cursor);
  const mark = cursor.text[cursor.at];
  if (mark !== ',' && mark !== close) {
    throw new Fault(cursor.at, `a comma or ${close} is expected here, not ${shown(cursor)}`);
  }
  cursor.at++;
  return mark === close;
}
