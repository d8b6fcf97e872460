import { describe, expect, test } from 'vitest';
import { makeOutline } from '#src/base/outline.ts';
import { estimate } from '#src/physics/estimate.ts';
import { contactRows, gapSums } from '#src/physics/gap-sums.ts';
import { slurryConstants } from '#src/physics/process/constants.ts';
import { shapeAge } from '#src/physics/process/face.ts';
import { agedShares, placeAt } from '#src/physics/process/place.ts';
import { bestPoint, curvePlaces, pointAt, type SlurryCurve, slurryCurve } from '#src/physics/process/slurry-curve.ts';
import type { Conditions } from '#src/physics/records.ts';
import type { Carrier } from '#src/physics/slurry/viscosity.ts';
import { conditionsOf, cutSpecOf, works } from '../../support/conditions.ts';
import { settingOf } from '../../support/cut-run.ts';
import { waterFace } from '../../support/slurry.ts';

const MPA = 1e6;
const glass = conditionsOf({ work: works.sodaLime, amplitude: 19e-6 });
const disc = (diameter: number) => ({ kind: 'circle', diameter }) as const;

function curveOf(
  conditions: Conditions,
  at: { diameter?: number; depth?: number; carrier?: Carrier; constants?: typeof slurryConstants } = {},
): SlurryCurve {
  const face = waterFace(conditions, disc(at.diameter ?? 12.7e-3));
  const setting = {
    ...face,
    conditions,
    ...(at.carrier && { carrier: at.carrier }),
    ...(at.constants && { constants: at.constants }),
  };
  return slurryCurve(setting, curvePlaces(gapSums(contactRows(conditions))), at.depth ?? 6.35e-3);
}

const base = curveOf(glass);

describe('the shape of exchange', () => {
  test('on a disc the age grows inward as the integral of r / (2 (k_D h + k_P r)), to a few per cent', () => {
    // closed form of div(h D grad T) = -h with D = k_D h + k_P r: T = integral from r to R of r' / (2 D(r'))
    const radius = 6.35e-3;
    const face = waterFace(glass, disc(2 * radius), 96);
    const film = face.shape.films[1] as number;
    const { stirring, pumping } = slurryConstants;
    const age = (r: number) => {
      let sum = 0;
      const steps = 2000;
      for (let k = 0; k < steps; k++) {
        const x = r + ((radius - r) * (k + 0.5)) / steps;
        sum += (x / (2 * (stirring * film + pumping * x))) * ((radius - r) / steps);
      }
      return sum;
    };
    // zones of equal area from the edge inward: zone k spans r^2 from 1 - k/10 to 1 - (k + 1)/10 of R^2
    for (let zone = 1; zone < 10; zone++) {
      const middle = radius * Math.sqrt(1 - (zone + 0.5) / 10);
      expect(Math.abs(shapeAge(face.shape, zone, film) / age(middle) - 1)).toBeLessThan(0.05);
    }
  });

  test('zones have equal areas that add up to the face', () => {
    const { shape } = waterFace(glass, { kind: 'rectangle', length: 4e-3, width: 2.5e-3, cornerRadius: 0 });
    expect(Math.abs(shape.area / 10e-6 - 1)).toBeLessThan(0.01);
    const areas = new Float64Array(shape.zones);
    shape.zoneOf.forEach((zone, c) => {
      if (zone < shape.zones) areas[zone] = (areas[zone] as number) + (shape.grid.area[c] as number);
    });
    for (const area of areas) expect(Math.abs(area / (shape.area / 10) - 1)).toBeLessThan(0.1);
  });
});

test('crushing conserves the volume of grit: two grains of half the volume for each that breaks', () => {
  const sums = gapSums(contactRows(glass));
  const place = placeAt(sums, 45e-6, 2e-6, 1);
  const { diameter, fraction } = sums.rows.classes;
  const volume = (shares: Float64Array) => shares.reduce((sum, q, i) => sum + q * (diameter[i] as number) ** 3, 0);
  const aged = agedShares(place, 0.05, new Float64Array(fraction.length));
  // nu = (q + 2 k age nu_parent) / (1 + k age) summed with d^3: exact but for what leaves the last classes
  expect(Math.abs(volume(aged) / volume(fraction) - 1)).toBeLessThan(1e-6);
  expect(aged[0] as number).toBeLessThan(fraction[0] as number);
});

