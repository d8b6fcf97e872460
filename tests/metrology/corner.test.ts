import { describe, expect, it } from 'vitest';
import type { PlanePoints } from '#src/metrology/circle.ts';
import { cornerRadius } from '#src/metrology/corner.ts';
import { normalSource, uniformSource } from './random.ts';

const MM = 1e-3;
const UM = 1e-6;

interface Fillet {
  readonly radius: number;
  /** Angle between wall and floor (rad). */
  readonly angle: number;
  readonly straight: number;
  readonly spacing: number;
  readonly noise?: number;
  readonly turn?: number;
}

/** Points down a wall, round a fillet and along a floor, square to the profile displaced by noise. */
function profileOf({ radius, angle, straight, spacing, noise = 0, turn = 0 }: Fillet): PlanePoints {
  const normal = normalSource(40);
  const setback = radius / Math.tan(angle / 2);
  const arc = radius * (Math.PI - angle);
  const count = Math.round((2 * straight + arc) / spacing);
  const x = new Float64Array(count);
  const y = new Float64Array(count);
  // floor along +x from the corner, wall at `angle` to it
  const [wx, wy] = [Math.cos(angle), Math.sin(angle)];
  for (let i = 0; i < count; i++) {
    const s = i * spacing;
    const off = noise * normal();
    let p: [number, number];
    if (s < straight) {
      const t = setback + straight - s;
      p = [t * wx + off * wy, t * wy - off * wx];
    } else if (s < straight + arc) {
      const turned = -Math.PI / 2 - (Math.PI - angle) + (s - straight) / radius;
      p = [setback + (radius + off) * Math.cos(turned), radius + (radius + off) * Math.sin(turned)];
    } else {
      p = [setback + s - straight - arc, off];
    }
    x[i] = p[0] * Math.cos(turn) - p[1] * Math.sin(turn) + 2 * MM;
    y[i] = p[0] * Math.sin(turn) + p[1] * Math.cos(turn) - 3 * MM;
  }
  return { x, y };
}

describe('the corner radius between wall and floor', () => {
  it.each([0.03, 0.1, 0.3])('of an exact fillet of %f mm is that radius, at any angle and place', (radius) => {
    for (const angle of [80, 90, 92, 110].map((degrees) => (degrees * Math.PI) / 180)) {
      for (const turn of [0, 1.3, Math.PI]) {
        const found = cornerRadius(
          profileOf({ radius: radius * MM, angle, straight: 0.4 * MM, spacing: (radius * MM) / 60, turn }),
        );
        // points of the arc lie on the circle to rounding, wherever exactly the arc is cut
        expect(Math.abs(found.radius / (radius * MM) - 1)).toBeLessThan(1e-7);
        expect(Math.abs(found.tangentRadius / (radius * MM) - 1)).toBeLessThan(1e-4);
        expect(found.angle).toBeCloseTo(angle, 5);
      }
    }
  });

  it('of a rough fillet is found within a few standard errors', () => {
    const radius = 0.1 * MM;
    const found = cornerRadius(
      profileOf({ radius, angle: Math.PI / 2, straight: 0.4 * MM, spacing: 1 * UM, noise: 2 * UM }),
    );
    // 125 points over 72 degrees; the standard error comes from the points themselves
    expect(found.radiusError).toBeLessThan(5 * UM);
    expect(Math.abs(found.radius - radius)).toBeLessThan(3 * found.radiusError);
    expect(Math.abs(found.tangentRadius - radius)).toBeLessThan(4 * UM);
    expect(Math.abs(found.residual - 2 * UM)).toBeLessThan(0.6 * UM);
  });

  it('does not move when the wall is chipped at the far end or a few points fly off', () => {
    const radius = 0.1 * MM;
    const points = profileOf({ radius, angle: Math.PI / 2, straight: 0.4 * MM, spacing: 2 * UM, noise: 0.5 * UM });
    const uniform = uniformSource(41);
    for (let i = 0; i < 20; i++) points.x[i] -= 30 * UM * uniform();
    points.y[points.y.length - 15] -= 50 * UM;
    expect(Math.abs(cornerRadius(points).tangentRadius - radius)).toBeLessThan(2 * UM);
    expect(Math.abs(cornerRadius(points).radius - radius)).toBeLessThan(5 * UM);
  });

  it('is the same however long the straights beside it', () => {
    const radius = 0.1 * MM;
    for (const straight of [0.12, 0.3, 2]) {
      const found = cornerRadius(profileOf({ radius, angle: 1.6, straight: straight * MM, spacing: 1 * UM }));
      expect(Math.abs(found.radius / radius - 1)).toBeLessThan(1e-6);
    }
  });

  it('of a corner sharper than its points is not resolved: NaN', () => {
    const found = cornerRadius(profileOf({ radius: 1 * UM, angle: Math.PI / 2, straight: 0.4 * MM, spacing: 5 * UM }));
    expect(found.radius).toBeNaN();
    expect(found.points).toBeLessThan(5);
  });

  it('is refused for a straight profile or for too few points', () => {
    const s = Float64Array.from({ length: 50 }, (_, i) => i * UM);
    expect(() => cornerRadius({ x: s, y: s })).toThrow(RangeError);
    expect(() => cornerRadius({ x: s.slice(0, 7), y: s.slice(0, 7) })).toThrow(RangeError);
  });
});
