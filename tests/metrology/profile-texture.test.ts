import { describe, expect, it } from 'vitest';
import type { Profile } from '#src/base/field.ts';
import { gaussianTransmission } from '#src/metrology/gaussian.ts';
import { profileTexture } from '#src/metrology/profile-texture.ts';
import { lengthsFor, SETTINGS, settingForRa, settingOf } from '#src/metrology/settings.ts';
import { normalSource } from './random.ts';

const UM = 1e-6;
const MM = 1e-3;

/** A sine of mean height Ra about its own middle. */
function sine(ra: number, wavelength: number, length: number, spacing: number): Profile {
  const amplitude = (ra * Math.PI) / 2;
  const z = new Float64Array(Math.round(length / spacing));
  for (let i = 0; i < z.length; i++) z[i] = amplitude * Math.sin((2 * Math.PI * (i + 0.5) * spacing) / wavelength);
  return { spacing, z };
}

function noise(seed: number, scale: number, n: number, spacing: number): Profile {
  const normal = normalSource(seed);
  return { spacing, z: new Float64Array(n).map(() => scale * normal()) };
}

describe('the settings of ISO 21920-3', () => {
  it('choose the class whose Ra limit is not exceeded', () => {
    const classes = [0, 0.02, 0.0201, 0.1, 0.11, 2, 2.1, 10, 11, 500].map((ra) => settingForRa(ra * UM).class);
    expect(classes).toEqual(['Sc1', 'Sc1', 'Sc2', 'Sc2', 'Sc3', 'Sc3', 'Sc4', 'Sc4', 'Sc5', 'Sc5']);
    expect(() => settingForRa(Number.NaN)).toThrow(RangeError);
  });

  it('have five sections of the L-filter index and the tabulated lengths', () => {
    expect(SETTINGS.map((setting) => Number((setting.evaluationLength / MM).toFixed(6)))).toEqual([
      0.4, 1.25, 4, 12.5, 40,
    ]);
    for (const setting of SETTINGS) expect(setting.sectionLength).toBe(setting.lFilter);
  });

  it('cut as many sections as fit and say so', () => {
    const setting = settingOf('Sc3');
    expect(lengthsFor(setting, 4.8 * MM)).toMatchObject({ sections: 5, departures: [] });
    expect(lengthsFor(setting, 4 * MM)).toMatchObject({ sections: 5, departures: [] });
    const two = lengthsFor(setting, 1.7 * MM);
    expect(two.sections).toBe(2);
    expect(two.departures.map((departure) => departure.stated)).toEqual([
      '2 sections of 0.8 mm instead of 5: the profile is 1.7 mm long',
    ]);
    const short = lengthsFor(setting, 0.5 * MM);
    expect(short).toMatchObject({ sections: 1, evaluationLength: 0.5 * MM });
    expect(short.departures[0].kind).toBe('short');
  });
});

describe('sinusoidal specimens (nominal Ra and spacing of SRM 2071 to 2075, from memory)', () => {
  it.each([
    [0.3, 100, 'Sc3'],
    [1, 100, 'Sc3'],
    [3, 100, 'Sc4'],
    [1, 40, 'Sc3'],
    [1, 800, 'Sc3'],
  ])('of Ra %f um and spacing %f um give the nominal Ra times the band-pass factor', (ra, wavelength, name) => {
    const spacing = 0.5 * UM;
    const { evaluationLength, lFilter, sFilter } = settingOf(name as 'Sc3');
    // one cutoff and a quarter of run-up at either end keeps the ends out
    const texture = profileTexture(sine(ra * UM, wavelength * UM, evaluationLength + 2.5 * lFilter, spacing));
    const factor =
      gaussianTransmission(wavelength * UM, sFilter) * (1 - gaussianTransmission(wavelength * UM, lFilter));
    expect(texture.settings.class).toBe(name);
    expect(texture.departures).toEqual([]);
    // rectangle rule over the kinks of |z|: (2 pi dx/wavelength)^2/12 = 5e-4 at 80 points per wave; the line taken off a
    // sine of few waves turns by 1e-3
    expect(Math.abs(texture.parameters.ra / (ra * UM * factor) - 1)).toBeLessThan(1e-3);
    expect(Math.abs(texture.parameters.rq / texture.parameters.ra - Math.PI / Math.sqrt(8))).toBeLessThan(1e-3);
    expect(Math.abs(texture.parameters.rsm / (wavelength * UM) - 1)).toBeLessThan(1e-3);
    expect(Math.abs(texture.parameters.rsk)).toBeLessThan(1e-3);
  });
});

