import { describe, expect, test } from 'vitest';
import { makeOutline, nearest, type PathSpec } from '#src/base/outline.ts';
import { type DxfOptions, readDxf } from '#src/formats/outline/dxf.ts';
import { isRefused } from '#src/formats/problems.ts';
import { corpus, dxf } from './support.ts';

const pi = Math.PI;
const line = (x0: number, y0: number, x1: number, y1: number) => [0, 'LINE', 10, x0, 20, y0, 11, x1, 21, y1] as const;
const circle = (x: number, y: number, r: number) => [0, 'CIRCLE', 10, x, 20, y, 40, r] as const;
const arc = (x: number, y: number, r: number, from: number, to: number) =>
  [0, 'ARC', 10, x, 20, y, 40, r, 50, from, 51, to] as const;
const polyline = (closed: number, ...vertices: (readonly number[])[]) => [
  ...[0, 'LWPOLYLINE', 90, vertices.length, 70, closed],
  ...vertices.flatMap(([x, y, bulge]) => [10, x, 20, y, ...(bulge === undefined ? [] : [42, bulge])]),
];

function outlineOf(file: Uint8Array | string, options: DxfOptions = {}) {
  const read = readDxf(file, options);
  expect(read.problems.filter(({ severity }) => severity === 'refuse')).toEqual([]);
  return makeOutline(read.outline as PathSpec);
}

