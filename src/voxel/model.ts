import { exp, pow } from '#src/base/math.ts';
import { makeOutline, type Outline, type OutlineSpec } from '#src/base/outline.ts';
import { streamKey } from '#src/base/philox.ts';
import { contact, contactLaw, emptyContact } from '#src/physics/contact.ts';
import { craterLaw, meanChip } from '#src/physics/crater.ts';
import type { SlurryFace } from '#src/physics/estimate.ts';
import { freeImpact } from '#src/physics/free-impact.ts';
import { sizeClasses } from '#src/physics/grit-law.ts';
import { gritsPerArea } from '#src/physics/population.ts';
import type { Conditions } from '#src/physics/records.ts';
import { hitYield } from '#src/physics/yields.ts';
import type { FieldSpec } from './field.ts';
import { COEFFICIENT, HIT_CHANNELS } from './kernels/contract.ts';
import { makeSlurry, type SlurryModel } from './slurry.ts';
import { buildTables, type CutTables, type GapMeans, gapMeans } from './tables.ts';

/** The trace strip: long enough for the 4 mm evaluation length with half a cut-off of 0.8 mm at either end. */
const STRIP_LENGTH = 4.8e-3;
const STRIP_PITCH = 1e-6;
/** Zones of distance beyond the start of the tool's curved edge in the load balance, the flat face included. */
const ZONES = 17;
/** Of these, zones under the curved edge. */
export const EDGE_ZONES = ZONES - 1;
/** Advance per step over the load's e-fold height: the load then stays within 1 % with the face taken at mid-step. */
export const ADVANCE = 0.2;
/** Floor steps per wall step. */
export const WALL_EVERY = 8;
/** Steps between renewals of the block bounds: heights only fall, so an old bound is loose and never wrong. */
export const RENEW_EVERY = 4;

/** How the tool is driven: a static load (N), or a feed (m/s) that holds whatever load it takes. */
export type Drive = { readonly kind: 'load'; readonly load: number } | { readonly kind: 'feed'; readonly feed: number };

/** What is to be cut. All SI. */
export interface CutSpec {
  readonly conditions: Conditions;
  readonly tool: OutlineSpec;
  readonly edgeRadius: number;
  readonly drive: Drive;
  /** Mean depth of the flat floor at which the cut ends (m). */
  readonly depth: number;
  readonly runout: number;
  readonly seed: number;
  readonly pass: number;
  readonly replicate: number;
  /** Pitch at mean chip radius over this number, magnification included. */
  readonly columnsPerRadius: number;
  /** Most columns of the floor. */
  readonly columnBudget: number;
  /** Pitch of the floor (m), instead of the one the budget gives. */
  readonly pitch?: number;
  /** Lateral magnification, instead of the one the pitch asks for. */
  readonly magnification?: number;
  /** Without the trace strip. */
  readonly withoutStrip?: boolean;
  /** The slurry under the face; fresh grit everywhere if left out. */
  readonly slurry?: SlurryFace;
  readonly precision?: 32 | 64;
}

/** One closed loop of the tool's outline and the wall along it. */
export interface WallModel {
  readonly loop: number;
  readonly spec: FieldSpec;
  readonly magnification: number;
  readonly rimCells: number;
  readonly rimSpacing: number;
  readonly cellsPerSite: number;
}

/** Everything about a cut that does not change while it runs. */
export interface CutModel {
  readonly spec: CutSpec;
  readonly outline: Outline;
  readonly tables: CutTables;
  /** Means of fresh grit. */
  readonly means: GapMeans;
  readonly slurry: SlurryModel | null;
  readonly floor: FieldSpec;
  /** Centre of floor column (0, 0) in the outline's frame (m). */
  readonly x0: number;
  readonly y0: number;
  readonly magnification: number;
  readonly strip: FieldSpec | null;
  readonly walls: readonly WallModel[];
  /** Mean radius and depth of the chips expected on a flat floor, and the gap there (m). */
  readonly chipRadius: number;
  readonly chipDepth: number;
  /** Radius of the largest chip of the floor, and depth of the deepest edge chip, that are reckoned with (m). */
  readonly largestChip: number;
  readonly deepestEdgeChip: number;
  readonly startGap: number;
  readonly startEfold: number;
  /** Expected lowering by free impacts per cycle (m). */
  readonly freePerCycle: number;
  readonly key0: number;
  readonly keys: { readonly floor: number; readonly strip: number; readonly walls: readonly number[] };
}

