/** A small builder for SVG text: every attribute and every label passes through the escape functions here. */

declare const markup: unique symbol;

/** SVG text that is already well formed; only the functions of this file make it. */
export type Markup = string & { readonly [markup]: true };

export type AttributeValue = string | number | undefined;

const ENTITIES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

/** Whether XML 1.0 section 2.2 allows the code point in a document. */
function allowedInXml(code: number): boolean {
  if (code === 0x9 || code === 0xa || code === 0xd) return true;
  if (code < 0x20 || (code >= 0x7f && code <= 0x9f)) return false;
  return !(code >= 0xd800 && code <= 0xdfff) && code !== 0xfffe && code !== 0xffff;
}

/** Marks that would reorder the text around a label (Unicode Standard Annex 9: embeddings, overrides, isolates). */
function reordersText(code: number): boolean {
  return (code >= 0x202a && code <= 0x202e) || (code >= 0x2066 && code <= 0x2069) || code === 0x200e || code === 0x200f;
}

/** Text as one line that any XML reader takes: no control or reordering characters, no lone surrogates, white space single. */
export function plainText(text: string): string {
  let result = '';
  for (const character of text) {
    const code = character.codePointAt(0) as number;
    if (!allowedInXml(code) || reordersText(code)) continue;
    result += character === '\n' || character === '\r' || character === '\t' ? ' ' : character;
  }
  return result.replace(/ {2,}/g, ' ').trim();
}

/** Text for element content or a quoted attribute. */
export function escapeText(text: string): Markup {
  return plainText(text).replace(/[&<>"']/g, (character) => ENTITIES[character] as string) as Markup;
}

/** A drawing coordinate with two decimals and no negative zero. Throws RangeError when it is not finite. */
export function coordinate(value: number): string {
  if (!Number.isFinite(value)) throw new RangeError(`a drawing coordinate must be finite, got ${value}`);
  const rounded = Math.round(value * 100) / 100;
  return rounded === 0 ? '0' : String(rounded);
}

function attributes(values: Readonly<Record<string, AttributeValue>>): string {
  let text = '';
  for (const [name, value] of Object.entries(values)) {
    if (value === undefined) continue;
    text += ` ${name}="${typeof value === 'number' ? coordinate(value) : escapeText(value)}"`;
  }
  return text;
}

/** One element with its children. */
export function element(
  name: string,
  values: Readonly<Record<string, AttributeValue>>,
  ...children: readonly Markup[]
): Markup {
  const open = `<${name}${attributes(values)}`;
  return (children.length === 0 ? `${open}/>` : `${open}>${children.join('')}</${name}>`) as Markup;
}

/** Elements one after the other. */
export function joined(parts: readonly Markup[]): Markup {
  return parts.join('\n') as Markup;
}

/** Path data through the points (x0, y0, x1, y1, ...), drawing units. */
export function pathData(points: ArrayLike<number>, closed = false): string {
  let data = '';
  for (let n = 0; n + 1 < points.length; n += 2) {
    data += `${n === 0 ? 'M' : 'L'}${coordinate(points[n] as number)} ${coordinate(points[n + 1] as number)}`;
  }
  return closed ? `${data}Z` : data;
}

export interface DocumentSize {
  /** Drawing units across and down. */
  readonly width: number;
  readonly height: number;
  /** Physical width (m), written in mm; left out, the drawing is sized in units. */
  readonly printWidth?: number;
  /** What the picture shows, for readers that do not see it. */
  readonly title: string;
}

/** A whole SVG document. */
export function svgDocument(size: DocumentSize, parts: readonly Markup[]): string {
  const print = size.printWidth === undefined ? undefined : size.printWidth * 1e3;
  const physical = (units: number): string | number =>
    print === undefined ? units : `${coordinate((units * print) / size.width)}mm`;
  return element(
    'svg',
    {
      xmlns: 'http://www.w3.org/2000/svg',
      width: physical(size.width),
      height: physical(size.height),
      viewBox: `0 0 ${coordinate(size.width)} ${coordinate(size.height)}`,
      'font-family': 'Inter, system-ui, sans-serif',
      role: 'img',
    },
    element('title', {}, escapeText(size.title)),
    joined(parts),
  );
}
