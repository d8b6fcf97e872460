import { makeOutline, type NearestPoint, nearest, type Outline, pointAt } from '#src/base/outline.ts';
import { type Rise, riseOf } from '#src/physics/tool-face.ts';
import type { CutSpec } from './spec.ts';

/** Where a place lies under the tool's face. */
export interface FacePlace {
  /** Distance of the face behind the tip, over this place (m). */
  rise: number;
  /** Distance outside the outline whose curved edge this place belongs to (m); negative inside. */
  outside: number;
}

/** The form of a tool's face, as the floor's columns see it. */
export interface FaceMap {
  /** Flat, and all of it the tip. */
  readonly flat: boolean;
  /** The pilot of a stepped face, which has an edge and a wall of its own. */
  readonly pilot: { readonly outline: Outline; readonly step: number } | null;
  /** What a place at (x, y) has over it, its nearest point of the outline known. */
  at(x: number, y: number, near: NearestPoint): FacePlace;
  /** Rise of the face at running arc length s of the tool's outline (m). */
  alongEdge(s: number): number;
}

/**
 * The map of a spec's face. Outside the outline the rise of the outline's nearest point holds, since what works there is
 * the edge. A stepped face gives the columns within reach of the pilot's edge to the pilot: the shoulder never strikes
 * them, and by the time it comes the pilot's wall has taken most of them.
 * @throws RangeError when a face has no size, or the shoulder is narrower than half the largest grain
 */
export function faceMap(spec: CutSpec, outline: Outline): FaceMap {
  const face = spec.face ?? { kind: 'flat' };
  if (face.kind === 'flat') {
    return { flat: true, pilot: null, at: (_x, _y, near) => ({ rise: 0, outside: near.distance }), alongEdge: () => 0 };
  }
  if (face.kind === 'stepped') return steppedMap(makeOutline(face.pilot), face.step, spec.conditions.grit.largest / 2);
  const rise = riseOf(face);
  const edge = edgeRise(rise, outline);
  return {
    flat: false,
    pilot: null,
    at: (x, y, near) => ({
      rise: near.distance > 0 ? edge(near.s) : rise(x, y),
      outside: near.distance,
    }),
    alongEdge: edge,
  };
}

function edgeRise(rise: Rise, outline: Outline): (s: number) => number {
  return (s) => {
    const p = pointAt(outline, s);
    return rise(p.x, p.y);
  };
}

function steppedMap(pilot: Outline, step: number, band: number): FaceMap {
  if (!(step > 0)) throw new RangeError(`a stepped face needs a step above zero: ${step}`);
  return {
    flat: false,
    pilot: { outline: pilot, step },
    at: (x, y, near) => {
      const { distance } = nearest(pilot, x, y);
      if (distance > band) return { rise: step, outside: near.distance };
      return { rise: 0, outside: Math.max(distance, near.distance) };
    },
    alongEdge: () => step,
  };
}