const roundUp = (value: number, unit: number) => Math.ceil(value / unit - 1e-9) * unit;

/**
 * Works out tables, pitches, magnifications and field sizes.
 * @throws RangeError when the pitch asked for would give a crater less than half a column or more than a tile.
 */
export function makeModel(spec: CutSpec): CutModel {
  const { conditions } = spec;
  const outline = makeOutline(spec.tool);
  const tables = buildTables(conditions, spec);
  const means = gapMeans(conditions, tables, ZONES);
  const start = flatFloor(spec, outline, means);
  const chip = typicalChip(conditions, start.gap);
  const largestChip = largestRadius(tables, 0.85 * start.gap);
  const deepestEdgeChip = deepestChip(spec, tables);
  const sizes = { radius: chip.radius, largestChip, deepestEdgeChip };
  const grid = floorGrid(spec, outline, sizes);
  const walls = wallModels(spec, outline, grid.pitch, sizes);
  return {
    spec,
    outline,
    tables,
    means,
    slurry: spec.slurry ? makeSlurry(conditions, spec.slurry, grid) : null,
    floor: grid.field,
    x0: grid.x0,
    y0: grid.y0,
    magnification: grid.magnification,
    strip: spec.withoutStrip ? null : stripSpec(spec, chip.radius, largestChip),
    walls,
    chipRadius: chip.radius,
    chipDepth: chip.depth,
    largestChip,
    deepestEdgeChip,
    startGap: start.gap,
    startEfold: start.efold,
    freePerCycle: freeLowering(conditions, start.gap),
    key0: spec.seed >>> 0,
    keys: {
      floor: streamKey(spec.pass, 1, spec.replicate),
      strip: streamKey(spec.pass, 2, spec.replicate),
      walls: walls.map((_, k) => streamKey(spec.pass, 3 + k, spec.replicate)),
    },
  };
}

/** Gap over a flat floor, from the load over the face; a feed starts where a tenth of a megapascal would. */
function flatFloor(spec: CutSpec, outline: Outline, means: GapMeans): { gap: number; efold: number } {
  const pressure = spec.drive.kind === 'load' ? spec.drive.load / outline.area : 1e5;
  const { conditions } = spec;
  for (let k = means.entries - 2; k > 0; k--) {
    const gap = k * means.step;
    const at = (n: number) =>
      (means.impulse[n] as number) * conditions.frequency * gritsPerArea(conditions, n * means.step);
    if (at(k) < pressure) continue;
    const t = (at(k) - pressure) / (at(k) - at(k + 1));
    const fall = (at(k) - at(k + 1)) / means.step / at(k);
    return { gap: gap + t * means.step, efold: 1 / fall };
  }
  return { gap: means.step, efold: means.step };
}

/** Mean radius and depth of the chips that leave a flat floor at this gap (m). */
function typicalChip(conditions: Conditions, gap: number): { radius: number; depth: number } {
  const law = contactLaw(conditions);
  const crater = craterLaw(conditions.work, conditions.constants);
  const out = emptyContact();
  const { diameter, fraction } = sizeClasses(conditions.grit);
  let weight = 0;
  let radius = 0;
  let depth = 0;
  let dents = 0;
  let dentRadius = 0;
  diameter.forEach((d, k) => {
    if (d <= gap) return;
    contact(law, d, d - gap, out);
    const chip = meanChip(crater, out.load);
    const share = (fraction[k] as number) * hitYield(conditions, d);
    weight += share * chip.probability;
    radius += share * chip.radius;
    depth += share * chip.depth;
    dents += share;
    dentRadius += share * conditions.constants.lipRadius * Math.sqrt(out.load / (Math.PI * conditions.work.hardness));
  });
  // purely plastic work has no chips to resolve: its dents set the scale
  if (weight < 1e-3 * dents) return { radius: dents > 0 ? dentRadius / dents : gap / 10, depth: 0 };
  return { radius: radius / weight, depth: depth / weight };
}

