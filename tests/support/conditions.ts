import { publishedConstants } from '#src/physics/constants.ts';
import { gritLaw } from '#src/physics/grit-law.ts';
import type { Abrasive, Conditions, GritLaw, ToolMaterial, WorkMaterial } from '#src/physics/records.ts';
import type { CutSpec } from '#src/voxel/model.ts';

/** Nominal properties as in resources/materials.json, written out so that these tests stand alone. SI. */
export const works = {
  sodaLime: {
    youngsModulus: 70e9,
    poisson: 0.22,
    hardness: 5.5e9,
    toughness: 0.75e6,
    smallCrackToughness: 0.75e6,
    density: 2500,
  },
  borosilicate: {
    youngsModulus: 64e9,
    poisson: 0.2,
    hardness: 5.9e9,
    toughness: 0.77e6,
    smallCrackToughness: 0.77e6,
    density: 2230,
  },
  quartz: {
    youngsModulus: 87e9,
    poisson: 0.17,
    hardness: 12e9,
    toughness: 1e6,
    smallCrackToughness: 1e6,
    density: 2650,
  },
  /** 99.5 % alumina; small-crack toughness sqrt(8 J/m2 E). */
  alumina: {
    youngsModulus: 385e9,
    poisson: 0.23,
    hardness: 15e9,
    toughness: 3.7e6,
    smallCrackToughness: Math.sqrt(8 * 385e9),
    density: 3900,
  },
} satisfies Record<string, WorkMaterial>;

export const steel: ToolMaterial = {
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

/** FEPA F grades, photosedimentometer: d50, widest conforming spread, 1.3 d3 (from memory). */
export const grades = {
  F220: gritLaw({ massMedian: 60.5e-6, spread: 0.181, largest: 106e-6 }),
  F320: gritLaw({ massMedian: 29.2e-6, spread: 0.275, largest: 1.3 * 49e-6 }),
  F600: gritLaw({ massMedian: 9.3e-6, spread: 0.38, largest: 1.3 * 19e-6 }),
  F1200: gritLaw({ massMedian: 3e-6, spread: 0.451, largest: 1.3 * 7e-6 }),
} satisfies Record<string, GritLaw>;

/** Boron carbide F320 at 30 vol%, steel tool, 20 um at 20 kHz, unless said. */
export function conditionsOf(changes: Partial<Conditions> = {}): Conditions {
  return {
    work: works.borosilicate,
    tool: steel,
    abrasive: boronCarbide,
    grit: grades.F320,
    amplitude: 20e-6,
    frequency: 20e3,
    concentration: 0.3,
    constants: publishedConstants,
    ...changes,
  };
}

/** A round cavity under 0.15 MPa, 0.05 mm deep, 1 mm tool, standard pitch, no trace strip, unless said. */
export function cutSpecOf(changes: Partial<CutSpec> & { diameter?: number; pressure?: number } = {}): CutSpec {
  const { diameter = 1e-3, pressure = 0.15e6, ...rest } = changes;
  return {
    conditions: conditionsOf(),
    tool: { kind: 'circle', diameter },
    edgeRadius: 30e-6,
    drive: { kind: 'load', load: (pressure * Math.PI * diameter * diameter) / 4 },
    depth: 50e-6,
    runout: 2e-6,
    seed: 1,
    pass: 0,
    replicate: 0,
    columnsPerRadius: 2,
    columnBudget: 2e6,
    withoutStrip: true,
    ...rest,
  };
}
