import { describe, expect, test } from 'vitest';
import { makeOutline, nearest, type PathSpec } from '#src/base/outline.ts';
import { loopArea } from '#src/base/outline-path.ts';
import { readSvgPath, type SvgPathOptions } from '#src/formats/outline/svg-path.ts';
import { formatProblems, isRefused } from '#src/formats/problems.ts';
import { corpusText } from './support.ts';

const pi = Math.PI;
const MM: SvgPathOptions = { scale: 1e-3 };
/** Reads path data in millimetres that must be sound. */
function outlineOf(text: string, options: Partial<SvgPathOptions> = {}) {
  const read = readSvgPath(text, { ...MM, ...options });
  expect(read.problems.filter(({ severity }) => severity === 'refuse')).toEqual([]);
  return makeOutline(read.outline as PathSpec);
}
/** Area (mm2) and perimeter (mm). */
const sizes = (text: string, options: Partial<SvgPathOptions> = {}) => {
  const { area, perimeter } = outlineOf(text, options);
  return [area * 1e6, perimeter * 1e3] as const;
};

describe('path data', () => {
  test('of straight lines are the same outline in every spelling', () => {
    const spellings = [
      'M0 0 L4 0 L4 3 L0 3 Z',
      'm0 0 l4 0 l0 3 l-4 0 z',
      'M0,0H4V3H0Z',
      'm0,0h4v3h-4z',
      'M0 0 4 0 4 3 0 3z',
      'm 0 0 4 0 0 3 -4 0 0 -3',
      'M0 0L4 0 4 3 0 3 0 0',
      '\n M 0.0e0 0 L 40E-1 , 0 \t L +4.0 3. L .0 3 Z \n',
    ];
    const expected = outlineOf(spellings[0] as string).spec;
    for (const spelling of spellings) expect(outlineOf(spelling).spec).toEqual(expected);
    const [area, perimeter] = sizes(spellings[0] as string);
    expect(area).toBeCloseTo(12, 12);
    expect(perimeter).toBeCloseTo(14, 12);
  });

  test('of circular arcs are exact arcs, the large and the small, either way round, and radii too small are widened', () => {
    // circular segments of radius 2 over a chord of 2: r^2 (t - sin t) / 2 with t = pi / 3, and the rest of the circle
    const small = 2 * (pi / 3 - Math.sin(pi / 3));
    for (const [flags, area, angle] of [
      ['0 1', small, pi / 3],
      ['0 0', small, pi / 3],
      ['1 1', 4 * pi - small, (5 * pi) / 3],
      ['1 0', 4 * pi - small, (5 * pi) / 3],
    ] as const) {
      const [a, p] = sizes(`M0 0A2 2 0 ${flags} 2 0Z`);
      expect(a).toBeCloseTo(area, 11);
      expect(p).toBeCloseTo(2 * angle + 2, 11);
    }
    expect(sizes('M0 0A1 1 30 0 1 4 0Z')[0]).toBeCloseTo((pi * 4) / 2, 11);
    expect(outlineOf('M0 0a2 2 0 1 1 .001 0z').loops[0]?.segments).toHaveLength(3);
    // a radius of nothing is a straight line
    expect(sizes('M0 0A0 1 0 0 1 4 0V4Z')[0]).toBeCloseTo(8, 12);
  });

  test('of elliptical arcs and Bezier curves are within the chord tolerance of the curve', () => {
    // half an ellipse turned by 30 degrees; its area is pi a b / 2
    const end = `${6 * Math.cos(pi / 6)} ${6 * Math.sin(pi / 6)}`;
    const ellipse = `M0 0A3 1 30 0 1 ${end}Z`;
    for (const chordTolerance of [1e-5, 1e-6, 1e-7]) {
      const [area, perimeter] = sizes(ellipse, { chordTolerance });
      // chords lie inside by at most the tolerance, on average by two thirds of it
      expect((pi * 3) / 2 - area).toBeGreaterThan(0);
      expect((pi * 3) / 2 - area).toBeLessThan(chordTolerance * 1e3 * perimeter);
    }
    // parabola y = 4 t (1 - t) on x = 4 t from a quadratic curve: area 2/3 x 4 x 1
    expect(Math.abs(sizes('M0 0Q2 2 4 0Z')[0] - 8 / 3)).toBeLessThan(1e-3 * 5);
    // the same parabola as a cubic: control points two thirds of the way
    const cubic = outlineOf('M0 0C1.3333333333333333 1.3333333333333333 2.6666666666666665 1.3333333333333333 4 0Z');
    for (let k = 1; k < 100; k++) {
      const t = k / 100;
      // y downward, origin in the middle of the box 4 x 1
      const near = nearest(cubic, (4 * t - 2) * 1e-3, (0.5 - 4 * t * (1 - t)) * 1e-3);
      expect(Math.abs(near.distance)).toBeLessThan(1e-6);
    }
  });

  test('of smooth curves mirror the control point before, and without one use the pen', () => {
    const same = (a: string, b: string) => expect(sizes(a)).toEqual(sizes(b));
    same('M0 0C0 1 1 2 2 2S4 1 4 0Z', 'M0 0C0 1 1 2 2 2C3 2 4 1 4 0Z');
    same('M0 0c0 1 1 2 2 2s2-1 2-2z', 'M0 0C0 1 1 2 2 2S4 1 4 0Z');
    same('M0 0Q1 2 2 2T4 2V0Z', 'M0 0Q1 2 2 2Q3 2 4 2V0Z');
    same('M0 0V2S4 4 4 0Z', 'M0 0V2C0 2 4 4 4 0Z');
    same('M0 0V2T4 2V0Z', 'M0 0V2Q0 2 4 2V0Z');
    same('M0 0v2h2t2 0v-2z', 'M0 0V2H2L4 2V0Z');
  });

  test('after a Z go on from the start of the subpath', () => {
    const outline = outlineOf('M0 0h2v2h-2zm5 0h2v2h-2zM1 5h1v1h-1z');
    expect(outline.bounds.xMax - outline.bounds.xMin).toBeCloseTo(7e-3, 15);
    // what is drawn without a move starts a subpath there, which touches the one before
    const [problem] = readSvgPath('M1 5h2v2h-2zl-2 0 0 -2z', MM).problems;
    expect(problem).toMatchObject({ path: 'loop 1, piece 1', mark: { xMm: 1, yMm: -5 } });
    expect(problem?.message).toContain('loop 2');
  });

  test('make holes by nesting, whatever the direction', () => {
    const outer = 'M0 0h6v6h-6z';
    for (const inner of ['M2 2h2v2h-2z', 'M2 2v2h2v-2z']) {
      const outline = outlineOf(outer + inner);
      expect(outline.area * 1e6).toBeCloseTo(36 - 4, 12);
      expect(outline.loops.map(({ hole }) => hole)).toEqual([false, true]);
    }
  });

  test('are turned over from the page, or not, and keep their origin when asked to', () => {
    const corner = 'M1 1h3v1h-2v2h-1z';
    const page = outlineOf(corner, { origin: 'file' });
    expect(page.bounds).toEqual({ xMin: 1e-3, xMax: 4e-3, yMin: -4e-3, yMax: -1e-3 });
    expect(nearest(page, 3.5e-3, -1.5e-3).distance).toBeLessThan(0);
    const up = outlineOf(corner, { origin: 'file', yDown: false });
    expect(nearest(up, 3.5e-3, 1.5e-3).distance).toBeLessThan(0);
    const middle = outlineOf(corner);
    expect(middle.bounds.xMax + middle.bounds.xMin).toBeCloseTo(0, 15);
    expect(loopArea((middle.spec as PathSpec).loops[0] as never)).toBeCloseTo(page.area, 15);
    expect(outlineOf(corner, { scale: 0.0254 }).area / page.area).toBeCloseTo(25.4 ** 2, 9);
  });

  test('of the corpus: a keyhole and a bracket of every kind of curve', () => {
    // circle of radius 2 less the segment under the chord of 2, and a stem 2 x 6
    const keyhole = 4 * pi - 2 * (pi / 3 - Math.sin(pi / 3)) + 12;
    expect(sizes(corpusText('keyhole.path.txt'))[0]).toBeCloseTo(keyhole, 10);
    const bracket = outlineOf(corpusText('bracket.path.txt'));
    expect(bracket.loops.map(({ hole }) => hole)).toEqual([false, true]);
  });

  test('with pieces below a micrometre lose them, with a warning; a point drawn twice is nothing to tell', () => {
    const read = readSvgPath('M0 0H4l.0004 0V3H0Z', MM);
    expect(read.outline?.loops[0]?.pieces).toHaveLength(4);
    expect(read.problems.map(({ severity }) => severity)).toEqual(['warn']);
    expect(readSvgPath('M0 0H4h0V3H0Z', MM).problems).toEqual([]);
  });
});