/**
 * Radius of the chip of the largest grain over a floor this far below the face, far above its threshold (m). Kernels cut
 * off any rarer, larger chip at half a tile.
 */
function largestRadius(tables: CutTables, gap: number): number {
  const { hits, hitDiameters, hitOverlaps, coefficients } = tables.kernel;
  const largest = coefficients[COEFFICIENT.largest] as number;
  const overlap = Math.min(hitOverlaps - 1, Math.ceil((1 - gap / largest) * (hitOverlaps - 1)));
  const load = hits[((hitDiameters - 1) * hitOverlaps + overlap) * HIT_CHANNELS] as number;
  const root = Math.sqrt(load);
  return (coefficients[COEFFICIENT.radius] as number) * root * Math.sqrt(Math.sqrt(root));
}

/** Sizes of chips the fields are laid out for (m). */
interface ChipSizes {
  readonly radius: number;
  readonly largestChip: number;
  readonly deepestEdgeChip: number;
}

/** Scatter of the rim's sites reckoned with, in standard deviations. */
const WEAKEST_SITE = 3;

/** Depth of the edge chip under the largest grain, squeezed as far as the run-out swings, at the weakest site (m). */
function deepestChip(spec: CutSpec, tables: CutTables): number {
  const { hits, hitDiameters, hitOverlaps, coefficients } = tables.kernel;
  const { constants } = spec.conditions;
  const largest = coefficients[COEFFICIENT.largest] as number;
  const squeeze = Math.min(largest, 2 * spec.runout * constants.runoutCap);
  const overlap = Math.min(hitOverlaps - 1, Math.ceil((squeeze / largest) * (hitOverlaps - 1)));
  const load = hits[((hitDiameters - 1) * hitOverlaps + overlap) * HIT_CHANNELS] as number;
  const site = exp(-WEAKEST_SITE * constants.chipSiteScatter);
  return pow(load / ((coefficients[COEFFICIENT.chipLoad] as number) * site), 2 / 3);
}

/** Blocks no larger than a crater keep the candidates per engaged grain under three. */
function blockFor(columnsPerRadius: number): number {
  if (columnsPerRadius >= 6) return 8;
  return columnsPerRadius >= 2 ? 4 : 2;
}

/** The smallest of the allowed tile sides that no crater can cross. */
function tileFor(columns: number): number {
  for (const tile of [64, 128]) if (tile >= 2 * columns) return tile;
  return 256;
}

