import type { ProcessConstants } from './constants.ts';

/** The records the laws read. All SI: Pa, m, kg/m3, Pa m^0.5, Hz, s. */

export interface WorkMaterial {
  readonly youngsModulus: number;
  readonly poisson: number;
  /** Vickers hardness as tabulated (Pa). */
  readonly hardness: number;
  /** Long-crack toughness K_Ic (Pa m^0.5): edge chips. */
  readonly toughness: number;
  /** Toughness at the size of a grain's crack, K_s (Pa m^0.5): lateral chips and damage. */
  readonly smallCrackToughness: number;
  readonly density: number;
}

export interface ToolMaterial {
  readonly youngsModulus: number;
  readonly poisson: number;
  /** Vickers hardness as tabulated (Pa); the laws harden soft metals themselves. */
  readonly hardness: number;
  readonly density: number;
  /** Fully reversed smooth-bar fatigue strength (Pa). */
  readonly fatigueStrength: number;
  /** Largest working strain where practice sets one instead of the fatigue strength (titanium: 0.0025). */
  readonly strainLimit?: number;
  /** True strain at fracture in tension, ln(1 / (1 - reduction of area)); the ductility of the fitted mild steel if absent. */
  readonly fractureStrain?: number;
  readonly metal: boolean;
}

export interface Abrasive {
  readonly density: number;
  /** Knoop hardness (Pa). */
  readonly hardness: number;
  /** Crushing strength F/d^2 of a 100 um grain (Pa). */
  readonly crushStrength: number;
  /** Exponent b of strength against size: sigma = crushStrength (100 um / d)^b. */
  readonly crushSizeExponent: number;
  readonly crushWeibull: number;
}

/** Everything a place under the tool needs to be worked out, fresh slurry everywhere. */
export interface Conditions {
  readonly work: WorkMaterial;
  readonly tool: ToolMaterial;
  readonly abrasive: Abrasive;
  readonly grit: GritLaw;
  /** Zero-to-peak at the tool face under load (m). */
  readonly amplitude: number;
  readonly frequency: number;
  /** Volume fraction of grit in the slurry. */
  readonly concentration: number;
  readonly constants: ProcessConstants;
}

/** A truncated log-normal law of grain diameters, number basis. */
export interface GritLaw {
  /** Median by mass before truncation (m). */
  readonly massMedian: number;
  /** Standard deviation of ln d. */
  readonly spread: number;
  /** Median by number before truncation (m), Hatch and Choate 1929. */
  readonly numberMedian: number;
  /** Largest grain (m). */
  readonly largest: number;
  /** Share of the untruncated law at or below `largest`. */
  readonly kept: number;
  /** Mean-volume diameter d30 of the truncated law (m). */
  readonly meanVolumeDiameter: number;
}
