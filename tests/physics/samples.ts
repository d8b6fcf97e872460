import { publishedConstants } from '#src/physics/constants.ts';
import { gritLaw } from '#src/physics/grit-law.ts';
import type { Abrasive, Conditions, ToolMaterial, WorkMaterial } from '#src/physics/records.ts';
import { smallCrackToughness, type ToughnessClass } from '#src/physics/toughness.ts';

/** GPa, GPa, MPa m^0.5 into a record; the small-crack toughness by its class. */
function work(kind: ToughnessClass, modulus: number, hardness: number, toughness: number): WorkMaterial {
  return {
    youngsModulus: modulus * 1e9,
    poisson: 0.22,
    hardness: hardness * 1e9,
    toughness: toughness * 1e6,
    smallCrackToughness: smallCrackToughness(kind, toughness * 1e6, modulus * 1e9),
    density: 2500,
  };
}

export const glass = work('glass', 70, 5.5, 0.75);
export const quartz = work('crystal', 87, 12, 1);
export const alumina995 = work('ceramic', 385, 15, 3.7);
export const carbide = work('cermet', 620, 15.5, 10.5);

export const lowCarbonSteel: ToolMaterial = {
  youngsModulus: 205e9,
  poisson: 0.29,
  hardness: 1.3e9,
  density: 7870,
  fatigueStrength: 200e6,
  metal: true,
};

export const boronCarbide: Abrasive = {
  density: 2510,
  hardness: 28e9,
  crushStrength: 700e6,
  crushSizeExponent: 0.55,
  crushWeibull: 4,
};

/** F320 by photosedimentometer: d50 29.2 um, widest conforming spread, largest grain 1.3 d3. */
export const f320 = gritLaw({ massMedian: 29.2e-6, spread: 0.2752, largest: 1.3 * 49e-6 });

/** F320 boron carbide, 30 vol%, low-carbon steel on soda-lime glass, 19 um zero-to-peak at 20 kHz. */
export const base: Conditions = {
  work: glass,
  tool: lowCarbonSteel,
  abrasive: boronCarbide,
  grit: f320,
  amplitude: 19e-6,
  frequency: 20e3,
  concentration: 0.3,
  constants: publishedConstants,
};

/** Face of a round tool of 12.7 mm (m2) and its rim (m). */
export const faceArea = (Math.PI / 4) * 12.7e-3 * 12.7e-3;
export const perimeter = Math.PI * 12.7e-3;
