import { cividis } from '../cividis.ts';
import { type Grid, PAD, storedAt } from './grid.ts';
import { type NormalScratch, newNormalScratch, surfaceNormal } from './normal.ts';
import { makeOccluders, type Occluders, openness, sunlit } from './occlusion.ts';
import type { Sight } from './ray.ts';

/** What the colour of the cut surface means. */
export type Shading =
  | { readonly kind: 'plain' }
  /** Depth below the entry face (m), `high` at the light end. */
  | { readonly kind: 'depth'; readonly high: number }
  /** Depth of the damaged work beneath the surface (m), `high` at the light end. */
  | { readonly kind: 'damage'; readonly high: number }
  /** When the surface was last hit, the share of the recorded time. */
  | { readonly kind: 'age' };

/** Everything the shade of a surface point depends on. */
export interface Shader {
  readonly grid: Grid;
  readonly occluders: Occluders;
  readonly shading: Shading;
  readonly matt: readonly [number, number, number];
  /** Unit vector to the light, voxel axes. */
  readonly light: Float64Array;
  readonly normal: Float64Array;
  readonly scratch: NormalScratch;
}

/** Towards the light: from the left, above, and the viewer's side. */
const LIGHT = [-0.52, -0.38, -0.76] as const;

/** Shares of diffuse sky light (all round, and more from above) and of the one light; chosen by eye. */
const SKY = 0.48;
const SKY_ABOVE = 0.05;
const SUN = 0.56;

export function makeShader(
  grid: Grid,
  yCut: number,
  shading: Shading,
  matt: readonly [number, number, number],
): Shader {
  const length = Math.sqrt(LIGHT[0] ** 2 + LIGHT[1] ** 2 + LIGHT[2] ** 2);
  return {
    grid,
    occluders: makeOccluders(grid, yCut),
    shading,
    matt,
    light: Float64Array.from(LIGHT, (part) => part / length),
    normal: new Float64Array(3),
    scratch: newNormalScratch(),
  };
}

/** Depth of damage beneath a surface point (m): the way inwards along the normal to the first undamaged voxel. */
function damageBeneath(shader: Shader, sight: Sight): number {
  const { grid, normal } = shader;
  const { field } = grid;
  const reach = Math.ceil(200e-6 / field.pitch) * 2;
  let deepest = 0;
  for (let n = 1; n <= reach; n++) {
    const way = 0.5 * n;
    const i = Math.round(sight.i - (normal[0] as number) * way);
    const j = Math.round(sight.j - (normal[1] as number) * way);
    const k = Math.round(sight.k - (normal[2] as number) * way);
    if (k < PAD || k >= field.nz + PAD || j < PAD || j >= field.ny + PAD || i < PAD || i >= field.nx + PAD) break;
    const at = storedAt(grid, i, j, k);
    if (at >= 0 && (field.damage[at] as number) > 0) deepest = way;
    else if (way > 1.5) break;
  }
  return deepest * field.pitch;
}

/** Age 0..1 round a surface point, from the voxels about it that were hit; 0 where none was. */
function ageAround(shader: Shader, sight: Sight): number {
  const { grid } = shader;
  const i0 = Math.floor(sight.i);
  const j0 = Math.floor(sight.j);
  const k0 = Math.floor(sight.k);
  let sum = 0;
  let weights = 0;
  for (let corner = 0; corner < 8; corner++) {
    const di = corner & 1;
    const dj = (corner >> 1) & 1;
    const dk = corner >> 2;
    const at = storedAt(grid, i0 + di, j0 + dj, k0 + dk);
    if (at < 0) continue;
    const age = grid.field.age[at] as number;
    if (age === 0) continue;
    const weight =
      Math.abs(1 - di - (sight.i - i0)) * Math.abs(1 - dj - (sight.j - j0)) * Math.abs(1 - dk - (sight.k - k0)) + 1e-6;
    sum += age * weight;
    weights += weight;
  }
  return weights === 0 ? 0 : sum / (255 * weights);
}

/** Share 0..1 of the colour map at a surface point. */
function mapShare(shader: Shader, sight: Sight): number {
  const { shading, grid } = shader;
  const { field } = grid;
  if (shading.kind === 'depth') return ((sight.k - PAD) * field.pitch + field.z0) / shading.high;
  if (shading.kind === 'damage') return damageBeneath(shader, sight) / shading.high;
  return ageAround(shader, sight);
}

/** Brightness of a matt surface with the shader's present normal, about 0.2 in a pit to 1.1 facing the light. */
function brightness(shader: Shader, sight: Sight): number {
  const { normal, light, occluders } = shader;
  const facing =
    (normal[0] as number) * (light[0] as number) +
    (normal[1] as number) * (light[1] as number) +
    (normal[2] as number) * (light[2] as number);
  const open = openness(occluders, sight.i, sight.j, sight.k, normal);
  const sky = (SKY - SKY_ABOVE * (normal[2] as number)) * open;
  if (facing <= 0) return sky;
  return sky + SUN * facing * (0.35 * open + 0.65) * sunlit(occluders, sight.i, sight.j, sight.k, light);
}

/** Colour 0..255 of the surface at the sight, into out[0..2]. Map colours are shaded by 0.14 to 1.14 at most. */
export function shadeSurface(out: Float64Array, shader: Shader, sight: Sight): void {
  surfaceNormal(shader.normal, shader.grid, sight, shader.scratch);
  const light = brightness(shader, sight);
  if (shader.shading.kind === 'plain') {
    const tone = Math.min(light, 1.03);
    for (let c = 0; c < 3; c++) out[c] = (shader.matt[c] as number) * tone;
    return;
  }
  const colour = cividis(mapShare(shader, sight));
  const factor = Math.min(1.14, 0.14 + light);
  for (let c = 0; c < 3; c++) out[c] = Math.min(255, (colour[c] as number) * factor);
}

/** Colour 0..255 of a level plane of one tone at the sight, into out[0..2]: what lies beneath the work. */
export function shadePlane(
  out: Float64Array,
  shader: Shader,
  sight: Sight,
  tone: readonly [number, number, number],
): void {
  const { normal } = shader;
  normal[0] = 0;
  normal[1] = 0;
  normal[2] = -1;
  const light = Math.min(brightness(shader, sight), 1.03);
  for (let c = 0; c < 3; c++) out[c] = (tone[c] as number) * light;
}

/** Whether the surface here is the untouched entry face: 1 on it, falling to 0 two thirds of a voxel below. */
export function untouched(grid: Grid, sight: Sight): number {
  const face = PAD - grid.field.z0 / grid.field.pitch;
  const below = sight.k - face;
  if (below <= 0.15) return 1;
  return below >= 0.65 ? 0 : (0.65 - below) / 0.5;
}
