import type { OutlineSpec } from '#src/base/outline.ts';
import { METRES_PER_MICROMETRE, METRES_PER_MILLIMETRE } from '#src/base/units.ts';
import {
  abrasiveOf,
  findGrade,
  findMaterial,
  gritSizesOf,
  type Library,
  toolMaterialOf,
  workMaterialOf,
} from '#src/formats/library.ts';
import type { ProcessConstants } from '#src/physics/constants.ts';
import { type EstimateTables, estimateTables, makeSlurryFace, type SlurryFace } from '#src/physics/estimate.ts';
import { gritLaw } from '#src/physics/grit-law.ts';
import type { Delivery } from '#src/physics/pass.ts';
import type { SlurryConstants } from '#src/physics/process/constants.ts';
import {
  bestPoint,
  type CurvePoint,
  curvePlaces,
  pointAt,
  type SlurryCurve,
  slurryCurve,
} from '#src/physics/process/slurry-curve.ts';
import type { Conditions, WorkMaterial } from '#src/physics/records.ts';
import type { Bore } from '#src/physics/slurry/grid.ts';
import { CARRIERS, type Carrier } from '#src/physics/slurry/viscosity.ts';

/** One setting to be looked at, by the names of the library. SI. */
export interface Case {
  readonly work: string | WorkMaterial;
  readonly tool: string;
  readonly abrasive: string;
  readonly grade: string;
  readonly amplitude: number;
  readonly frequency: number;
  readonly concentration: number;
  readonly outline: OutlineSpec;
  readonly bores: readonly Bore[];
  readonly carrier: Carrier;
  readonly delivery: Delivery;
}

/** Depth and tool diameter of the handbook's holes (m). */
export const HOLE = 12.7 * METRES_PER_MILLIMETRE;

/** The two middle readings of a quoted 25 to 51 um: its half, and itself, zero-to-peak (m). */
export const READINGS = [19 * METRES_PER_MICROMETRE, 38 * METRES_PER_MICROMETRE] as const;

/** Boron carbide F320 at 30 vol% in water, solid low-carbon steel tool of 12.7 mm, 20 kHz, unless said. */
export function handbook(amplitude: number, changes: Partial<Case> = {}): Case {
  return {
    work: 'soda_lime',
    tool: 'low_carbon_steel',
    abrasive: 'b4c',
    grade: 'F320',
    amplitude,
    frequency: 20e3,
    concentration: 0.3,
    outline: { kind: 'circle', diameter: HOLE },
    bores: [],
    carrier: CARRIERS.water,
    delivery: { kind: 'flooded' },
    ...changes,
  };
}

/** What is worked out once for a case. */
export interface Bench {
  readonly conditions: Conditions;
  readonly tables: EstimateTables;
  readonly face: SlurryFace;
  /** Load curve at a depth (m). */
  readonly curve: (depth: number) => SlurryCurve;
  /** Works something out once under a name. */
  readonly kept: <T>(name: string, make: () => T) => T;
}

/** What the checks are worked out with. */
export interface Lab {
  readonly constants: ProcessConstants;
  readonly slurry: SlurryConstants;
  readonly bench: (at: Case) => Bench;
  readonly library: Library;
  /** The same lab with one of the library's works having other properties; what was worked out before is kept. */
  readonly withWork: (id: string, work: WorkMaterial) => Lab;
}

function sound<T>(found: { readonly found?: T }, name: string): T {
  if (found.found === undefined) throw new RangeError(`the library has no ${name}`);
  return found.found;
}

/** A work of the library at its nominal properties. */
export function workOf(library: Library, id: string): WorkMaterial {
  return workMaterialOf(sound(findMaterial(library.materials, id), id));
}

/** A case with its work's properties in the place of its name. */
type Resolved = Case & { readonly work: WorkMaterial };

function conditionsOf(at: Resolved, library: Library, constants: ProcessConstants): Conditions {
  const { work, tool, abrasive, grade, amplitude, frequency, concentration } = at;
  return {
    work,
    tool: toolMaterialOf(sound(findMaterial(library.tools, tool), tool)),
    abrasive: abrasiveOf(sound(findMaterial(library.abrasives, abrasive), abrasive)),
    grit: gritLaw(gritSizesOf(sound(findGrade(library, grade), grade))),
    amplitude,
    frequency,
    concentration,
    constants,
  };
}

