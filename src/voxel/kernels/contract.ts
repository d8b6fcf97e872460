/**
 * What a kernel gets and what it must do. Kernels know no physics: they receive fields, tables and a row of step numbers,
 * and hit one tile per call. Arrays are checked once by the caller; nothing here allocates, throws or calls back.
 *
 * Heights h are elevations (m, <= 0 below the face a field starts from); a field's "face" is the height the other solid
 * stands at: the tool face over the floor, or the run-out over the wall, where h = -(side gap). A grain of diameter d
 * over a column at height h is squeezed by d - (face - h).
 */

/** Height of a column no grain can reach (m). */
export const OUT_OF_REACH = -1;

/** Bins of the load histogram: eight per octave from 2^-16 N upward. */
export const LOAD_BINS = 192;
export const LOAD_BIN_FIRST_EXPONENT = -16;
export const LOAD_BINS_PER_OCTAVE = 8;

export type Reals = Float32Array | Float64Array;

/** A field of columns, x fastest; tiles are numbered x fastest too. All lengths in m. */
export interface Field {
  readonly nx: number;
  readonly ny: number;
  readonly dx: number;
  readonly dy: number;
  /** Columns along one side of a tile: at least twice the largest crater radius, so that tiles of one colour never meet. */
  readonly tile: number;
  readonly tilesX: number;
  readonly tilesY: number;
  /** Columns along one side of a bound block: 2, 4 or 8. */
  readonly block: number;
  readonly periodicX: boolean;
  readonly periodicY: boolean;
  /** Height of each column (m), nx x ny. */
  readonly heights: Reals;
  /** Process time of the last hit that lowered each column (s), nx x ny. */
  readonly ages: Float32Array;
  /** Height of the deepest crack tip below each column (m), nx x ny. */
  readonly cracks: Float32Array;
  /**
   * Distance of each column beyond the place where the tool's edge begins to curve (m), nx x ny; 0 under the flat face.
   * Empty where the field has no edge.
   */
  readonly edges: Float32Array;
  /** Upper bound of the reachable height of each block (m), tile after tile, x fastest inside a tile. */
  readonly bounds: Reals;
  /**
   * 1 for blocks that are never magnified, ordered as `bounds`: near the tool's edge the laws have a length of their own.
   * Empty where the field has no edge.
   */
  readonly unscaled: Uint8Array;
  /** Sums of the step, SUMS per tile (indices below). */
  readonly sums: Float64Array;
  /** Hits by load, LOAD_BINS per tile, each for what it stands for, adding up over the whole cut. */
  readonly loads: Float64Array;
}

/** Per-tile sums of one step. Volumes in m3 as they are in the field (magnified ones included). */
export const SUM = {
  candidates: 0,
  engaged: 1,
  /** Impulse of all hits over one step, magnification included (N s). */
  impulse: 2,
  chips: 3,
  /** Volume credited to chips, and what overlap took of it. */
  credited: 4,
  overlap: 5,
  chipRemoved: 6,
  dentRemoved: 7,
  /** Taken by free impacts, spread evenly. */
  freeRemoved: 8,
  /** Removed by hits that struck under the flat face. */
  faceRemoved: 9,
  load: 10,
  /** Largest load (N), a maximum and not a sum. */
  largestLoad: 11,
  radius: 12,
  depth: 13,
  /** Hits the engaged ones stand for: each counts its magnification. */
  impacts: 14,
} as const;
export const SUMS = 15;

/** One row of step numbers per field, float64. */
export const STEP = {
  /** Height of the face at mid-step (m). */
  face: 0,
  /** Expected candidates per block when every grain of the law is long enough; at the wall per metre of gap. */
  lambda: 1,
  /** Lateral magnification M: areas grow by M, counts fall by M. */
  magnification: 2,
  /** Process time at the end of the step (s). */
  time: 3,
  step: 4,
  key0: 5,
  key1: 6,
  /** 1 when block bounds are to be renewed before the hits. */
  renew: 7,
  /** Even lowering by free impacts, applied when bounds are renewed, down to FREE_REACH below the face (m). */
  even: 8,
  /** Rows of the field that are open to hits (wall), or ny. */
  rows: 9,
  /** 0: field takes no hits this step. */
  active: 10,
} as const;
export const STEPS = 11;

