import { type HornMaterial, hornMaterials } from '#src/physics/machine/materials.ts';

/** Names of the metals horns are made of, as the job file writes them. */
export const HORN_METALS = Object.keys(hornMaterials) as [HornMetal, ...HornMetal[]];
export type HornMetal = keyof typeof hornMaterials;

/** The metal of a name. */
export function hornMetal(name: HornMetal): HornMaterial {
  return hornMaterials[name];
}