describe('a drawing', () => {
  test('of lines and arcs in no order is joined into the slot it shows, its notes counted and passed over', () => {
    const file = corpus('slot-mm.dxf');
    const outline = outlineOf(file);
    const slot = makeOutline({ kind: 'slot', length: 5e-3, width: 1.2e-3 });
    expect(outline.area).toBeCloseTo(slot.area, 16);
    expect(outline.perimeter).toBeCloseTo(slot.perimeter, 14);
    for (const [x, y] of [
      [0, 0],
      [2.2e-3, 0.1e-3],
      [3e-3, 1e-3],
      [-2.6e-3, 0],
    ] as const) {
      expect(nearest(outline, x, y).distance).toBeCloseTo(nearest(slot, x, y).distance, 14);
    }
    const { ignored, unit, unitFrom, problems } = readDxf(file);
    expect(ignored).toEqual([
      { kind: 'TEXT', count: 1 },
      { kind: 'POINT', count: 1 },
    ]);
    expect([unit, unitFrom]).toEqual(['mm', 'file']);
    expect(problems.map(({ severity }) => severity)).toEqual(['warn']);
  });

  test('in inches is in metres, its hole a hole, its middle the origin unless the file has it', () => {
    const outline = outlineOf(corpus('washer-inch.dxf'));
    expect(outline.area).toBeCloseTo(pi * (9e-6 - 1e-6), 15);
    expect(outline.loops.map(({ hole }) => hole)).toEqual([false, true]);
    expect(nearest(outline, 0, 0).distance).toBeCloseTo(1e-3, 12);
    const kept = outlineOf(corpus('washer-inch.dxf'), { origin: 'file' });
    expect(nearest(kept, 25.4e-3, 50.8e-3).distance).toBeCloseTo(1e-3, 12);
  });

  test('without a unit takes the one stated by whoever opens it, and says so', () => {
    const read = readDxf(corpus('gang-unitless.dxf'), { unitless: 'mm' });
    expect([read.unit, read.unitFrom]).toEqual(['mm', 'caller']);
    // two bars 4 x 2 mm with corners of 0.5 mm; polylines whose vertices carry ids
    const outline = makeOutline(read.outline as PathSpec);
    expect(outline.area).toBeCloseTo(2 * (8e-6 - (4 - pi) * 0.25e-6), 15);
    expect(outline.perimeter).toBeCloseTo(2 * (12e-3 - (8 - 2 * pi) * 0.5e-3), 13);
    expect(readDxf(corpus('gang-unitless.dxf')).problems[0]?.message).toContain('states no unit');
    expect(readDxf(dxf([circle(0, 0, 1)], 0), { unitless: 'cm' }).unit).toBe('cm');
  });

  test('in each unit is as large as it says', () => {
    for (const [code, metres] of [
      [1, 0.0254],
      [4, 1e-3],
      [5, 1e-2],
      [6, 1],
      [13, 1e-6],
    ] as const) {
      expect(outlineOf(dxf([circle(0, 0, 0.002 / metres)], code)).area).toBeCloseTo(pi * 4e-6, 15);
    }
    expect(readDxf(dxf([circle(0, 0, 1)], 2)).problems[0]?.message).toContain('$INSUNITS is 2');
  });

  test('of bulges has the very arcs: half a circle is exact, and the sign is the side', () => {
    const lens = outlineOf(dxf([polyline(1, [0, 0, 1], [4, 0, 1])]));
    expect(lens.area).toBeCloseTo(pi * 4e-6, 17);
    // a square with one side bulged in or out by a quarter circle: segment r^2 (pi / 2 - 1) / 2 with r = sqrt(2)
    const bulge = Math.tan(pi / 8);
    const segment = (2 * (pi / 2 - 1)) / 2;
    const side = (b: number) => outlineOf(dxf([polyline(1, [0, 0, b], [2, 0], [2, 2], [0, 2])])).area * 1e6;
    expect(side(bulge)).toBeCloseTo(4 + segment, 11);
    expect(side(-bulge)).toBeCloseTo(4 - segment, 11);
  });

  test('whose polyline is open is closed by what joins it, drawn either way', () => {
    const half = polyline(0, [0, 0], [4, 0], [4, 3]);
    for (const rest of [line(4, 3, 0, 0), line(0, 0, 4, 3)]) {
      expect(outlineOf(dxf([half, rest])).area).toBeCloseTo(6e-6, 16);
    }
    expect(outlineOf(dxf([polyline(0, [0, 0], [4, 0], [4, 3], [0, 0])])).area).toBeCloseTo(6e-6, 16);
    expect(outlineOf(dxf([polyline(1, [0, 0], [4, 0], [4, 3], [0, 0])])).area).toBeCloseTo(6e-6, 16);
    expect(outlineOf(dxf([arc(1, 1, 2, 30, 390)])).area).toBeCloseTo(pi * 4e-6, 15);
  });

  test('joins ends within the tolerance and no further', () => {
    const gap = (mm: number) => dxf([line(0, 0, 4, 0), line(4 + mm, 0, 4, 3), line(4, 3, 0, 0)]);
    expect(outlineOf(gap(0.0009)).loops).toHaveLength(1);
    expect(isRefused(readDxf(gap(0.0021)).problems)).toBe(true);
    expect(outlineOf(gap(0.04), { joinTolerance: 50e-6 }).loops).toHaveLength(1);
    // ends on the two sides of a cell's edge
    for (let k = 0; k < 50; k++) expect(outlineOf(gap(-0.0009 + k * 3.6e-5)).loops).toHaveLength(1);
  });

  test('seen from below is turned over', () => {
    const file = corpus('mirrored.dxf');
    const outline = outlineOf(file, { origin: 'file' });
    expect(outline.area).toBeCloseTo(pi * 1e-6, 15);
    expect(nearest(outline, -0.7e-3, 0.7e-3).distance).toBeLessThan(0);
    const bulged = [...polyline(1, [0, 0, 1], [4, 0]), 230, -1];
    const half = outlineOf(dxf([bulged]), { origin: 'file' });
    expect(nearest(half, -2e-3, -1e-3).distance).toBeLessThan(0);
  });

  test('in paper space, or without length, is passed over and listed', () => {
    const paper = [...circle(0, 0, 1), 67, 1];
    const read = readDxf(dxf([paper, circle(0, 0, 2), polyline(0, [1, 1])]));
    expect(read.outline?.loops).toHaveLength(1);
    expect(read.ignored).toEqual([
      { kind: 'CIRCLE in paper space', count: 1 },
      { kind: 'LWPOLYLINE without length', count: 1 },
    ]);
  });
});

