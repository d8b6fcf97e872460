import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { publishedConstants } from '#src/physics/constants.ts';
import {
  chipDepth,
  chipRadius,
  chipVolume,
  craterLaw,
  meanChip,
  radialCrack,
  thresholdQuantiles,
} from '#src/physics/crater.ts';
import { freeImpact, peakSpeed } from '#src/physics/free-impact.ts';
import { gapConcentration, gritsPerArea } from '#src/physics/population.ts';
import { blunting, hitYield, liftOff } from '#src/physics/yields.ts';
import { base, carbide, glass } from './samples.ts';

const law = craterLaw(glass, publishedConstants);
const loads = fc.double({ min: 1e-4, max: 100, noNaN: true });

describe('a lateral chip', () => {
  it('does not form at or below its threshold', () => {
    fc.assert(
      fc.property(loads, fc.double({ min: 1, max: 100, noNaN: true }), (load, times) => {
        expect(chipRadius(law, load, load * times)).toBe(0);
        expect(chipVolume(law, load, load * times)).toBe(0);
      }),
      { seed: 31 },
    );
  });

  it('grows with the load and shrinks with the threshold', () => {
    fc.assert(
      fc.property(loads, fc.double({ min: 0.01, max: 0.9, noNaN: true }), (load, share) => {
        expect(chipVolume(law, 1.1 * load, share * load)).toBeGreaterThan(chipVolume(law, load, share * load));
        expect(chipRadius(law, load, share * load)).toBeGreaterThan(chipRadius(law, load, 1.05 * share * load));
      }),
      { seed: 32 },
    );
  });

  it('is the half-ellipsoid of the published radius and depth, P^1.75 far above the threshold', () => {
    expect(chipRadius(law, 10, 0) * 1e6).toBeCloseTo(118.7, 0);
    expect(Math.log2(chipVolume(law, 2, 0) / chipVolume(law, 1, 0))).toBeCloseTo(1.75, 10);
    expect(chipDepth(law, 4) / chipDepth(law, 1)).toBeCloseTo(2, 12);
  });

  it('keeps its shape when all lengths grow, save for the eighth root of the load: c/b as P^(1/8)', () => {
    const shape = (load: number) => chipRadius(law, load, 0) / chipDepth(law, load);
    expect(Math.log2(shape(2) / shape(1))).toBeCloseTo(1 / 8, 10);
  });

  it('stays above the grits of a tungsten carbide: its threshold is far above their loads', () => {
    expect(craterLaw(carbide, publishedConstants).thresholdMedian).toBeGreaterThan(10);
  });
});

describe('the mean over the threshold scatter', () => {
  it('is the average over 40 000 equally likely thresholds', () => {
    const thresholds = thresholdQuantiles(law, 40000);
    for (const load of [0.05, 0.1, 0.3, 1, 5]) {
      const chip = meanChip(law, load);
      let [count, volume, radius] = [0, 0, 0];
      for (const threshold of thresholds) {
        if (threshold >= load) break;
        count++;
        volume += chipVolume(law, load, threshold);
        radius += chipRadius(law, load, threshold);
      }
      // one of 40 000 at the end of the sum, and its share of the rare chips near the threshold
      const share = 1e-4 + 1 / (40000 * chip.probability);
      expect(Math.abs(count / 40000 / chip.probability - 1)).toBeLessThan(share);
      expect(Math.abs(volume / 40000 / chip.volume - 1)).toBeLessThan(share);
      expect(Math.abs(radius / 40000 / chip.radius - 1)).toBeLessThan(share);
      expect(chip.depth).toBe(chip.probability * chipDepth(law, load));
    }
  });

  it('becomes the sharp threshold as the scatter goes to zero', () => {
    const sharp = { ...law, thresholdScatter: 0 };
    const narrow = { ...law, thresholdScatter: 1e-3 };
    for (const load of [0.5 * law.thresholdMedian, 2 * law.thresholdMedian, 1]) {
      // the mean of a smooth function over a scatter s differs by s^2
      expect(Math.abs(meanChip(narrow, load).volume - meanChip(sharp, load).volume)).toBeLessThan(
        1e-5 * chipVolume(law, load, 0),
      );
      expect(meanChip(sharp, load).volume).toBe(chipVolume(law, load, law.thresholdMedian));
    }
  });

  it('has its median where half of the hits chip', () => {
    expect(meanChip(law, law.thresholdMedian).probability).toBeCloseTo(0.5, 12);
    const quantiles = thresholdQuantiles(law, 1001);
    expect((quantiles[500] as number) / law.thresholdMedian).toBeCloseTo(1, 12);
  });

  it('never takes more than the chip without a threshold', () => {
    fc.assert(
      fc.property(loads, (load) => {
        const { probability, volume, radius } = meanChip(law, load);
        expect(volume).toBeLessThanOrEqual(probability * chipVolume(law, load, 0) * (1 + 1e-9) + 1e-40);
        expect(radius).toBeLessThanOrEqual(probability * chipRadius(law, load, 0) * (1 + 1e-4) + 1e-20);
      }),
      { seed: 33 },
    );
  });
});