describe('path data that cannot be an outline', () => {
  const refused = (text: string) => {
    const read = readSvgPath(text, MM);
    expect(read.outline).toBeUndefined();
    expect(isRefused(read.problems)).toBe(true);
    return read.problems[0] as (typeof read.problems)[0];
  };

  test.each([
    ['', 'empty'],
    ['hello', 'no place'],
    ['L1 1', 'missing here'],
    ['5 5', 'missing here'],
    ['M0 0L1 1z 5 5L1 1', 'missing here'],
    ['M0 0L1', 'malformed'],
    ['M0 0L1 2 3Z', 'malformed'],
    ['M0 0A1 1 0 2 0 1 1Z', 'malformed'],
    ['M0 0A-1 1 0 0 0 1 1Z', 'malformed'],
    ['M0 0L1 -Z', 'malformed'],
    ['M0 0L1e 1Z', 'malformed'],
    ['M0 0H1e400V3Z', 'out of all measure'],
    ['M0 0H1e9V3Z', 'out of all measure'],
    ['M0 0H2000V3Z', 'unit of the drawing'],
    ['M0 0', 'no outline'],
    ['M0 0ZZ', 'no outline'],
    ['M0 0H4V3', 'Close it'],
    ['M0 0C1e6 1e6 -1e6 1e6 4 0Z', 'too many pieces'],
    [`M0 0${'h.01v.01'.repeat(10_001)}`, 'too many pieces'],
    [`M0 0${' '.repeat(1_000_000)}`, 'too long'],
  ])('%#: %.30s', (text, words) => {
    expect(refused(text).message).toContain(words);
  });

  test('tell where in the text, and where in the drawing', () => {
    expect(refused('M0 0\nL1 x').place).toEqual({ line: 2, column: 4 });
    expect(refused('M0 0L4 0\nL4 3 5 Z').place?.line).toBe(2);
    const problem = refused(corpusText('bow-tie.path.txt'));
    // the file's frame with y turned up
    expect(problem).toMatchObject({ path: 'loop 1, piece 1', mark: { xMm: 2, yMm: -2, loop: 1, piece: 1 } });
    expect(formatProblems([problem], 'bow-tie')).toContain('loop 1, piece 1: {"xMm":2,"yMm":-2}');
  });

  test('is the caller refused who gives no scale', () => {
    for (const scale of [0, -1, Number.NaN, Infinity]) expect(() => readSvgPath('M0 0', { scale })).toThrow(RangeError);
    expect(() => readSvgPath('M0 0', { scale: 1, chordTolerance: 0 })).toThrow(RangeError);
  });
});
