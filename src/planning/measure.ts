import type { HeightField, PlaneCurve } from '#src/base/field.ts';
import { nearest, nominalSizes, type OutlineSpec, pointAt } from '#src/base/outline.ts';
import { type ChipFigures, edgeChips } from '#src/metrology/chips.ts';
import { cornerRadius } from '#src/metrology/corner.ts';
import { floorFlatness, insideOutline } from '#src/metrology/floor.ts';
import { sizesAtDepth } from '#src/metrology/size.ts';
import { entrySizeDepth, floorSizeDepth, sizeSigns, tapers } from '#src/metrology/taper.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import { type Cut, damageQuantile, hitSummary, largestDamage } from '#src/voxel/cut.ts';
import { OUT_OF_REACH } from '#src/voxel/kernels/contract.ts';
import { removedVolume } from '#src/voxel/solid.ts';
import { SCALAR } from '#src/voxel/state.ts';
import { rimProfile, type SectionCurves, sectionAt, surfaceField, wallPoints } from '#src/voxel/surface.ts';

/** Depths at which the cavity's size is taken for the taper. */
const TAPER_LEVELS = 25;
/** Floor heights left out of the corner's profile above the mean floor, in mean chip depths and in voxels. */
const FLOOR_PEAKS = 4;
/** Standard error of the corner's least-squares arc, over its radius, past which the touching fillet is taken. */
const ARC_ERROR = 0.15;
/** Share of the depth that must lie above the fillet for a taper to be measured. */
const TAPER_NEEDS = 0.5;
/** Share of the depth over which the first and the last rate are averaged. */
const RATE_SPAN = 0.1;

/** The cavity as measured on its voxels, and what the cut recorded. SI; one value per dimension in the arrays. */
export interface CutMeasures {
  readonly time: number;
  readonly depth: number;
  readonly rateStart: number;
  readonly rateEnd: number;
  readonly rateMean: number;
  /** Volume of work removed over the time (m3/s). */
  readonly removalRate: number;
  readonly entrySize: readonly number[];
  readonly floorSize: readonly number[];
  /** Per side, over the tool's own size (m). */
  readonly overcutEntry: number;
  readonly overcutFloor: number;
  /** Mean half-angle per side of all dimensions (rad), positive when wider at the entry. */
  readonly taper: number;
  readonly cornerRadius: number;
  readonly floorFlatness: number;
  /** Width left out inside the tool's outline for the flatness (m); the wall lies an overcut further out. */
  readonly flatnessMargin: number;
  /** Edge chips: width on the entry face and depth down the wall. */
  readonly chipWidth: ChipFigures;
  readonly chipDepth: ChipFigures;
  readonly damageDepth: number;
  readonly damageLargest: number;
  readonly toolWearLength: number;
  /** Volume of tool lost per volume of work removed. */
  readonly toolWearRatio: number;
  readonly toolEdgeRadius: number;
  /** Hits the cut stands for, and those drawn one by one. */
  readonly impacts: number;
  readonly drawnHits: number;
  readonly overlap: number;
  readonly plasticShare: number;
  readonly freeImpactShare: number;
  readonly removedVolume: number;
  /** Half-section along y = 0, and the rim unrolled. */
  readonly section: SectionCurves;
  readonly rim: { readonly arc: Float64Array; readonly width: Float64Array; readonly depth: Float64Array };
}

/**
 * Measures a finished (or stopped) cut. Sizes, taper, flatness and corner are taken from the voxels; chips, damage and
 * tool from what the hits left in the fields.
 * @param cavity the cavity's nominal outline, of the same kind as the tool's
 */
export function measureCut(cut: Cut, bricks: BrickField, cavity: OutlineSpec): CutMeasures {
  const { model, state, records } = cut;
  const depth = -(state.scalars[SCALAR.floorMean] as number);
  const time = state.scalars[SCALAR.time] as number;
  const { grit, constants } = model.spec.conditions;
  const entrySize = sizesAt(cut, bricks, cavity, entrySizeDepth(depth));
  const floorSize = sizesAt(cut, bricks, cavity, floorSizeDepth(depth));
  const surface = surfaceField(bricks);
  const corner = cornerOf(cut, bricks, surface, depth);
  const flatnessMargin = (Number.isFinite(corner) ? corner : model.spec.edgeRadius) + grit.massMedian;
  const volume = removedVolume(bricks);
  const toolWearLength = state.scalars[SCALAR.toolLost] as number;
  const rim = rimProfile(state, constants.chipWidthRatio);
  const chips = edgeChips({ s: rim.arc, perimeter: model.outline.perimeter, width: rim.width, depth: rim.depth });
  const hits = hitSummary(cut);
  return {
    time,
    depth,
    rateStart: rateBetween(cut, 0, RATE_SPAN),
    rateEnd: rateBetween(cut, 1 - RATE_SPAN, 1),
    rateMean: time > 0 ? depth / time : 0,
    removalRate: time > 0 ? volume / time : 0,
    entrySize,
    floorSize,
    overcutEntry: overcut(cut, entrySize, cavity),
    overcutFloor: overcut(cut, floorSize, cavity),
    taper: meanTaper(cut, bricks, cavity, depth),
    cornerRadius: corner,
    floorFlatness: flatnessOf(surface, cut, flatnessMargin),
    flatnessMargin,
    chipWidth: chips.width,
    chipDepth: chips.depth,
    damageDepth: damageQuantile(cut, 0.99),
    damageLargest: largestDamage(cut),
    toolWearLength,
    toolWearRatio: volume > 0 ? (toolWearLength * model.outline.area) / volume : 0,
    toolEdgeRadius: records.at(-1)?.toolEdgeRadius ?? model.spec.edgeRadius,
    impacts: hits.impacts,
    drawnHits: hits.drawn,
    overlap: hits.overlap,
    plasticShare: hits.plasticShare,
    freeImpactShare: hits.freeShare,
    removedVolume: volume,
    section: sectionAt(bricks, 0),
    rim,
  };
}