describe('a best load emerges from debris, crushing and thickening', () => {
  test('the load curve rises, stalls, and falls: at 2.5 times the best load the rate is at least a tenth lower', () => {
    const best = bestPoint(base);
    expect(base.stall).toBeLessThan(1 * MPA);
    expect(base.stall).toBeGreaterThan(0.03 * MPA);
    const beyond = pointAt(base, 2.5 * best.pressure);
    expect(beyond.rate).toBeLessThan(0.9 * best.rate);
    expect(pointAt(base, 0.3 * best.pressure).rate).toBeLessThan(best.rate);
  });

  test('it moves up with the amplitude and down with the size of the tool', () => {
    expect(curveOf({ ...glass, amplitude: 38e-6 }).stall).toBeGreaterThan(1.3 * base.stall);
    expect(curveOf(glass, { diameter: 20e-3 }).stall).toBeLessThan(0.9 * base.stall);
    expect(curveOf(glass, { diameter: 5e-3 }).stall).toBeGreaterThan(1.3 * base.stall);
  });

  test('without debris bulking and fines there is none below 1 MPa', () => {
    const constants = { ...slurryConstants, debrisBulking: 0, finesYield: 0, shielding: 1e9 };
    expect(curveOf(glass, { constants }).stall).toBeGreaterThan(1 * MPA);
  });
});

describe('trends nobody put in', () => {
  test('larger faces, deeper cavities and thicker carriers are slower at the same pressure', () => {
    const p = 0.1 * MPA;
    const rate = (curve: SlurryCurve) => pointAt(curve, p).rate;
    expect(rate(curveOf(glass, { diameter: 20e-3 }))).toBeLessThan(rate(base));
    expect(rate(curveOf(glass, { diameter: 5e-3 }))).toBeGreaterThan(rate(base));
    expect(rate(curveOf(glass, { depth: 12.7e-3 }))).toBeLessThan(rate(base));
    expect(rate(curveOf(glass, { depth: 0 }))).toBeGreaterThan(rate(base));
    expect(rate(curveOf(glass, { carrier: { viscosity: 3e-3, density: 998 } }))).toBeLessThan(rate(base));
  });

  test('concentration saturates between 30 and 40 vol%', () => {
    // Kennedy and Grieve 1975, from memory: check D9's bands
    const best = (concentration: number) => bestPoint(curveOf({ ...glass, concentration })).rate;
    const [low, middle, high] = [best(0.2), best(0.4), best(0.6)];
    expect(middle / low).toBeGreaterThan(1);
    expect(middle / low).toBeLessThan(1.5);
    expect(high / middle).toBeGreaterThan(0.6);
    expect(high / middle).toBeLessThan(1.1);
  });

  test('the middle of the face ages most and cuts least: a hump', () => {
    const { zones } = pointAt(base, 0.15 * MPA);
    for (let k = 1; k < zones.length; k++) {
      const [outer, inner] = [zones[k - 1], zones[k]] as const;
      if (!outer || !inner) continue;
      expect(inner.age).toBeGreaterThan(outer.age);
      expect(inner.useful * inner.rate).toBeLessThan(outer.useful * outer.rate);
    }
  });

  test('a ring cuts faster than the full face of its outline', () => {
    const ring = { kind: 'ring', outerDiameter: 12.7e-3, innerDiameter: 8.7e-3 } as const;
    const setting = { ...waterFace(glass, ring), conditions: glass };
    const curve = slurryCurve(setting, curvePlaces(gapSums(contactRows(glass))), 6.35e-3);
    expect(bestPoint(curve).rate).toBeGreaterThan(1.3 * bestPoint(base).rate);
  });
});

test('the estimate with slurry falls with depth, states its stall margin, and tends to the fresh one on a tiny tool', () => {
  const spec = cutSpecOf({ conditions: glass, diameter: 12.7e-3, pressure: 0.1e6, depth: 12.7e-3 });
  const slurry = waterFace(glass, spec.tool);
  const aged = estimate({ ...settingOf(spec), slurry });
  const fresh = estimate(settingOf(spec));
  expect(aged.rateEnd).toBeLessThan(aged.rateStart);
  expect(aged.rate).toBeLessThan(fresh.rate);
  expect(aged.stallMargin).toBeCloseTo(1 - 0.1e6 / (aged.stallPressure ?? 0), 12);
  expect(fresh.stallMargin).toBeNull();
  const small = cutSpecOf({ conditions: glass, diameter: 0.5e-3, pressure: 0.02e6, depth: 20e-6 });
  const tiny = estimate({ ...settingOf(small), slurry: waterFace(glass, small.tool) });
  expect(Math.abs(tiny.rate / estimate(settingOf(small)).rate - 1)).toBeLessThan(0.15);
  expect(makeOutline(small.tool).area).toBeGreaterThan(0);
});
