import { expect, test } from 'vitest';
import { makeOutline, nearest } from '#src/base/outline.ts';
import { checkLoops } from '#src/base/outline-check.ts';
import { readDxf } from '#src/formats/outline/dxf.ts';
import type { ReadOutline } from '#src/formats/outline/finish.ts';
import { readSvgPath } from '#src/formats/outline/svg-path.ts';
import { isRefused } from '#src/formats/problems.ts';
import { random } from '../../base/outline-samples.ts';
import { corpusText } from './support.ts';

const DXF = ['slot-mm.dxf', 'washer-inch.dxf', 'gang-unitless.dxf', 'mirrored.dxf', 'insert-bomb.dxf'].map(corpusText);
const SVG = ['keyhole.path.txt', 'bracket.path.txt', 'bow-tie.path.txt'].map(corpusText);
const SCRAPS = [
  'NaN',
  '1e308',
  '-1e-308',
  '-',
  '0',
  '1e5',
  '.',
  ' ',
  '\n',
  '\r\n',
  '\0',
  'é',
  'M',
  'z',
  'A',
  'Infinity',
  '0\nLINE\n',
  '999999999',
  '42\n1\n',
  '0\nEOF\n',
];

/** A text with one to eight of its parts cut, doubled, moved, or replaced by something that may hurt. */
function mutate(text: string, draw: () => number): string {
  const at = (end: number) => Math.floor(draw() * (end + 1));
  let out = text;
  for (let k = 1 + at(7); k > 0; k--) {
    const from = at(out.length);
    const to = Math.min(out.length, from + at(12));
    const [head, middle, tail] = [out.slice(0, from), out.slice(from, to), out.slice(to)] as const;
    const how = at(5);
    if (how === 0) out = head + tail;
    else if (how === 1) out = head + middle + middle + tail;
    else if (how === 2) out = head + (SCRAPS[at(SCRAPS.length - 1)] as string) + tail;
    else if (how === 3) out = middle + head + tail;
    else if (how === 4) out = head + String.fromCharCode(at(126)) + tail;
    else out = head + middle.replaceAll(/\d/g, () => String(at(9))) + tail;
  }
  return draw() < 0.05 ? out.slice(0, at(out.length)) : out;
}

/** Either an outline that holds all it promises, or a refusal that says why. */
function sound(read: ReadOutline): boolean {
  for (const problem of read.problems) expect(problem.message.length).toBeGreaterThan(10);
  if (read.outline === undefined) {
    expect(isRefused(read.problems)).toBe(true);
    return false;
  }
  expect(isRefused(read.problems)).toBe(false);
  expect(checkLoops(read.outline.loops)).toEqual([]);
  const outline = makeOutline(read.outline);
  expect(outline.area).toBeGreaterThan(0);
  expect(Number.isFinite(nearest(outline, 1e-3, 2e-3).distance)).toBe(true);
  return true;
}

// vitest's own time limit of the test stands for the two seconds of any one input
test('a thousand damaged DXF files are read soundly or refused, and none throws', () => {
  const draw = random(20_260_101);
  let read = 0;
  for (let k = 0; k < 1000; k++) {
    const text = mutate(DXF[k % DXF.length] as string, draw);
    if (sound(readDxf(text, { unitless: 'mm' }))) read++;
  }
  // some damage does no harm, most does
  expect(read).toBeGreaterThan(20);
  expect(read).toBeLessThan(980);
});

test('a thousand damaged paths are read soundly or refused, and none throws', () => {
  const draw = random(20_260_102);
  let read = 0;
  for (let k = 0; k < 1000; k++) {
    const text = mutate(SVG[k % SVG.length] as string, draw);
    if (sound(readSvgPath(text, { scale: 1e-3 }))) read++;
  }
  expect(read).toBeGreaterThan(20);
  expect(read).toBeLessThan(980);
});
