import type { BrickField } from '#src/voxel/bricks.ts';
import { ALL_SOLID, BRICK_VOXELS } from '#src/voxel/bricks.ts';

/**
 * The parallel view of a half-section: the work is cut by the plane y = yCut and the half behind it is shown, the cut
 * face at true scale, depth into the sheet rising. A point (x, y, z) lands at across = x, down = z - rise (y - yCut).
 */
export interface SectionView {
  /** Picture size in pixels. */
  readonly width: number;
  readonly height: number;
  /** Edge of a pixel on the cut face (m). */
  readonly pixel: number;
  /** Across (m) at the left edge and down (m) at the top edge of the picture. */
  readonly left: number;
  readonly top: number;
  /** The cutting plane (m). */
  readonly yCut: number;
  /** Rise of the view per depth into the sheet. */
  readonly rise: number;
}

/** Rise used throughout: depth into the sheet is drawn at half its length. */
export const RISE = 0.5;

/** Where a work point lands, in pixels from the top left corner of the picture. */
export function toPicture(
  view: SectionView,
  x: number,
  y: number,
  z: number,
): { readonly px: number; readonly py: number } {
  return {
    px: (x - view.left) / view.pixel,
    py: (z - view.rise * (y - view.yCut) - view.top) / view.pixel,
  };
}

/** Extent of the removed work (m). */
export interface CavityBounds {
  readonly xMin: number;
  readonly xMax: number;
  readonly yMin: number;
  readonly yMax: number;
  readonly depth: number;
}

function growByBrick(range: Float64Array, field: BrickField, brick: number, layers: number): void {
  const entry = field.table[brick] as number;
  const bx = field.nx >> 3;
  const by = field.ny >> 3;
  const i0 = (brick % bx) * 8;
  const j0 = (Math.floor(brick / bx) % by) * 8;
  const k0 = Math.floor(brick / (bx * by)) * 8;
  for (let n = 0; n < BRICK_VOXELS; n++) {
    if (entry >= 0 && (field.solid[entry * BRICK_VOXELS + n] as number) >= 128) continue;
    const i = i0 + (n & 7);
    const j = j0 + ((n >> 3) & 7);
    const k = k0 + (n >> 6);
    if (k >= layers) return;
    if (i < (range[0] as number)) range[0] = i;
    if (i > (range[1] as number)) range[1] = i;
    if (j < (range[2] as number)) range[2] = j;
    if (j > (range[3] as number)) range[3] = j;
    if (k > (range[4] as number)) range[4] = k;
  }
}

/** Extent of the voxels less than half solid, down to `thickness` (m); undefined where nothing has been removed. */
export function cavityBounds(field: BrickField, thickness = Number.POSITIVE_INFINITY): CavityBounds | undefined {
  const layers = Math.min(field.nz, Math.round((thickness - field.z0) / field.pitch + 0.5));
  const range = Float64Array.of(field.nx, -1, field.ny, -1, -1);
  for (let brick = 0; brick < field.table.length; brick++) {
    const entry = field.table[brick] as number;
    if (entry !== ALL_SOLID) growByBrick(range, field, brick, layers);
  }
  const [iMin, iMax, jMin, jMax, kMax] = range as unknown as [number, number, number, number, number];
  if (iMax < 0) return undefined;
  const edge = (start: number, index: number): number => start + field.pitch * index;
  return {
    xMin: edge(field.x0, iMin - 0.5),
    xMax: edge(field.x0, iMax + 0.5),
    yMin: edge(field.y0, jMin - 0.5),
    yMax: edge(field.y0, jMax + 0.5),
    depth: edge(field.z0, kMax + 0.5),
  };
}

/** Room to leave round the cavity, in pixels. */
export interface Margins {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

/** Height (pixels) of the picture in which the cavity fills the free width. */
export function naturalHeight(width: number, bounds: CavityBounds, margins: Margins, yCut = 0): number {
  const pixel = (bounds.xMax - bounds.xMin) / (width - margins.left - margins.right);
  const down = bounds.depth + RISE * Math.max(0, bounds.yMax - yCut);
  return Math.ceil(margins.top + margins.bottom + down / pixel);
}

/** The largest view of the cavity that leaves the margins free; `depth` may be larger than the cavity is yet. */
export function fitView(
  size: { readonly width: number; readonly height: number },
  bounds: CavityBounds,
  margins: Margins,
  yCut = (bounds.yMin + bounds.yMax) / 2,
): SectionView {
  const back = RISE * Math.max(0, bounds.yMax - yCut);
  const across = bounds.xMax - bounds.xMin;
  const down = bounds.depth + back;
  const freeWidth = size.width - margins.left - margins.right;
  const freeHeight = size.height - margins.top - margins.bottom;
  if (!(freeWidth > 0 && freeHeight > 0)) throw new RangeError('the margins leave no room for the cavity');
  const pixel = Math.max(across / freeWidth, down / freeHeight);
  const spareX = freeWidth - across / pixel;
  const spareY = freeHeight - down / pixel;
  return {
    width: size.width,
    height: size.height,
    pixel,
    left: bounds.xMin - pixel * (margins.left + spareX / 2),
    top: -back - pixel * (margins.top + spareY / 2),
    yCut,
    rise: RISE,
  };
}