/** Mean rate of sinking between two shares of the depth, from the records (m/s). */
function rateBetween(cut: Cut, from: number, to: number): number {
  const { records } = cut;
  const end = records.at(-1);
  if (!end) return 0;
  const first = records.findLast((r) => r.depth <= from * end.depth) ?? { depth: 0, time: 0 };
  const last = records.find((r) => r.depth >= to * end.depth) ?? end;
  return last.time > first.time ? (last.depth - first.depth) / (last.time - first.time) : 0;
}

/** Least-squares sizes at one depth: the wall between the chips, and the wall as it was where a chip has taken it. */
function sizesAt(cut: Cut, bricks: BrickField, cavity: OutlineSpec, z: number): number[] {
  const seen = unchippedWall(cut, bricks, z);
  const taken = wallUnderChips(cut, bricks, z);
  const join = (a: Float64Array, b: Float64Array) => Float64Array.of(...a, ...b);
  return sizesAtDepth({ x: join(seen.x, taken.x), y: join(seen.y, taken.y) }, cavity);
}

/** Points of the wall field at depth z where an edge chip reaches that deep. */
function wallUnderChips(cut: Cut, bricks: BrickField, z: number): { x: Float64Array; y: Float64Array } {
  const { model, state } = cut;
  const x: number[] = [];
  const y: number[] = [];
  state.walls.forEach(({ field, rim }, k) => {
    const row = Math.floor(z / field.dy);
    const start = model.outline.loops[k]?.start ?? 0;
    if (row >= field.ny) return;
    for (let i = 0; i < field.nx; i++) {
      const h = field.heights[row * field.nx + i] as number;
      const s = (i + 0.5) * field.dx;
      const cell = Math.min(rim.n - 1, Math.floor(s / rim.spacing));
      if (h <= OUT_OF_REACH || !((rim.chips[cell] as number) > Math.max(0, z - bricks.pitch))) continue;
      const p = pointAt(model.outline, start + s);
      x.push(p.x - h * p.nx);
      y.push(p.y - h * p.ny);
    }
  });
  return { x: Float64Array.from(x), y: Float64Array.from(y) };
}

/** Wall points at depth z that lie near the outline and not in an edge chip. */
function unchippedWall(cut: Cut, bricks: BrickField, z: number): PlaneCurve {
  const { model, state } = cut;
  const points = wallPoints(bricks, z);
  const reach = model.spec.conditions.grit.largest * 2;
  const keep: number[] = [];
  for (let n = 0; n < points.x.length; n++) {
    const near = nearest(model.outline, points.x[n] as number, points.y[n] as number);
    // peaks of the floor far inside the outline are no wall
    if (Math.abs(near.distance) > reach) continue;
    const rim = state.walls[near.loop]?.rim;
    const start = model.outline.loops[near.loop]?.start ?? 0;
    const cell = rim ? Math.min(rim.n - 1, Math.floor((near.s - start) / rim.spacing)) : 0;
    if (rim && (rim.chips[cell] as number) > Math.max(0, z - bricks.pitch)) continue;
    keep.push(n);
  }
  const pick = (values: Float64Array) => Float64Array.from(keep, (n) => values[n] as number);
  return { x: pick(points.x), y: pick(points.y), closed: false };
}

/** Half of what the cavity is wider than the tool, averaged over the dimensions; an island counts the other way (m). */
function overcut(cut: Cut, sizes: readonly number[], cavity: OutlineSpec): number {
  const tool = nominalSizes(cut.model.spec.tool);
  const signs = sizeSigns(cavity);
  const each = sizes.map((size, k) => (signs[k] as number) * ((size - (tool[k] as number)) / 2));
  return mean(each);
}

