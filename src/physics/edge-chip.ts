import { PI, pow } from '#src/base/math.ts';
import type { ProcessConstants } from './constants.ts';

/** Size of one chip at the rim (m). */
export interface EdgeChip {
  /** Down the wall, from the entry face to where the load was. */
  readonly depth: number;
  /** On the entry face, away from the wall. */
  readonly width: number;
  /** Along the rim. */
  readonly breadth: number;
}

/**
 * Load that chips a free edge from distance h, P_F = beta K_Ic h^(3/2) (N). Chai and Lawn, Acta Mater. 55 (2007) 2555;
 * beta = 9.3 from memory.
 * @param toughness long-crack toughness (Pa m^0.5)
 */
export function edgeChipLoad(toughness: number, distance: number, constants: ProcessConstants): number {
  return distance > 0 ? constants.edgeChip * toughness * distance * Math.sqrt(distance) : 0;
}

/** Largest distance from the edge at which a load still chips it (m): the inverse of `edgeChipLoad`. */
export function edgeChipDistance(toughness: number, load: number, constants: ProcessConstants): number {
  return load > 0 ? pow(load / (constants.edgeChip * toughness), 2 / 3) : 0;
}

/**
 * The scallop left by a hit on the wall at distance `depth` below the entry face. The loaded face is the wall, so the
 * entry face is the side face of the edge-chipping tests and gets their height (3 depths, 2 to 4) as its width; breadth
 * along the rim 5 depths (4 to 8). Flake proportions: Almond and McCormick, Nature 321 (1986) 53, numbers from memory.
 */
export function edgeChip(depth: number, constants: ProcessConstants): EdgeChip {
  return { depth, width: constants.chipWidthRatio * depth, breadth: constants.chipBreadthRatio * depth };
}

/** Depth of a scallop at distance s along the rim from its middle (m): half an ellipse; 0 outside. */
export function scallopDepth(chip: EdgeChip, s: number): number {
  const t = (2 * s) / chip.breadth;
  return chip.breadth > 0 && t > -1 && t < 1 ? chip.depth * Math.sqrt(1 - t * t) : 0;
}

/**
 * Thickness of the last ligament under a flat tool that breaks through without backing, clamped plate under uniform
 * pressure: t = sqrt(3 F / (4 pi sigma)), whatever the diameter (m). Derived from plate theory.
 */
export function exitLigament(load: number, strength: number): number {
  return Math.sqrt((3 * load) / (4 * PI * strength));
}
