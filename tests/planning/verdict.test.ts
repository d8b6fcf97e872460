import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Figure } from '#src/planning/figures.ts';
import { headline, judgeLimit, judgeLimits, type LimitRow, type LimitWords, summary } from '#src/planning/verdict.ts';

const band = (value: number, low: number, high: number): Figure => ({ value, low, high, covers: 'all' });
const plain = (value: Figure['value']): Figure => ({ value, low: null, high: null, covers: 'no band yet' });
const most = (figure: Figure, upper: number): LimitRow => ({ id: 'a', figure, lower: null, upper });
const least = (figure: Figure, lower: number): LimitRow => ({ id: 'a', figure, lower, upper: null });

const number = fc.double({ min: -1e6, max: 1e6, noNaN: true });

describe('one limit', () => {
  test.each([
    ['the whole band inside', band(5, 4, 6), 7, 'meets'],
    ['a band that ends on it', band(5, 4, 6), 6, 'meets'],
    ['a band across it', band(5, 4, 6), 5.5, 'at risk'],
    ['a band across it with the value outside', band(5, 4, 6), 4.5, 'at risk'],
    ['a band that begins on it', band(5, 4, 6), 4, 'at risk'],
    ['no part of the band inside', band(5, 4, 6), 3.9, 'misses'],
    ['no band and the value inside', plain(5), 5, 'meets'],
    ['no band and the value outside', plain(5), 4.999, 'misses'],
  ])('with %s', (_, figure, upper, state) => {
    expect(judgeLimit(most(figure, upper)).state).toBe(state);
  });

  test('without a value is at risk and has no margin', () => {
    expect(judgeLimit(most(plain(null), 3))).toMatchObject({ state: 'at risk', margin: null });
    expect(judgeLimit(most(plain(NaN), 3))).toMatchObject({ state: 'at risk', margin: null });
  });

  test('has as margin the room to it, as a fraction of it, negative outside', () => {
    expect(judgeLimit(most(plain(3), 4)).margin).toBeCloseTo((4 - 3) / 4, 15);
    expect(judgeLimit(most(plain(5), 4)).margin).toBeCloseTo((4 - 5) / 4, 15);
    expect(judgeLimit(least(plain(5), 4)).margin).toBeCloseTo((5 - 4) / 4, 15);
    expect(judgeLimit(least(plain(0.3), 0)).margin).toBeCloseTo(0.3, 15);
  });

  test('with two sides has the room to the nearer one, as a fraction of the tolerance', () => {
    const row: LimitRow = { id: 'a', figure: plain(3.02), lower: 2.99, upper: 3.03 };
    expect(judgeLimit(row)).toMatchObject({ state: 'meets' });
    expect(judgeLimit(row).margin).toBeCloseTo(0.01 / 0.04, 9);
  });

  test('for several sizes is decided by the worst', () => {
    const row: LimitRow = { id: 'a', figure: plain([1, 2]), lower: null, upper: [2, 1.5] };
    expect(judgeLimit(row).state).toBe('misses');
    expect(judgeLimit(row).margin).toBeCloseTo(-0.5 / 1.5, 12);
  });

  test('is met without a band exactly when the margin is not negative', () => {
    fc.assert(
      fc.property(number, number, (value, upper) => {
        const { state, margin } = judgeLimit(most(plain(value), upper));
        expect(state === 'meets').toBe((margin as number) >= 0);
      }),
      { seed: 51 },
    );
  });

  test('can only fare worse when the band grows, and a mirror image fares alike', () => {
    const rank = { meets: 0, 'at risk': 1, misses: 1 };
    fc.assert(
      fc.property(number, number, fc.double({ min: 0, max: 10, noNaN: true }), (value, limit, half) => {
        const narrow = judgeLimit(most(band(value, value - half, value + half), limit));
        const wide = judgeLimit(most(band(value, value - 2 * half, value + 2 * half), limit));
        expect(rank[wide.state]).toBeGreaterThanOrEqual(rank[narrow.state]);
        const mirrored = judgeLimit(least(band(-value, -value - half, -value + half), -limit));
        expect(mirrored.state).toBe(narrow.state);
        expect(mirrored.margin).toBeCloseTo(narrow.margin as number, 9);
      }),
      { seed: 52 },
    );
  });
});

describe('all limits', () => {
  const words: LimitWords = {
    labels: { a: 'taper', b: 'edge chip', c: 'floor Ra', s: 'stall' },
    apart: new Set(['s']),
  };
  const rows = (...states: ('meets' | 'at risk' | 'misses')[]): LimitRow[] =>
    states.map((state, index) => {
      const figure = { meets: band(1, 0, 2), 'at risk': band(2.5 + index / 10, 2, 4), misses: band(5, 4, 6) }[state];
      return { id: 'abc'[index] as string, figure, lower: null, upper: 3 };
    });

  test('are as good as the worst of them', () => {
    fc.assert(
      fc.property(
        fc.array(fc.constantFrom('meets' as const, 'at risk' as const, 'misses' as const), { maxLength: 3 }),
        (states) => {
          const worst = (['misses', 'at risk', 'meets'] as const).find((state) => states.includes(state));
          expect(judgeLimits(rows(...states)).overall).toBe(worst ?? 'not judged');
        },
      ),
      { seed: 53 },
    );
  });

  test.each([
    [rows('meets', 'meets', 'meets'), 'Meets the drawing: all three limits.', 'Three of three limits are met.'],
    [rows('at risk', 'at risk', 'meets'), 'At risk: edge chip, taper', 'One of three limits is met.'],
    [rows('meets', 'at risk', 'misses'), 'Misses: floor Ra; at risk: edge chip', 'One of three limits is met.'],
    [rows('misses'), 'Misses: taper', 'None of one limit is met.'],
    [[], 'The drawing sets no limits.', 'No limit is judged.'],
  ])('are told in one line', (limits, line, count) => {
    const verdict = judgeLimits(limits);
    expect(headline(verdict, words)).toBe(line);
    expect(summary(verdict, words)).toBe(count);
  });
});