function floorGrid(spec: CutSpec, outline: Outline, { radius, largestChip, deepestEdgeChip }: ChipSizes) {
  const { bounds } = outline;
  const { grit, constants } = spec.conditions;
  const toolReach = grit.largest / 2 + spec.edgeRadius + Math.min(largestChip, grit.largest);
  const wallReach = grit.largest + spec.runout * constants.runoutCap + constants.chipWidthRatio * deepestEdgeChip;
  const margin = Math.max(toolReach, wallReach);
  const width = bounds.xMax - bounds.xMin + 2 * margin;
  const height = bounds.yMax - bounds.yMin + 2 * margin;
  const budgeted = Math.sqrt((width * height) / spec.columnBudget);
  const pitch = spec.pitch ?? Math.max(radius / spec.columnsPerRadius, budgeted);
  const asked = (spec.columnsPerRadius * pitch) / radius;
  const magnification = spec.magnification ?? (asked > 1.001 ? asked * asked : 1);
  if (radius * Math.sqrt(magnification) < 0.5 * pitch) {
    throw new RangeError(
      `a pitch of ${pitch} m loses craters of ${radius} m: take a finer one, or let it be magnified`,
    );
  }
  const stretch = Math.sqrt(magnification);
  const tile = tileFor((largestChip * stretch) / pitch);
  const nx = roundUp(width / pitch, tile);
  const ny = roundUp(height / pitch, tile);
  const field: FieldSpec = {
    nx,
    ny,
    dx: pitch,
    dy: pitch,
    tile,
    block: blockFor((radius * stretch) / pitch),
    periodicX: false,
    periodicY: false,
    edged: true,
    precision: spec.precision ?? 32,
  };
  const x0 = (bounds.xMin + bounds.xMax) / 2 - ((nx - 1) / 2) * pitch;
  const y0 = (bounds.yMin + bounds.yMax) / 2 - ((ny - 1) / 2) * pitch;
  return { field, pitch, magnification, x0, y0 };
}

function stripSpec(spec: CutSpec, radius: number, largestChip: number): FieldSpec {
  const pitch = Math.max(Math.min(STRIP_PITCH, radius / 2), largestChip / 128);
  const tile = tileFor(largestChip / pitch);
  const nx = roundUp(STRIP_LENGTH / pitch, 2 * tile);
  return {
    nx,
    ny: tile,
    dx: pitch,
    dy: pitch,
    tile,
    block: blockFor(radius / pitch),
    periodicX: true,
    periodicY: true,
    edged: false,
    precision: spec.precision ?? 32,
  };
}

function wallModels(
  spec: CutSpec,
  outline: Outline,
  floorPitch: number,
  { radius, largestChip, deepestEdgeChip }: ChipSizes,
): WallModel[] {
  const budget = spec.columnBudget / 2;
  const wanted = Math.min(floorPitch, radius / spec.columnsPerRadius);
  return outline.loops.map((loop, index) => {
    const share = (budget * loop.length) / outline.perimeter;
    const pitch = Math.max(wanted, Math.sqrt((loop.length * spec.depth) / share));
    const asked = (spec.columnsPerRadius * pitch) / radius;
    const magnification = asked > 1.001 ? asked * asked : 1;
    const stretched = largestChip * Math.sqrt(magnification);
    // a chip of the rim spans its breadth along the wall, and must not meet one of a tile of the same colour
    const breadth = (spec.conditions.constants.chipBreadthRatio / 2) * deepestEdgeChip;
    const tile = tileFor(Math.max(stretched, breadth) / pitch);
    const nx = Math.max(2 * tile, roundUp(loop.length / pitch, 2 * tile));
    const rimCells = Math.max(nx, Math.ceil(loop.length / (0.1 * spec.conditions.grit.massMedian)));
    return {
      loop: index,
      spec: {
        nx,
        ny: roundUp(spec.depth / pitch, tile),
        dx: loop.length / nx,
        dy: pitch,
        tile,
        block: blockFor((radius * Math.sqrt(magnification)) / pitch),
        periodicX: true,
        periodicY: false,
        edged: false,
        precision: spec.precision ?? 32,
      },
      magnification,
      rimCells,
      rimSpacing: loop.length / rimCells,
      cellsPerSite: 16,
    };
  });
}

/** Lowering per cycle by grains thrown at the floor without being squeezed (m): dents only, every grain once a cycle. */
function freeLowering(conditions: Conditions, gap: number): number {
  const { diameter, fraction } = sizeClasses(conditions.grit);
  let sum = 0;
  diameter.forEach((d, k) => {
    if (d > gap) return;
    const free = freeImpact(conditions, d);
    sum += (fraction[k] as number) * hitYield(conditions, d) * conditions.constants.plasticShare * free.dent;
  });
  return gritsPerArea(conditions, gap) * sum;
}