describe('the texture of a profile', () => {
  const profile = noise(8, 0.5 * UM, 9600, 0.5 * UM);
  const texture = profileTexture(profile);

  it('meets the standard without departures on 4.8 mm at half a micrometre', () => {
    expect(texture.settings).toMatchObject({ class: 'Sc3', sections: 5, sFilter: 2.5 * UM, lFilter: 0.8 * MM });
    expect(texture.roughness.z.length).toBe(8000);
    expect(texture.settings.start).toBeCloseTo(0.4 * MM, 12);
    expect(texture.departures).toEqual([]);
  });

  it('has the parameters of Gaussian heights within their scatter', () => {
    const { ra, rq, rsk, rku, rk, rmr } = texture.parameters;
    // 8000 points blurred over five are some 2000 free heights: scatter of Rku sqrt(24/2000) = 0.11, of Rk/Rq a few per cent
    expect(Math.abs(ra / rq - Math.sqrt(2 / Math.PI))).toBeLessThan(0.01);
    expect(Math.abs(rsk)).toBeLessThan(0.2);
    expect(Math.abs(rku - 3)).toBeLessThan(0.35);
    expect(Math.abs(rk / rq - 2.574)).toBeLessThan(0.15);
    expect(rmr).toBeGreaterThan(0.05);
  });

  it('does not change when the profile is shifted and tilted', () => {
    const moved = profile.z.map((height, i) => height - 3 * MM + 1e-3 * i * profile.spacing);
    const { heights: _a, ...before } = texture.parameters;
    const { heights: _b, ...after } = profileTexture({ spacing: profile.spacing, z: moved }).parameters;
    // 3 mm carries rounding of 4e-19 m, a micrometre's 4e-13
    for (const [name, value] of Object.entries(before)) {
      const found = after[name as keyof typeof after];
      expect(Math.abs(found - value), name).toBeLessThan(1e-6 * Math.abs(value) + 1e-9 * UM);
    }
  });

  it('scales with the profile within a class and mirrors Rsk, Rp and Rv', () => {
    const options = { setting: 'Sc3' } as const;
    const one = profileTexture(profile, options).parameters;
    const z = profile.z.map((height) => -2 * height);
    const two = profileTexture({ spacing: profile.spacing, z }, options).parameters;
    for (const name of ['ra', 'rq', 'rz', 'rt', 'rzx', 'rdq', 'rk'] as const)
      expect(Math.abs(two[name] / one[name] - 2), name).toBeLessThan(1e-9);
    expect(two.rsk).toBeCloseTo(-one.rsk, 9);
    expect(two.rku).toBeCloseTo(one.rku, 9);
    expect(two.rp / one.rv).toBeCloseTo(2, 9);
    expect(two.rpk / one.rvk).toBeCloseTo(2, 6);
    // the mirror image crosses the mean line at the same places
    expect(two.rsm / one.rsm).toBeCloseTo(1, 9);
  });

  it('keeps Rt >= Rzx >= Rz and Ra <= Rq', () => {
    for (const seed of [9, 10, 11]) {
      const { ra, rq, rt, rzx, rz } = profileTexture(noise(seed, seed * UM, 2000, 1 * UM)).parameters;
      expect(ra).toBeLessThanOrEqual(rq);
      expect(rt).toBeGreaterThanOrEqual(rzx);
      expect(rzx).toBeGreaterThanOrEqual(rz);
    }
  });

  it('lists every departure: sections, spacing, S-filter, class, core', () => {
    const kinds = (found: ReturnType<typeof profileTexture>) => found.departures.map((departure) => departure.kind);
    expect(kinds(profileTexture(noise(12, 0.5 * UM, 1700, UM)))).toEqual(['sections', 'spacing']);
    const coarse = profileTexture(noise(12, 0.5 * UM, 300, 2 * UM));
    expect(kinds(coarse)).toEqual(['short', 'spacing', 'sFilter']);
    expect(coarse.settings.sFilter).toBeUndefined();
    expect(kinds(profileTexture(profile, { setting: 'Sc2' }))).toEqual(['class']);
    expect(kinds(profileTexture(profile, { core: 'gaussian' }))).toEqual(['core']);
  });

  it('keeps the coarser of two classes that hand over to each other', () => {
    // Ra 3 um at a wavelength of 5 um: 3 x 2^-0.25 = 2.52 um in Sc3 asks for Sc4, whose S-filter leaves 3 x 2^-2.56 = 0.51
    const found = profileTexture(sine(3 * UM, 5 * UM, 12.5 * MM, 0.5 * UM));
    expect(found.settings.class).toBe('Sc4');
    expect(found.departures.map((departure) => departure.kind)).toEqual(['class']);
  });

  it('of a constant or a straight profile is zero, with NaN where there is nothing to divide by', () => {
    for (const slope of [0, 1e-3]) {
      const z = new Float64Array(5000).map((_, i) => -3 * MM + slope * i * UM);
      const { parameters, settings } = profileTexture({ spacing: UM, z });
      expect([parameters.ra, parameters.rz, parameters.rt, parameters.rk, parameters.rdq]).toEqual([0, 0, 0, 0, 0]);
      expect([parameters.rsk, parameters.rku, parameters.rsm].every(Number.isNaN)).toBe(true);
      expect(settings.class).toBe('Sc1');
    }
  });

  it('refuses a profile of fewer than 16 points or with a hole', () => {
    expect(() => profileTexture({ spacing: UM, z: new Float64Array(15) })).toThrow(/16 points/);
    expect(() => profileTexture({ spacing: UM, z: new Float64Array(50).with(7, Number.NaN) })).toThrow(/point 7/);
  });
});