function mean(values: readonly number[]): number {
  const finite = values.filter(Number.isFinite);
  return finite.length > 0 ? finite.reduce((sum, v) => sum + v, 0) / finite.length : Number.NaN;
}

/** Levels inside the fillet (edge radius and largest grain above the floor) are left out; NaN where it takes half the wall. */
function meanTaper(cut: Cut, bricks: BrickField, cavity: OutlineSpec, depth: number): number {
  const { edgeRadius, conditions } = cut.model.spec;
  const above = depth - edgeRadius - conditions.grit.largest;
  const to = Math.min(0.9 * depth, above);
  if (to < TAPER_NEEDS * depth) return Number.NaN;
  const from = 0.1 * depth;
  const depths = Float64Array.from({ length: TAPER_LEVELS }, (_, k) => from + ((to - from) * k) / (TAPER_LEVELS - 1));
  const bySize = nominalSizes(cavity).map(() => new Float64Array(TAPER_LEVELS));
  depths.forEach((z, k) => {
    sizesAt(cut, bricks, cavity, z).forEach((size, n) => {
      (bySize[n] as Float64Array)[k] = size;
    });
  });
  return mean(tapers(depths, bySize, depth, cavity).map((taper) => taper.halfAngle));
}

/** NaN when the floor is too small to leave anything beside the margin. */
function flatnessOf(surface: HeightField, cut: Cut, margin: number): number {
  try {
    return floorFlatness(insideOutline(surface, cut.model.outline, margin)).flatness;
  } catch (problem) {
    if (problem instanceof RangeError) return Number.NaN;
    throw problem;
  }
}

/**
 * Corner radius between wall and floor from the profile averaged around the outline: wall points by layer down to the
 * floor's highest peaks, floor heights under the tool. NaN when the corner is too shallow or too coarse to measure.
 */
function cornerOf(cut: Cut, bricks: BrickField, surface: HeightField, depth: number): number {
  const { model } = cut;
  const { grit } = model.spec.conditions;
  const span = 3 * (model.spec.edgeRadius + grit.massMedian);
  const peaks = Math.max(FLOOR_PEAKS * model.chipDepth, 1.5 * bricks.pitch);
  const r: number[] = [];
  const z: number[] = [];
  for (let k = Math.max(0, Math.floor((depth - span) / bricks.pitch)); (k + 0.5) * bricks.pitch < depth - peaks; k++) {
    const gap = meanGap(cut, bricks, (k + 0.5) * bricks.pitch);
    if (!Number.isFinite(gap)) continue;
    r.push(gap);
    z.push(-(k + 0.5) * bricks.pitch);
  }
  const floor = floorByDistance(cut, surface, span);
  r.push(...floor.r);
  z.push(...floor.z);
  try {
    const corner = cornerRadius({ x: Float64Array.from(r), y: Float64Array.from(z) });
    // on few voxels the free arc is weak; the fillet that touches wall and floor is steadier
    const sure = corner.radiusError < ARC_ERROR * corner.radius;
    return sure ? corner.radius : corner.tangentRadius;
  } catch (problem) {
    if (problem instanceof RangeError) return Number.NaN;
    throw problem;
  }
}

/** Mean distance of the wall outside the tool's outline at depth z, chips and floor peaks left out (m). */
function meanGap(cut: Cut, bricks: BrickField, z: number): number {
  const points = unchippedWall(cut, bricks, z);
  let sum = 0;
  for (let n = 0; n < points.x.length; n++) {
    sum += nearest(cut.model.outline, points.x[n] as number, points.y[n] as number).distance;
  }
  return points.x.length > 0 ? sum / points.x.length : Number.NaN;
}

/** Mean height of the floor by distance inside the start of the curved edge, from the edge inward (m). */
function floorByDistance(cut: Cut, surface: HeightField, span: number): { r: number[]; z: number[] } {
  const { model } = cut;
  const { nx, ny, dx, x0, y0 } = surface;
  const bins = Math.max(4, Math.floor(span / dx));
  const sums = new Float64Array(bins);
  const counts = new Float64Array(bins);
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx; i++) {
      const { distance } = nearest(model.outline, x0 + i * dx, y0 + j * dx);
      const bin = Math.floor((-distance - model.spec.edgeRadius) / dx);
      if (bin < 0 || bin >= bins) continue;
      sums[bin] = (sums[bin] as number) + (surface.z[j * nx + i] as number);
      counts[bin] = (counts[bin] as number) + 1;
    }
  }
  const r: number[] = [];
  const z: number[] = [];
  sums.forEach((sum, bin) => {
    if ((counts[bin] as number) === 0) return;
    r.push(-model.spec.edgeRadius - (bin + 0.5) * dx);
    z.push(sum / (counts[bin] as number));
  });
  return { r, z };
}
