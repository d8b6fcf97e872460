import { makeOutline, type OutlineSpec } from '#src/base/outline.ts';
import type { Delivery, SlurrySupply } from '../pass.ts';
import type { Conditions } from '../records.ts';
import { type Bore, cellsFor } from '../slurry/grid.ts';
import type { Carrier } from '../slurry/viscosity.ts';
import { type SlurryConstants, slurryConstants } from './constants.ts';
import { type FaceShape, type FilmSpan, faceShape } from './face.ts';

/** What the balance of the slurry under the face needs beside the conditions. */
export interface SlurryFace {
  readonly shape: FaceShape;
  readonly carrier: Carrier;
  readonly constants: SlurryConstants;
  /** A charge that goes round and wears; the slurry is always fresh where it is absent. */
  readonly charge?: { readonly volume: number; readonly used: number };
}

/** How a slurry face is made; what is left out is chosen. */
export interface SlurryFaceOptions {
  /** Cells across the longest side of the tool. */
  readonly cells?: number;
  readonly constants?: SlurryConstants;
}

/** Cells over the smallest feature, and the least and the most across the tool. */
const CELLS = { across: 6, least: 32, most: 400 };
/** Shares of the largest grain between which the tool floats at closest approach, with room for a coarser lot. */
const CLOSEST = 0.2;
const FURTHEST = 1;

/** Films a tool may ride on under these conditions (m). */
export function filmSpan({ amplitude, grit }: Conditions): FilmSpan {
  return { thinnest: amplitude + CLOSEST * grit.largest, thickest: amplitude + FURTHEST * grit.largest };
}

/** Signed gauge pressure of a delivery (Pa); undefined where the slurry is left to the pumping of the tool. */
function supplyPressure(delivery: Delivery): number | undefined {
  if (delivery.kind === 'flooded') return undefined;
  if (!(delivery.pressure > 0 && delivery.pressure < Number.POSITIVE_INFINITY))
    throw new RangeError(`the pressure that moves the slurry must be above zero, got ${delivery.pressure} Pa`);
  return delivery.kind === 'suction' ? -delivery.pressure : delivery.pressure;
}

/** @throws RangeError when grains or slurry find no way through the tool */
function checkPath(conditions: Conditions, spec: OutlineSpec, bores: readonly Bore[], delivery: Delivery): void {
  const { largest } = conditions.grit;
  for (const [b, { radius }] of bores.entries()) {
    if (2 * radius <= largest)
      throw new RangeError(`bore ${b + 1}, ${2 * radius} m wide, does not pass the largest grain of ${largest} m`);
  }
  if (delivery.kind === 'flooded' || bores.length > 0) return;
  const hollow = makeOutline(spec).loops.some(({ hole }) => hole);
  if (hollow) return;
  const verb = delivery.kind === 'suction' ? 'drawn' : 'pumped';
  throw new RangeError(`slurry cannot be ${verb} through a tool without a bore`);
}

/**
 * The slurry under the face of a tool: solves the shape of exchange on its outline, with bores and delivery. It depends on
 * outline, bores, supply, amplitude and grit; material and grit properties may vary afterwards, as in a band.
 * @param bores open to the bath where the slurry is flooded; otherwise the way the slurry is pumped or drawn
 * @throws RangeError when slurry is to be pumped or drawn and finds no way (no bore and no hollow, a bore narrower than the
 * largest grain, no pressure), when a bore leaves the outline or meets another, and when a feature is too fine for the grid
 */
export function makeSlurryFace(
  conditions: Conditions,
  outline: OutlineSpec,
  bores: readonly Bore[],
  supply: SlurrySupply,
  options: SlurryFaceOptions = {},
): SlurryFace {
  const { constants = slurryConstants } = options;
  const pressure = supplyPressure(supply.delivery);
  checkPath(conditions, outline, bores, supply.delivery);
  const tool = makeOutline(outline);
  const cells = options.cells ?? cellsFor(tool, bores, CELLS);
  const shape = faceShape(tool, bores, filmSpan(conditions), constants, {
    cells,
    ...(pressure !== undefined && { supply: { pressure } }),
  });
  return { shape, carrier: supply.carrier, constants, ...(supply.charge && { charge: supply.charge }) };
}
