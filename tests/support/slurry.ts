import { makeOutline, type OutlineSpec } from '#src/base/outline.ts';
import type { SlurryFace } from '#src/physics/estimate.ts';
import { slurryConstants } from '#src/physics/process/constants.ts';
import { faceShape } from '#src/physics/process/face.ts';
import type { Conditions } from '#src/physics/records.ts';
import { CARRIERS } from '#src/physics/slurry/viscosity.ts';

/** Water slurry under a tool face, open to the side gap all round. */
export function waterFace(conditions: Conditions, tool: OutlineSpec, cells = 48): SlurryFace {
  const films = {
    thinnest: conditions.amplitude + 0.2 * conditions.grit.largest,
    thickest: conditions.amplitude + conditions.grit.largest,
  };
  const shape = faceShape(makeOutline(tool), [], films, slurryConstants, cells);
  return { shape, carrier: CARRIERS.water, constants: slurryConstants };
}
