import type { HeightField } from '#src/base/field.ts';
import { sinCos } from '#src/base/math.ts';
import { makeOutline, nearest, type OutlineSpec } from '#src/base/outline.ts';

/**
 * The form of a tool's face: how far each point of it stands back from the tip, along the tool's axis. All metres and
 * radians, in the frame of the tool's outline.
 */
export type ToolFace =
  | { readonly kind: 'flat' }
  /** A narrower pilot that runs ahead of the shoulder by `step`. */
  | { readonly kind: 'stepped'; readonly pilot: OutlineSpec; readonly step: number }
  /** A cone about the origin; `angle` is the whole angle at its tip. */
  | { readonly kind: 'cone'; readonly angle: number }
  /** A ball about the origin. */
  | { readonly kind: 'sphere'; readonly radius: number }
  /** A relief: the highest of its heights is the tip. Beyond its grid the edge's height holds. */
  | { readonly kind: 'relief'; readonly heights: HeightField };

/** Distance of the face behind its tip at (x, y) (m), zero or more. */
export type Rise = (x: number, y: number) => number;

const FLAT: Rise = () => 0;

/**
 * The rise of a face, made once and asked often.
 * @throws RangeError when the face has no size: an angle outside (0, pi), a radius or step of zero or less, no heights
 */
export function riseOf(face: ToolFace): Rise {
  switch (face.kind) {
    case 'flat':
      return FLAT;
    case 'stepped':
      return steppedRise(face.pilot, face.step);
    case 'cone':
      return coneRise(face.angle);
    case 'sphere':
      return sphereRise(face.radius);
    case 'relief':
      return reliefRise(face.heights);
  }
}

function steppedRise(pilot: OutlineSpec, step: number): Rise {
  if (!(step > 0)) throw new RangeError(`a stepped face needs a step above zero: ${step}`);
  const outline = makeOutline(pilot);
  return (x, y) => (nearest(outline, x, y).distance <= 0 ? 0 : step);
}

function coneRise(angle: number): Rise {
  if (!(angle > 0 && angle < Math.PI)) throw new RangeError(`the angle of a cone lies between 0 and pi: ${angle}`);
  const { sin, cos } = sinCos(angle / 2);
  return (x, y) => (Math.sqrt(x * x + y * y) * cos) / sin;
}

function sphereRise(radius: number): Rise {
  if (!(radius > 0)) throw new RangeError(`the radius of a ball is above zero: ${radius}`);
  // past its equator a ball has no face: the side goes straight up
  return (x, y) => radius - Math.sqrt(Math.max(0, radius * radius - x * x - y * y));
}

function reliefRise({ nx, ny, dx, dy, x0, y0, z }: HeightField): Rise {
  if (!(nx > 1 && ny > 1)) throw new RangeError(`a relief needs two heights each way: ${nx} x ${ny}`);
  let tip = Number.NEGATIVE_INFINITY;
  for (const height of z) if (height > tip) tip = height;
  if (!Number.isFinite(tip)) throw new RangeError('a relief needs finite heights');
  return (x, y) => {
    const u = Math.max(0, Math.min(nx - 1, (x - x0) / dx));
    const v = Math.max(0, Math.min(ny - 1, (y - y0) / dy));
    const i = Math.min(nx - 2, Math.floor(u));
    const j = Math.min(ny - 2, Math.floor(v));
    const at = (a: number, b: number) => z[(j + b) * nx + i + a] as number;
    const low = at(0, 0) + (u - i) * (at(1, 0) - at(0, 0));
    const high = at(0, 1) + (u - i) * (at(1, 1) - at(0, 1));
    return tip - (low + (v - j) * (high - low));
  };
}
