import { describe, expect, it } from 'vitest';
import { makeSlurryFace } from '#src/physics/estimate.ts';
import { slurryConstants } from '#src/physics/process/constants.ts';
import { peakSpeed, slurryDensity, slurryViscosity } from '#src/physics/process/exchange.ts';
import { type FaceShape, shapeAge } from '#src/physics/process/face.ts';
import { fedFace } from '#src/physics/process/feed.ts';
import { forcedFlow, pulsedCube, throughFlow } from '#src/physics/process/through-flow.ts';
import { annulusFlow, plugAge, radialFlowAge } from '#src/physics/slurry/closed-forms.ts';
import { filmMobility, sideResistance } from '#src/physics/slurry/flow.ts';
import { CARRIERS } from '#src/physics/slurry/viscosity.ts';
import { BORE, drawn, faceOf, glass, pumped, TOOL } from './faces.ts';

const FILM = 50e-6;

/**
 * Mean flow of a film that breathes, over G / (12 nu): u_t = G + nu u_ss / h(t)^2 on s = z / h in (0, 1), u = 0 on both
 * walls, followed with implicit steps until it repeats.
 */
function breathing(film: number, amplitude: number, frequency: number, kinematic: number): number {
  const [nodes, steps, cycles] = [40, 200, 60];
  const u = new Float64Array(nodes + 1);
  const c = new Float64Array(nodes + 1);
  const dt = 1 / (frequency * steps);
  let flow = 0;
  for (let n = 0; n < cycles * steps; n++) {
    const h = film - amplitude * Math.cos((2 * Math.PI * (n + 1)) / steps);
    const r = (kinematic * dt * nodes * nodes) / (h * h);
    // Thomas's algorithm for (1 + 2 r) u_i - r u_(i-1) - r u_(i+1) = u_i + dt
    for (let i = 1; i < nodes; i++) {
      const pivot = 1 + 2 * r - (i > 1 ? r * (c[i - 1] as number) : 0);
      c[i] = r / pivot;
      u[i] = ((u[i] as number) + dt + (i > 1 ? r * (u[i - 1] as number) : 0)) / pivot;
    }
    for (let i = nodes - 2; i > 0; i--) u[i] += (c[i] as number) * (u[i + 1] as number);
    if (n >= (cycles - 1) * steps) flow += (h * u.reduce((sum, v) => sum + v, 0)) / nodes / steps;
  }
  return 12 * kinematic * flow;
}

describe('a film that breathes', () => {
  it('passes the mean cube where viscosity is fast, less than the cube of the mean where it is slow', () => {
    const [film, amplitude, frequency] = [60e-6, 25e-6, 20e3];
    const cube = film ** 3;
    // lag w h^2 / (pi^2 nu) of 0.03 and 30: first-order steps and the half-way law leave a few per cent
    const nu = (lag: number) => (2 * Math.PI * frequency * film * film) / (Math.PI * Math.PI * lag);
    const a = amplitude / film;
    expect(breathing(film, amplitude, frequency, nu(0.03)) / (cube * (1 + 1.5 * a * a))).toBeCloseTo(1, 1);
    expect(breathing(film, amplitude, frequency, nu(30)) / (cube * (1 - a * a) ** 1.5)).toBeCloseTo(1, 1);
    for (const lag of [0.03, 0.3, 1, 3, 30]) {
      const law = pulsedCube(film, amplitude, frequency, nu(lag));
      expect(Math.abs(law / breathing(film, amplitude, frequency, nu(lag)) - 1)).toBeLessThan(0.1);
    }
  });

  it('in water at 20 kHz gains nothing from its breathing: the slurry cannot follow', () => {
    expect(pulsedCube(60e-6, 19e-6, 20e3, 1.4e-6)).toBeLessThan(60e-6 ** 3);
  });
});

/** Means over the zones of a face of a function of the distance from its middle. */
function zoneMean({ grid, zoneOf, zones }: FaceShape, f: (r: number) => number): Float64Array {
  const sums = new Float64Array(zones);
  const areas = new Float64Array(zones);
  zoneOf.forEach((zone, c) => {
    if (zone >= zones) return;
    const x = grid.x0 + (c % grid.nx) * grid.pitch;
    const y = grid.y0 + Math.floor(c / grid.nx) * grid.pitch;
    const area = grid.area[c] as number;
    sums[zone] = (sums[zone] as number) + area * f(Math.min(6.35e-3, Math.max(1.5e-3, Math.hypot(x, y))));
    areas[zone] = (areas[zone] as number) + area;
  });
  return sums.map((sum, zone) => sum / (areas[zone] as number));
}

