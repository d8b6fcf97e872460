import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  changeOf,
  changeWords,
  firstThere,
  type Lever,
  lastGood,
  type PathPoint,
  pathsOf,
} from '#src/planning/lever.ts';
import { valuesWith } from './figure-values.ts';

const evaluate = () => valuesWith({});
const lever = (rest: Partial<Lever>): Lever => ({
  name: 'the load',
  unit: 'N',
  now: 43,
  allowed: [5, 85],
  evaluate,
  ...rest,
});
const grits = lever({
  name: 'the grit',
  unit: '',
  now: 29.2,
  allowed: [10, 40],
  choices: [
    { value: 44.5, label: 'F240' },
    { value: 36.5, label: 'F280' },
    { value: 29.2, label: 'F320' },
    { value: 22.8, label: 'F360' },
    { value: 17.3, label: 'F400' },
    { value: 9.3, label: 'F600' },
  ],
});

describe('what a lever can be set to', () => {
  test('are round numbers on both sides, the nearest first, and the ends of what is allowed', () => {
    // a fortieth of 80 is 2
    const [up, down] = pathsOf(lever({}));
    expect(up?.slice(0, 3)).toEqual([44, 46, 48]);
    expect(up?.at(-1)).toBe(85);
    expect(down?.slice(0, 3)).toEqual([42, 40, 38]);
    expect(down?.at(-1)).toBe(5);
    expect(pathsOf(lever({ step: 20 }))).toEqual([
      [60, 80, 85],
      [40, 20, 5],
    ]);
    expect(pathsOf(lever({ step: 20, allowed: [35.123, 85.123] }))).toEqual([[60, 80], [40]]);
    expect(pathsOf(lever({ step: 20, allowed: [41.123, 43.123] }))).toEqual([[43.123], [41.123]]);
  });

  test('lie inside what is allowed and beyond what is set, in order, whatever the numbers', () => {
    const number = fc.double({ min: 0, max: 1e4, noNaN: true });
    fc.assert(
      fc.property(number, number, number, (a, b, now) => {
        const allowed = [Math.min(a, b), Math.max(a, b)] as const;
        const [up = [], down = []] = pathsOf(lever({ allowed, now }));
        const ordered = (path: readonly number[], sign: number) =>
          path.every((value, i) => sign * value > sign * (path[i - 1] ?? now));
        expect(ordered(up, 1) && ordered(down, -1)).toBe(true);
        expect([...up, ...down].every((value) => value >= allowed[0] && value <= allowed[1])).toBe(true);
        expect(up.length + down.length).toBeLessThanOrEqual(102);
      }),
      { seed: 71 },
    );
  });

  test('are the choices on either side, as far as they are allowed', () => {
    expect(pathsOf(grits)).toEqual([[22.8, 17.3], [36.5]]);
    expect(() => pathsOf({ ...grits, now: 30 })).toThrow(/the grit/);
  });

  test('is nothing when nothing is allowed, and refused for a step without end', () => {
    expect(pathsOf(lever({ allowed: [43, 43] }))).toEqual([[], []]);
    expect(() => pathsOf(lever({ step: 0 }))).toThrow(RangeError);
    expect(() => pathsOf(lever({ step: 1e-6 }))).toThrow(RangeError);
  });
});

test('a change is a share of what is set, or of the choices, and told in the words of either', () => {
  expect(changeOf(lever({}), 43 * 1.5)).toBeCloseTo(0.5, 12);
  expect(changeOf(grits, 17.3)).toBeCloseTo(2 / 5, 12);
  expect(changeWords(lever({}), 60)).toBe('taking the load from 43 to 60 N');
  expect(changeWords(grits, 17.3)).toBe('F400 instead of F320');
});

describe('a search along a path', () => {
  /** There from `first` to `last`, rising up to it. */
  const window =
    (first: number, last: number, looks: number[] = []) =>
    (place: number): PathPoint => {
      looks.push(place);
      if (place >= first && place <= last) return { state: 'there', gain: 0 };
      return { state: 'short', gain: place < first ? place - first : last - place };
    };

  test('of a figure that only rises finds the first place there, in few looks', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 100 }), fc.nat(120), (length, first) => {
        const looks: number[] = [];
        const found = firstThere(length, window(first, Infinity, looks), -first - 1);
        expect(found).toBe(first < length ? first : -1);
        // places 0, 2, 8, 26, 80, the end, and at most six halvings of 54
        expect(looks.length).toBeLessThanOrEqual(12);
      }),
      { seed: 72 },
    );
  });

  test('that leads away ends after one look, and one that leads nowhere after two', () => {
    const looks: number[] = [];
    const away = (place: number): PathPoint => {
      looks.push(place);
      return { state: 'short', gain: -place - 2 };
    };
    expect(firstThere(40, away, -1)).toBe(-1);
    expect(looks).toEqual([0]);
    const flat: number[] = [];
    const level = (place: number): PathPoint => {
      flat.push(place);
      return { state: 'short', gain: -1 };
    };
    expect(firstThere(40, level, -1)).toBe(-1);
    expect(flat).toEqual([0, 39]);
  });

  test('finds what lies between its steps when the figure has a top there', () => {
    expect(firstThere(100, window(40, 60), -41)).toBe(40);
    expect(firstThere(100, window(12, 20), -13)).toBe(12);
  });

  test('does not take what cannot be set for what is there', () => {
    const wall =
      (limit: number, first: number) =>
      (place: number): PathPoint =>
        place > limit ? { state: 'beyond', gain: -Infinity } : window(first, Infinity)(place);
    expect(firstThere(100, wall(30, 27), -28)).toBe(27);
    expect(firstThere(100, wall(30, 40), -41)).toBe(-1);
  });

  test('for the last good place finds one within an eighth of the end of a run of good ones', () => {
    fc.assert(
      fc.property(fc.nat(100), fc.nat(120), (length, good) => {
        const last = Math.min(length, good) - 1;
        const found = lastGood(length, (place) => place < good);
        expect(found).toBeLessThanOrEqual(last);
        expect(found).toBeGreaterThanOrEqual(last - Math.max(0, found) / 8);
      }),
      { seed: 73 },
    );
  });
});
