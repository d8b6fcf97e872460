import { Refusal } from './problems.ts';

/** Largest DXF file read (bytes). */
export const LARGEST_DXF = 8_000_000;
/** Longest text of a number (characters). */
const LONGEST_NUMBER = 64;
/** Greatest number accepted, in the drawing's units. */
const GREATEST = 1e9;

/** One pair of lines: what the value means, the value, and the line it stands on (from 1). */
export interface Group {
  readonly code: number;
  readonly value: string;
  readonly line: number;
}

const place = (line: number) => ({ line, column: 1 });
const SAVE_AS = 'Save the drawing as ASCII DXF.';
const ALLOWED = 'ASCII DXF: lines in pairs, a group code and its value, up to EOF';

/** The text of a DXF file. @throws Refusal for what is too large or no text */
export function dxfText(file: Uint8Array | string): string {
  if (file.length > LARGEST_DXF) {
    const size = `${Math.round(file.length / 1e5) / 10} MB`;
    throw new Refusal(`The file is too large for an outline: ${size}. Save the outline alone.`, 'at most 8 MB');
  }
  const text = typeof file === 'string' ? file : new TextDecoder('utf-8').decode(file);
  if (text.trim() === '') throw new Refusal(`The file is empty. ${SAVE_AS}`, ALLOWED);
  if (text.startsWith('AutoCAD Binary DXF')) throw new Refusal(`This is a binary DXF. ${SAVE_AS}`, ALLOWED);
  if (/^AC10\d\d/.test(text)) throw new Refusal(`This is a DWG and not a DXF. ${SAVE_AS}`, ALLOWED);
  if (text.includes('\0')) throw new Refusal(`This is no text. ${SAVE_AS}`, ALLOWED);
  return text.includes('\n') ? text : text.replaceAll('\r', '\n');
}

/**
 * The groups of a DXF text one by one, up to EOF; nothing is kept. Our own reader: of the packages under a free licence, one is
 * untyped and draws in three others, and dxf-parser 1.1.2 hangs on a damaged table, loses vertices that carry an id and
 * prints to the console (all seen), so that a check of every group before it would be as long as this.
 * @throws Refusal where a pair is broken off or a code is no number
 */
export function* dxfGroups(text: string): Generator<Group, void> {
  let at = 0;
  let line = 0;
  const next = (): string | undefined => {
    if (at > text.length) return undefined;
    const end = text.indexOf('\n', at);
    const stop = end < 0 ? text.length : end;
    const read = text.slice(at, stop).trim();
    at = stop + 1;
    line++;
    return read;
  };
  for (;;) {
    const codeText = next();
    const value = next();
    if (codeText === undefined || value === undefined) {
      throw new Refusal(`The file breaks off: it has no EOF. Save or copy it again.`, ALLOWED, place(line));
    }
    const code = codeText.length <= 6 && /^-?\d+$/.test(codeText) ? Number(codeText) : Number.NaN;
    if (Number.isNaN(code)) {
      throw new Refusal('This is not a DXF: a group code should stand here.', ALLOWED, place(line - 1));
    }
    if (code === 0 && value === 'EOF') return;
    yield { code, value, line };
  }
}

const NUMBER = /^[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?$/;

/** The number of a group. @throws Refusal when it is none, or beyond all measure */
export function groupNumber({ value, line }: Group): number {
  const number = value.length <= LONGEST_NUMBER && NUMBER.test(value) ? Number(value) : Number.NaN;
  if (Math.abs(number) <= GREATEST) return number;
  const shown = JSON.stringify(value.slice(0, 20));
  const what = Number.isNaN(number) ? 'is not a number' : 'is out of all measure';
  throw new Refusal(`${shown} ${what}. Mend the drawing there.`, `numbers up to ${GREATEST}`, place(line));
}