describe('flow through a bore', () => {
  const face = faceOf(pumped(1e5));
  const setting = { ...face, conditions: glass };
  const feed = face.shape.feed;
  if (!feed) throw new Error('no feed');
  const place = { depth: 0, film: FILM, gritFraction: 0.17, debris: 0 };

  it('is that of the annulus through the film, and has the side gap in series', () => {
    const viscosity = slurryViscosity(setting, 0.17);
    const cube = pulsedCube(FILM, glass.amplitude, glass.frequency, viscosity / slurryDensity(setting));
    const mobility = (filmMobility(FILM, viscosity) * cube) / FILM ** 3;
    const bare = annulusFlow(BORE.radius, 6.35e-3, mobility) * 1e5;
    // Ri by the grid to 2 %, and the head lost in the bore's mouth
    expect(forcedFlow(setting, feed, place)).toBeLessThan(1.02 * bare);
    expect(forcedFlow(setting, feed, place)).toBeGreaterThan(0.8 * bare);
    const deep = forcedFlow(setting, feed, { ...place, depth: 12e-3 });
    const width = setting.constants.sideFlowGap * glass.grit.massMedian;
    const side = sideResistance(Math.PI * 12.7e-3, { width, depth: 12e-3, viscosity: slurryViscosity(setting, 0.2) });
    expect(1e5 / deep - 1e5 / forcedFlow(setting, feed, place)).toBeCloseTo(side, -10);
  });

  it('goes the other way when drawn, never by more than an atmosphere, and less through debris', () => {
    const suction = faceOf(drawn(5e4)).shape.feed;
    const hard = faceOf(drawn(9e5)).shape.feed;
    if (!suction || !hard) throw new Error('no feed');
    expect(forcedFlow(setting, suction, place)).toBeLessThan(0);
    expect(forcedFlow(setting, hard, place)).toBe(forcedFlow(setting, { ...hard, pressure: -1e5 }, place));
    expect(forcedFlow(setting, feed, { ...place, debris: 0.01 })).toBeLessThan(forcedFlow(setting, feed, place));
  });

  it('conserves the age: what the face makes leaves by its two edges', () => {
    // per unit source the dispersion out of both edges is the area, so the share through the fed one lies in 0..1
    for (const share of feed.fedOut) {
      expect(share).toBeGreaterThanOrEqual(-1e-6);
      expect(share).toBeLessThanOrEqual(1 + 1e-6);
    }
    // a field of 1 at the bore and 0 at the edge loses at the edge what flow and dispersion bring from the bore
    feed.strengths.forEach((strength, k) => {
      const brought = strength + (feed.fromFed[k] as number);
      expect(Math.abs((feed.toOpen[k] as number) / brought - 1)).toBeLessThan(2e-3);
    });
  });

  it('has the ages of radial flow with dispersion between the strengths of its table, to a few per cent', () => {
    // no pumping: D' is the same all over, and the age 0 at both edges closed
    const constants = { ...slurryConstants, pumping: 0 };
    const supply = { carrier: CARRIERS.water, delivery: pumped(1e5) };
    const { shape } = makeSlurryFace(glass, TOOL, [BORE], supply, { cells: 64, constants });
    const fed = shape.feed;
    if (!fed) throw new Error('no feed');
    const film = ((shape.films[0] as number) + (shape.films[1] as number)) / 2;
    for (const part of [0.06, 0.25, 0.9, 3.5]) {
      const strength = part * fed.scale;
      const radial = { inner: BORE.radius, outer: 6.35e-3, flow: strength, film: 1 };
      const exact = zoneMean(shape, (r) => radialFlowAge(r, radial, constants.stirring * film));
      const table = fedFace(fed, shape.zones, strength);
      for (let zone = 1; zone < shape.zones; zone++) {
        const found = shapeAge(shape, zone, film) * (table.slowed[zone] as number);
        // entries a factor of four apart, at which the error is 1 %
        expect(Math.abs(found / (exact[zone] as number) - 1)).toBeLessThan(0.09);
      }
    }
  });

  it('tends to the ages of plug flow where it is strong', () => {
    const still = Float64Array.from({ length: face.shape.zones }, (_, zone) => shapeAge(face.shape, zone, FILM));
    const strong = { ...feed, pressure: 1e9 };
    const flow = throughFlow(setting, { ...face.shape, feed: strong }, still, place);
    const outer = flow.ages.reduce((most, age) => Math.max(most, age), 0);
    // age at the rim (R^2 - Ri^2) pi h / Q; the outermost zone's mean lies 5 % of the area inside it
    const rim = plugAge(6.35e-3, { inner: BORE.radius, outer: 6.35e-3, flow: flow.flow, film: FILM });
    expect(Math.abs(outer / (0.95 * rim) - 1)).toBeLessThan(0.1);
  });
});

describe('a path that cannot flow', () => {
  const supply = (delivery: ReturnType<typeof drawn>) => ({ carrier: CARRIERS.water, delivery });

  it('is refused with its cause: no bore, no pressure, a bore that no grain passes', () => {
    expect(() => makeSlurryFace(glass, TOOL, [], supply(drawn(5e4)))).toThrow('slurry cannot be drawn through a tool');
    expect(() => makeSlurryFace(glass, TOOL, [], supply(pumped(5e4)))).toThrow(
      'slurry cannot be pumped through a tool',
    );
    expect(() => makeSlurryFace(glass, TOOL, [BORE], supply(pumped(0)))).toThrow('above zero');
    const fine = [{ x: 0, y: 0, radius: 30e-6 }];
    expect(() => makeSlurryFace(glass, TOOL, fine, supply(pumped(5e4)))).toThrow('does not pass the largest grain');
  });

  it('is open through the hollow of a ring', () => {
    const ring = { kind: 'ring', outerDiameter: 12.7e-3, innerDiameter: 8.7e-3 } as const;
    const face = makeSlurryFace(glass, ring, [], supply(drawn(5e4)), { cells: 48 });
    expect(face.shape.feed?.bored).toBe(false);
    expect(peakSpeed(glass)).toBeCloseTo(2 * Math.PI * 20e3 * 19e-6, 9);
  });
});