describe('a file that is no outline is refused with its place', () => {
  const first = (file: Uint8Array | string) => {
    const read = readDxf(file, { unitless: 'mm' });
    expect(read.outline).toBeUndefined();
    expect(isRefused(read.problems)).toBe(true);
    return read.problems[0] as (typeof read.problems)[0];
  };

  test('an open loop, at its end', () => {
    expect(first(corpus('open.dxf'))).toMatchObject({ path: 'loop 1, piece 2', mark: { xMm: 3, yMm: 4 } });
  });

  test('a corner where three ends meet', () => {
    const problems = readDxf(corpus('branch.dxf')).problems.filter(({ severity }) => severity === 'refuse');
    expect(problems.map(({ mark }) => [mark?.xMm, mark?.yMm])).toEqual([
      [2, 0],
      [2, 2],
    ]);
    expect(problems[0]?.message).toContain('3 ends');
  });

  test('two circles that cross, where they cross', () => {
    const problem = first(dxf([circle(0, 0, 5), circle(6, 0, 5)]));
    expect([problem.mark?.xMm, Math.abs(problem.mark?.yMm as number)]).toEqual([3, 4]);
  });

  test.each([
    ['not-a-number.dxf', '"NaN" is not a number'],
    ['enormous.dxf', 'out of all measure'],
    ['askew.dxf', 'plane of the drawing'],
    ['truncated.dxf', 'breaks off'],
  ])('%s, by its line', (name, words) => {
    const problem = first(corpus(name));
    expect(problem.message).toContain(words);
    expect(problem.place?.line).toBeGreaterThan(20);
  });

  test.each([
    ['nothing', '', 'empty'],
    ['a binary DXF', 'AutoCAD Binary DXF\r\n\x1a\0\0\0', 'binary'],
    ['a DWG', 'AC1027\0\0\0', 'DWG'],
    ['bytes', 'abc\0\0', 'no text'],
    ['another text', 'Dear colleague,\nplease find\n', 'group code'],
    ['only a header', '0\nSECTION\n2\nHEADER\n0\nENDSEC\n0\nEOF\n', 'no ENTITIES'],
    ['no outline', dxf([[0, 'TEXT', 1, 'hello']]), 'no line, arc, circle'],
    ['a circle without a radius', dxf([[0, 'CIRCLE', 10, 0, 20, 0]]), 'lacks group 40'],
    ['a negative radius', dxf([circle(0, 0, -1)]), 'no radius'],
    ['a line without an end', dxf([[0, 'LINE', 10, 0, 20, 0]]), 'lacks group 11'],
    ['a vertex without y', dxf([[0, 'LWPOLYLINE', 70, 1, 10, 0, 10, 1, 20, 1]]), 'lacks group 20'],
    ['infinity', dxf([circle(Infinity, 0, 1)]), 'not a number'],
    ['a number of a thousand digits', dxf([[0, 'CIRCLE', 10, '1'.repeat(1000), 20, 0, 40, 1]]), 'not a number'],
    ['a circle of ten metres', dxf([circle(0, 0, 1e4)]), 'unit of the drawing'],
    ['no unit known', dxf([circle(0, 0, 1)], 99), '$INSUNITS is 99'],
  ])('%s', (_, file, words) => {
    expect(first(file).message).toContain(words);
  });

  test('a caller who gives no tolerance', () => {
    expect(() => readDxf('', { joinTolerance: 0 })).toThrow(RangeError);
  });
});

describe('a hostile file', () => {
  test('with blocks that insert each other is one INSERT passed over', () => {
    const read = readDxf(corpus('insert-bomb.dxf'));
    expect(read.outline?.loops).toHaveLength(1);
    expect(read.ignored).toEqual([{ kind: 'INSERT', count: 1 }]);
  });

  test('with more than can be cut is refused at the first piece too many', () => {
    const lines = Array.from({ length: 20_001 }, (_, k) => line(k, 0, k + 1, 0));
    expect(readDxf(dxf(lines)).problems[0]?.message).toContain('too many pieces');
    const vertices = Array.from({ length: 20_001 }, (_, k) => [k, k % 2]);
    expect(readDxf(dxf([polyline(1, ...vertices)])).problems[0]?.message).toContain('too many pieces');
    const again = [0, 'LINE', ...Array.from({ length: 2000 }, () => [10, 1]).flat()] as const;
    expect(readDxf(dxf([again])).problems[0]?.message).toContain('too many pieces');
  });

  test('that is too large is refused unread', () => {
    expect(readDxf(new Uint8Array(8_000_001)).problems[0]?.message).toContain('8 MB');
  });

  test('of eight megabytes of nested nothing, endless kinds or points in one place ends', () => {
    const full = (text: string) => text.repeat(Math.floor(7_900_000 / text.length));
    const open = '0\nSECTION\n2\nENTITIES\n';
    expect(readDxf(`${open}${full('102\n{A\n')}0\nEOF\n`).problems[0]?.message).toContain('no line, arc');
    const kinds = Array.from({ length: 400_000 }, (_, k) => `0\nK${k}\n`).join('');
    const read = readDxf(`${open}${kinds}0\nEOF\n`);
    expect(read.ignored).toHaveLength(41);
    expect(read.ignored[0]?.kind).toBe('other kinds');
    const one = Array.from({ length: 19_000 }, (_, k) => line(0, 0, Math.cos(k), Math.sin(k)));
    expect(readDxf(dxf(one)).problems[0]?.message).toContain('ends meet here');
    // ends strung a micrometre apart, each near enough to the next
    const string = Array.from({ length: 9000 }, (_, k) => line(k * 0.0018, 0, k * 0.0018 + 0.0009, 5));
    expect(isRefused(readDxf(dxf(string)).problems)).toBe(true);
  });
});
