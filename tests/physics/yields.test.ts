import { describe, expect, test } from 'vitest';
import { crackStart, debrisShare } from '#src/physics/yields.ts';
import { conditionsOf, works } from '../support/conditions.ts';

describe('what leaves of a dent', () => {
  const carbide = { ...works.sodaLime, hardness: 15.5e9, toughness: 10e6 };
  const mildSteel = { ...works.sodaLime, hardness: 1.5e9, toughness: 100e6 };

  test('a crack starts from 44.2 (K_Ic / H)^2 (Lawn and Evans 1977, from memory): 0.8 um in glass, 18 um in carbide', () => {
    expect(crackStart(works.sodaLime)).toBeCloseTo(44.2 * (0.75e6 / 5.5e9) ** 2, 15);
    expect(crackStart(carbide) / 1e-6).toBeCloseTo(18.4, 1);
  });

  test('nearly all in glass, most in cemented carbide, next to nothing in a ductile metal, which dents push aside', () => {
    const shareIn = (work: typeof carbide) => debrisShare(conditionsOf({ work }));
    expect(shareIn(works.sodaLime)).toBeGreaterThan(0.98);
    expect(shareIn(works.alumina)).toBeGreaterThan(0.9);
    expect(shareIn(carbide)).toBeGreaterThan(0.6);
    expect(shareIn(carbide)).toBeLessThan(0.9);
    expect(shareIn(mildSteel)).toBeLessThan(0.01);
  });
});