describe('the radial crack', () => {
  it('goes as P^(2/3) and reaches 18.0 um at 1 N in glass (Anstis and co-workers 1981)', () => {
    expect(radialCrack(law, 1) * 1e6).toBeCloseTo(17.96, 1);
    expect(radialCrack(law, 8) / radialCrack(law, 1)).toBeCloseTo(4, 10);
  });
});

describe('thrown grits', () => {
  it('carry 1.3e-10 J at 29 um and 2.5 m/s, silicon carbide', () => {
    const conditions = { ...base, amplitude: 20e-6, abrasive: { ...base.abrasive, density: 3200 } };
    expect(peakSpeed(conditions)).toBeCloseTo(2.513, 3);
    expect(freeImpact(conditions, 29e-6).energy).toBeCloseTo((Math.PI / 12) * 3200 * 29e-6 ** 3 * 2.513 ** 2, 13);
    expect(freeImpact(conditions, 29e-6).energy / 1.3e-10).toBeCloseTo(1, 1);
  });

  it('press so that load times depth over three is their energy, P = k H h^2', () => {
    const { energy, load, dent } = freeImpact(base, 40e-6);
    const depth = Math.sqrt(load / (24.5 * glass.hardness));
    expect((load * depth) / 3 / energy).toBeCloseTo(1, 10);
    expect(dent * glass.hardness).toBeCloseTo(energy, 20);
  });

  it('erode as the speed to the 7/3 far above the threshold (Buijs and Pasmans 1995)', () => {
    const volume = (amplitude: number) => {
      const { load } = freeImpact({ ...base, amplitude }, 40e-6);
      return chipVolume(law, load, 0);
    };
    expect(Math.log2(volume(40e-6) / volume(20e-6))).toBeCloseTo(7 / 3, 10);
  });
});

describe('yields', () => {
  it('lie between zero and one, and none is left without amplitude', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 1e-7, max: 1e-3, noNaN: true }),
        fc.double({ min: 1e-7, max: 1e-4, noNaN: true }),
        (d, amplitude) => {
          const share = hitYield({ ...base, amplitude }, d);
          expect(share > 0 && share <= 1).toBe(true);
          expect(liftOff(2 * d, amplitude, publishedConstants)).toBeLessThanOrEqual(
            liftOff(d, amplitude, publishedConstants),
          );
        },
      ),
      { seed: 34 },
    );
    expect(hitYield({ ...base, amplitude: 0 }, 30e-6)).toBe(0);
  });

  it('are one half for a grit 2A/0.6 long and for work as hard as the grit', () => {
    expect(liftOff((2 * 19e-6) / 0.6, 19e-6, publishedConstants)).toBeCloseTo(0.5, 12);
    expect(blunting(28e9, 28e9, publishedConstants)).toBe(0.5);
  });
});

describe('the population of the gap', () => {
  it('never holds more than packs when the gap closes, nor more than the slurry', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 1e-7, max: 1e-3, noNaN: true }),
        fc.double({ min: 0, max: 0.74, noNaN: true }),
        (gap, concentration) => {
          const share = gapConcentration({ ...base, concentration }, gap);
          expect(share).toBeLessThanOrEqual(concentration);
          expect(share).toBeLessThanOrEqual((publishedConstants.packing * gap) / (gap + base.amplitude) + 1e-15);
        },
      ),
      { seed: 35 },
    );
  });

  it('is 0.17 of the volume at a 40 um gap for a slurry of 0.3', () => {
    // 0.3 / (1 + 0.3 * 59 / (0.6 * 40))
    expect(gapConcentration(base, 40e-6)).toBeCloseTo(0.3 / (1 + 17.7 / 24), 12);
  });

  it('counts spheres of the mean volume in the mean film', () => {
    const d30 = base.grit.meanVolumeDiameter;
    const volume = gritsPerArea(base, 40e-6) * (Math.PI / 6) * d30 ** 3;
    expect(volume / (59e-6 * gapConcentration(base, 40e-6))).toBeCloseTo(1, 12);
    expect(gritsPerArea(base, 0)).toBe(0);
  });
});
