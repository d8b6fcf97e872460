/** Classes with a rule of their own for the toughness a grain's crack meets. */
export type ToughnessClass = 'glass' | 'crystal' | 'ceramic' | 'toughened-ceramic' | 'glass-ceramic' | 'cermet';

/** Fracture energy of an unbridged grain boundary (J/m2): the mean of what glasses and crystals show (3 to 11). Assumed. */
export const BOUNDARY_ENERGY = 8;

/**
 * Toughness at the size of a grain's crack, 5 to 20 um (Pa m^0.5). Glass and crystal: K_Ic. Sintered ceramic: the crack
 * runs along unbridged boundaries, K = min(K_Ic, sqrt(G E)). Cermets, transformation-toughened ceramics and
 * glass-ceramics toughen at that scale too and the crack is part-way up its R-curve: the geometric mean of both where the
 * boundary is the weaker. Assumed, by the R-curve argument; a measured value overrides it.
 * @param toughness long-crack toughness (Pa m^0.5)
 * @param youngsModulus Pa
 */
export function smallCrackToughness(kind: ToughnessClass, toughness: number, youngsModulus: number): number {
  if (kind === 'glass' || kind === 'crystal') return toughness;
  const boundary = Math.sqrt(BOUNDARY_ENERGY * youngsModulus);
  if (boundary >= toughness) return toughness;
  return kind === 'ceramic' ? boundary : Math.sqrt(boundary * toughness);
}
