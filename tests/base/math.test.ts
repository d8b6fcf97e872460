import fc from 'fast-check';
import { expect, test } from 'vitest';
import { acos, atan, atan2, cos, exp, log, normalDistribution, normalQuantile, pow, sin } from '#src/base/math.ts';

const seeded = { seed: 20261201, numRuns: 2000 };

/** A few units in the last place: the argument reductions and series each round a handful of times. */
const ULPS = 8 * Number.EPSILON;

function near(actual: number, expected: number, relative = ULPS, absolute = 1e-300): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(relative * Math.abs(expected) + absolute);
}

test('exp and log agree with the host to a few units in the last place', () => {
  fc.assert(
    fc.property(fc.double({ min: -700, max: 700, noNaN: true }), (x) => {
      // reducing x by k ln 2 leaves an absolute error of |x| eps in the exponent
      near(exp(x), Math.exp(x), ULPS + Math.abs(x) * 2 * Number.EPSILON);
    }),
    seeded,
  );
  fc.assert(
    fc.property(fc.double({ min: 1e-300, max: 1e300, noNaN: true }), (x) => near(log(x), Math.log(x), ULPS, 1e-16)),
    seeded,
  );
});

test('log undoes exp', () => {
  fc.assert(
    fc.property(fc.double({ min: -600, max: 600, noNaN: true }), (x) => near(log(exp(x)), x, ULPS, 1e-15)),
    seeded,
  );
});

test('the limits of exp, log and pow are those of the functions', () => {
  expect(exp(0)).toBe(1);
  expect(exp(-1e9)).toBe(0);
  expect(exp(1e9)).toBe(Number.POSITIVE_INFINITY);
  expect(log(1)).toBe(0);
  expect(log(0)).toBe(Number.NEGATIVE_INFINITY);
  expect(log(-1)).toBeNaN();
  expect(exp(Number.NaN)).toBeNaN();
  expect(pow(0, 2)).toBe(0);
  expect(pow(5, 0)).toBe(1);
  near(pow(2, 10), 1024, 4 * ULPS);
});

test('sine, cosine and the inverse functions agree with the host', () => {
  fc.assert(
    fc.property(fc.double({ min: -50, max: 50, noNaN: true }), (x) => {
      // two-part reduction by pi / 2 keeps the absolute error at the rounding of x
      near(sin(x), Math.sin(x), ULPS, 4e-15);
      near(cos(x), Math.cos(x), ULPS, 4e-15);
    }),
    seeded,
  );
  fc.assert(
    fc.property(fc.double({ min: -1, max: 1, noNaN: true }), (x) => near(acos(x), Math.acos(x), ULPS, 1e-15)),
    seeded,
  );
  fc.assert(
    fc.property(
      fc.double({ min: -1e3, max: 1e3, noNaN: true }),
      fc.double({ min: -1e3, max: 1e3, noNaN: true }),
      (y, x) => {
        near(atan(y), Math.atan(y), ULPS);
        if (x !== 0 && y !== 0) near(atan2(y, x), Math.atan2(y, x), ULPS);
      },
    ),
    seeded,
  );
});

test('the normal law: tabulated values, symmetry, and the quantile undoes the distribution far into the tail', () => {
  // Abramowitz and Stegun, table 26.1 (published): Phi(1), Phi(2), Phi(3)
  near(normalDistribution(1), 0.841344746068543, 1e-14);
  near(normalDistribution(2), 0.977249868051821, 1e-14);
  near(normalDistribution(3), 0.998650101968369, 1e-14);
  // the same table's Q(6) and Q(10), to the digits printed there
  near(normalDistribution(-6), 9.86588e-10, 1e-5);
  near(normalDistribution(-10), 7.61985e-24, 1e-5);
  near(normalQuantile(0.975), 1.959963984540054, 1e-13);
  fc.assert(
    fc.property(fc.double({ min: -20, max: 5, noNaN: true }), (z) =>
      near(normalQuantile(normalDistribution(z)), z, 1e-9, 1e-9),
    ),
    { seed: 1, numRuns: 500 },
  );
});