const FACE_CELLS = 40;

/** A store of results by name. */
function keeper(): <T>(name: string, make: () => T) => T {
  const store = new Map<string, unknown>();
  return <T>(name: string, make: () => T): T => {
    if (!store.has(name)) store.set(name, make());
    return store.get(name) as T;
  };
}

/** A lab over one library and one set of constants; whatever it works out it keeps. */
export function makeLab(library: Library, constants: ProcessConstants, slurry: SlurryConstants): Lab {
  const benches = keeper();
  const faces = keeper();
  const faceOf = ({ outline, bores, carrier, delivery }: Case, conditions: Conditions) => {
    const { amplitude, grit } = conditions;
    return faces(JSON.stringify([outline, bores, carrier, delivery, amplitude, grit.largest]), () =>
      makeSlurryFace(conditions, outline, bores, { carrier, delivery }, { cells: FACE_CELLS, constants: slurry }),
    );
  };
  const build = (at: Resolved): Bench => {
    const conditions = conditionsOf(at, library, constants);
    const tables = estimateTables(conditions);
    const face = faceOf(at, conditions);
    const places = curvePlaces(tables.sums);
    const kept = keeper();
    const curve = (depth: number) => kept(`curve ${depth}`, () => slurryCurve({ conditions, ...face }, places, depth));
    return { conditions, tables, face, curve, kept };
  };
  const labWith = (works: ReadonlyMap<string, WorkMaterial>): Lab => ({
    constants,
    slurry,
    library,
    bench: (at) => {
      const work = typeof at.work === 'string' ? (works.get(at.work) ?? workOf(library, at.work)) : at.work;
      const resolved = { ...at, work };
      return benches(JSON.stringify(resolved), () => build(resolved));
    },
    withWork: (id, work) => labWith(new Map([...works, [id, work]])),
  });
  return labWith(new Map());
}

/** Shares of the depth a hole is averaged over, with Simpson's weights. */
const STATIONS = [0, 0.25, 0.5, 0.75, 1] as const;
const WEIGHTS = [1 / 12, 4 / 12, 2 / 12, 4 / 12, 1 / 12] as const;
const PRESSURES = 80;

/** A hole sunk under one pressure. */
export interface Hole {
  readonly pressure: number;
  /** Depth over time (m/s). */
  readonly rate: number;
  /** Length of tool lost over depth. */
  readonly wear: number;
}

/** A hole of a depth under a constant pressure, slurry balanced on the way down. */
export function holeAt(bench: Bench, depth: number, pressure: number): Hole {
  let time = 0;
  let wear = 0;
  STATIONS.forEach((share, k) => {
    const point = pointAt(bench.curve(share * depth), pressure);
    time += (WEIGHTS[k] as number) / point.rate;
    wear += ((WEIGHTS[k] as number) * point.toolRate) / point.rate;
  });
  return { pressure, rate: 1 / time, wear };
}

/** The hole under the constant pressure that sinks it fastest, no station of it stalled. */
export function bestHole(bench: Bench, depth = HOLE): Hole {
  return bench.kept(`hole ${depth}`, () => searchedHole(bench, depth));
}

function searchedHole(bench: Bench, depth: number): Hole {
  const curves = STATIONS.map((share) => bench.curve(share * depth));
  const reach = ({ stall, points }: SlurryCurve) => Math.min(stall, points.at(-1)?.pressure ?? 0);
  const highest = Math.min(...curves.map(reach));
  const holes = Array.from({ length: PRESSURES }, (_, k) => holeAt(bench, depth, (highest * (k + 1)) / PRESSURES));
  return holes.reduce((best, hole) => (hole.rate > best.rate ? hole : best));
}

/** The point of the best load at one depth (m). */
export function bestAt(bench: Bench, depth: number): CurvePoint {
  return bestPoint(bench.curve(depth));
}

/** Rate at a depth and pressure (m/s). */
export function rateAt(bench: Bench, depth: number, pressure: number): number {
  return pointAt(bench.curve(depth), pressure).rate;
}