/** Depth below the face, in largest grains, to which thrown grains lower the floor. */
export const FREE_REACH = 2;

/** Where candidates and candidates' second draws sit in the generator's counter. */
export const USE_HIT = 0;
export const USE_RUNOUT = 1;

/** Coefficients of the crater laws and the geometry of the grains (SI). */
export const COEFFICIENT = {
  largest: 0,
  edgeRadius: 1,
  /** c = radius P^(5/8) sqrt(1 - (P0/P)^(1/4)). */
  radius: 2,
  /** b = depth P^(1/2). */
  depth: 3,
  /** Reach of a dent with its lips = dentRadius P^(1/2). */
  dentRadius: 4,
  /** Load that chips the rim = chipLoad z^(3/2) times the site's factor. */
  chipLoad: 5,
  chipBreadth: 6,
  runout: 7,
  runoutLargest: 8,
  /** Share of the hits that debris does not shield: scales what leaves, not the load. */
  useful: 9,
  /** One hit in so many (1 or 4) takes a dent, of so many times the volume: dents that remove little are thinned. */
  dentEvery: 10,
} as const;
export const COEFFICIENTS = 11;

/** Six bits of a hit's mark thin the dents. */
export const DENT_MARKS = 64;

/** Channels of the hit table. */
export const HIT = { load: 0, impulse: 1, dent: 2, crack: 3 } as const;
export const HIT_CHANNELS = 4;

export interface KernelTables {
  readonly coefficients: Float64Array;
  /** Grains longer than g over the fresh grains that came in, at g = k largest / (n - 1). */
  readonly tail: Float32Array;
  /** Grain diameter whose tail is p: 64 entries per octave of p, from 2^-32 to 1 (m). */
  readonly grain: Float32Array;
  /** Load (N), impulse (N s), dent volume that leaves (m3), radial crack (m) over (diameter, overlap), overlap fastest. */
  readonly hits: Float32Array;
  readonly hitDiameters: number;
  readonly hitOverlaps: number;
  /** Chance that a chip leaves, over the diameter, at d = k largest / (n - 1). */
  readonly detach: Float32Array;
  /** Threshold loads at 1024 equally likely quantiles (N). */
  readonly thresholds: Float32Array;
  /** Run-out at 1024 equally likely quantiles (m). */
  readonly runouts: Float32Array;
  /** ln(1 + k/1024), k = 0..1024. */
  readonly logs: Float64Array;
}

export const GRAIN_BINS_PER_OCTAVE = 64;
export const GRAIN_OCTAVES = 32;
export const QUANTILES = 1024;

/** The rim: chip depth down the wall along the running arc length, and each site's factor on the chip load. */
export interface Rim {
  readonly n: number;
  readonly spacing: number;
  /** Chip depth (m), n. */
  readonly chips: Float32Array;
  readonly siteFactors: Float32Array;
  /** Cells that share one site factor. */
  readonly cellsPerSite: number;
}

/**
 * One implementation. Guarantees, held by one spec for all of them: heights never rise; a tile changes columns at most
 * `largest chip radius` beyond itself; sums are overwritten, load counts added; credited = chipRemoved + overlap to
 * rounding; the same arguments give the same bits.
 */
export interface Kernel {
  readonly name: string;
  /** Hits one tile of a floor or strip. `step` is the field's row of STEP numbers. */
  hitFloor(field: Field, tables: KernelTables, step: Float64Array, tile: number): void;
  /** Hits one tile of a wall and chips the rim. */
  hitWall(field: Field, tables: KernelTables, step: Float64Array, tile: number, rim: Rim): void;
}
