import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { CARRIERS, kriegerDougherty, mixtureDensity } from '#src/physics/slurry/viscosity.ts';

const SPHERES = { packing: 0.58, intrinsic: 2.5 };

describe('viscosity of a slurry', () => {
  it('is 1.32, 1.85, 2.875, 5.46 and 17.7 times the carrier from 10 to 50 % (Krieger and Dougherty 1959, from memory)', () => {
    const times = (solids: number) => kriegerDougherty(1e-3, solids, SPHERES) / 1e-3;
    expect(times(0.3)).toBeCloseTo((1 - 0.3 / 0.58) ** (-2.5 * 0.58), 12);
    expect(Math.abs(times(0.3) / 2.875 - 1)).toBeLessThan(1e-3);
    expect(times(0.1)).toBeCloseTo(1.32, 2);
    expect(times(0.2)).toBeCloseTo(1.85, 2);
    expect(times(0.4)).toBeCloseTo(5.46, 2);
    expect(times(0.5)).toBeCloseTo(17.7, 1);
  });

  it("is Einstein's 1 + [eta] phi where solids are few", () => {
    // the next term is about 5 phi^2
    expect(Math.abs(kriegerDougherty(1, 1e-4, SPHERES) - (1 + 2.5e-4))).toBeLessThan(1e-7);
    expect(kriegerDougherty(1e-3, 0, SPHERES)).toBe(1e-3);
  });

  it('rises with solids and has no bound where they pack', () => {
    const share = fc.double({ min: 0, max: 0.57, noNaN: true });
    fc.assert(
      fc.property(share, share, (a, b) => {
        const [few, many] = a < b ? [a, b] : [b, a];
        expect(kriegerDougherty(1, many, SPHERES)).toBeGreaterThanOrEqual(kriegerDougherty(1, few, SPHERES));
      }),
      { seed: 2, numRuns: 200 },
    );
    expect(kriegerDougherty(1, 0.58, SPHERES)).toBe(Infinity);
  });

  it('goes with a density by volume: boron carbide at 30 % in water 1454.6 kg/m3', () => {
    expect(mixtureDensity(CARRIERS.water.density, 2520, 0.3)).toBeCloseTo(0.7 * 998 + 0.3 * 2520, 9);
  });
});
