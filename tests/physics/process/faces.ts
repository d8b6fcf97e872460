import type { OutlineSpec } from '#src/base/outline.ts';
import { type EstimateSetting, makeSlurryFace, type SlurryFace } from '#src/physics/estimate.ts';
import type { Delivery } from '#src/physics/pass.ts';
import type { Conditions } from '#src/physics/records.ts';
import { CARRIERS } from '#src/physics/slurry/viscosity.ts';
import { conditionsOf, works } from '../../support/conditions.ts';

/** Soda-lime glass, F320 boron carbide 30 vol% in water, 19 um zero-to-peak at 20 kHz. */
export const glass = conditionsOf({ work: works.sodaLime, amplitude: 19e-6 });
/** The handbook's tool, 1/2 inch, and a bore of 3 mm in its middle. */
export const TOOL: OutlineSpec = { kind: 'circle', diameter: 12.7e-3 };
export const BORE = { x: 0, y: 0, radius: 1.5e-3 };
export const FACE_AREA = (Math.PI / 4) * 12.7e-3 ** 2;

export const FLOODED: Delivery = { kind: 'flooded' };
export const pumped = (pressure: number): Delivery => ({ kind: 'throughTool', pressure });
export const drawn = (pressure: number): Delivery => ({ kind: 'suction', pressure });

/** A slurry face of that tool, with the bore unless the slurry is left to the tool's pumping. */
export function faceOf(delivery: Delivery, conditions: Conditions = glass, cells = 40): SlurryFace {
  const bores = delivery.kind === 'flooded' ? [] : [BORE];
  return makeSlurryFace(conditions, TOOL, bores, { carrier: CARRIERS.water, delivery }, { cells });
}

export const flooded = faceOf(FLOODED);

/** A cut under 0.1 MPa to 12.7 mm with the 1/2 inch tool, unless said. */
export function settingWith(over: Partial<EstimateSetting> = {}): EstimateSetting {
  return {
    conditions: glass,
    pressure: 0.1e6,
    faceArea: FACE_AREA,
    outlineArea: FACE_AREA,
    perimeter: Math.PI * 12.7e-3,
    depth: 12.7e-3,
    runout: 2e-6,
    edgeRadius: 30e-6,
    slurry: flooded,
    ...over,
  };
}
