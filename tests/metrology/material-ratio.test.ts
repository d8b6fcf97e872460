import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { normalQuantile } from '#src/base/math.ts';
import {
  coreParameters,
  heightAtRatio,
  materialRatio,
  materialRatioCurve,
  ratioAtHeight,
  ratioHeight,
} from '#src/metrology/material-ratio.ts';
import { sampled } from './random.ts';

const triangle = sampled(4000, (t) => 1 - 4 * Math.abs(t - 0.5));

describe('the material-ratio curve', () => {
  it('of a triangle is straight: Rmr at mid-level 50 %, Rdc = 2 A (q - p)', () => {
    const curve = materialRatioCurve(triangle);
    expect(ratioAtHeight(curve, 0)).toBe(0.5);
    expect(materialRatio(curve, 0.5, 0)).toBeCloseTo(0.25, 3);
    // heights come in pairs, so the curve has steps of 1/2000 of its height
    expect(Math.abs(ratioHeight(curve, 0.1, 0.6) - 2 * 0.5)).toBeLessThan(1e-3);
  });

  it('counts heights at or above a level, and leaves out NaN', () => {
    const curve = materialRatioCurve(Float64Array.of(3, Number.NaN, 1, 2, 2));
    expect(curve).toEqual(Float64Array.of(3, 2, 2, 1));
    expect([4, 3, 2, 1.5, 1, 0].map((height) => ratioAtHeight(curve, height))).toEqual([0, 0.25, 0.75, 0.75, 1, 1]);
    expect([heightAtRatio(curve, 0), heightAtRatio(curve, 1), heightAtRatio(curve, 0.25)]).toEqual([3, 1, 2.5]);
    expect(() => materialRatioCurve(Float64Array.of(Number.NaN))).toThrow(RangeError);
    expect(() => coreParameters(curve)).toThrow(RangeError);
  });

  it('falls from one end to the other, whatever the heights', () => {
    const heights = fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 5, maxLength: 100 });
    fc.assert(
      fc.property(
        heights,
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        (z, p, q) => {
          const curve = materialRatioCurve(Float64Array.from(z));
          expect(ratioHeight(curve, Math.min(p, q), Math.max(p, q))).toBeGreaterThanOrEqual(0);
          const core = coreParameters(curve);
          expect(core.rk).toBeGreaterThanOrEqual(0);
          expect(core.rpk).toBeGreaterThanOrEqual(0);
          expect(core.rvk).toBeGreaterThanOrEqual(0);
          expect(core.rmrk1).toBeLessThanOrEqual(1);
          expect(core.rmrk2).toBeGreaterThanOrEqual(0);
        },
      ),
      { seed: 13565, numRuns: 200 },
    );
  });
});

describe('the core of the curve (construction of ISO 13565-2, from memory)', () => {
  it('of a sawtooth is all of it: Rk = 2 A, Rpk = Rvk = 0', () => {
    const found = coreParameters(materialRatioCurve(sampled(1000, (t) => 2 * t - 1)));
    expect(found.rk).toBeCloseTo(2, 12);
    expect([found.rpk, found.rvk, found.rmrk1, found.rmrk2]).toEqual([0, 0, 0, 1]);
  });

  it('of a triangle is all of it up to the step of its paired heights', () => {
    const found = coreParameters(materialRatioCurve(triangle));
    expect(Math.abs(found.rk - 2)).toBeLessThan(1e-3);
    expect(Math.max(found.rpk, found.rvk)).toBeLessThan(1e-3);
  });

  it('of Gaussian heights has the computed values', () => {
    const found = coreParameters(materialRatioCurve(sampled(200_000, normalQuantile)));
    // the curve is stepped by 5e-6 in ratio; the flattest window is flat to second order in its place
    expect(Math.abs(found.rk - 2.573956108)).toBeLessThan(2e-5);
    expect(Math.abs(found.rmrk1 - 0.09905097)).toBeLessThan(1e-5);
    expect(Math.abs(found.rmrk2 - 0.90094903)).toBeLessThan(1e-5);
    expect(Math.abs(found.rpk - 0.945030726)).toBeLessThan(2e-4);
    expect(Math.abs(found.rvk - 0.945030726)).toBeLessThan(2e-4);
  });

  it('of a plateau with grooves puts the grooves into Rvk alone', () => {
    // 10 % triangular grooves, 10 deep, in a plateau of height 1
    const z = sampled(10_000, (t) => (t < 0.9 ? (t / 0.9) * 1 : -10 * ((t - 0.9) / 0.1)));
    const found = coreParameters(materialRatioCurve(z));
    // the plateau's line falls by 1 in 0.9 of the curve; read at 100 % it is 1/0.9 below the top
    expect(found.rk).toBeCloseTo(1 / 0.9, 2);
    expect(found.rpk).toBeCloseTo(0, 6);
    expect(found.rmrk2).toBeCloseTo(0.9 + (0.1 * (1 / 0.9 - 1)) / 10, 3);
    // the triangle below the lower bound keeps its height
    expect(found.rvk).toBeCloseTo(10 - (1 / 0.9 - 1), 2);
  });

  it('of a flat surface is nothing', () => {
    const found = coreParameters(new Float64Array(10));
    expect([found.rk, found.rpk, found.rvk]).toEqual([0, 0, 0]);
  });
});
