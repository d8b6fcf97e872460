import { type Field, LOAD_BINS, OUT_OF_REACH, type Reals, type Rim, SUMS } from './kernels/contract.ts';

/** How memory is come by: plain, or shared between threads. */
export type Allocate = (bytes: number) => ArrayBufferLike;

export const allocatePlain: Allocate = (bytes) => new ArrayBuffer(bytes);

/** What a field is made from. */
export interface FieldSpec {
  readonly nx: number;
  readonly ny: number;
  readonly dx: number;
  readonly dy: number;
  readonly tile: number;
  readonly block: number;
  readonly periodicX: boolean;
  readonly periodicY: boolean;
  /** With per-column edge distances (the floor has them, strip and wall do not). */
  readonly edged: boolean;
  /** Bits of a height: 32, or 64 for the reference kernel. */
  readonly precision: 32 | 64;
}

const MAGIC = 0x53504c46;
const VERSION = 1;
/** Header of a field's buffer: 8 int32 then 2 float64. */
const HEADER_BYTES = 48;

const align = (bytes: number) => Math.ceil(bytes / 16) * 16;

function layout(spec: FieldSpec) {
  const columns = spec.nx * spec.ny;
  const tiles = (spec.nx / spec.tile) * (spec.ny / spec.tile);
  const blocks = columns / (spec.block * spec.block);
  const real = spec.precision / 8;
  const sizes = {
    heights: columns * real,
    ages: columns * 4,
    cracks: columns * 4,
    edges: spec.edged ? columns * 4 : 0,
    bounds: blocks * real,
    unscaled: spec.edged ? blocks : 0,
    sums: tiles * SUMS * 8,
    loads: tiles * LOAD_BINS * 8,
  };
  let offset = HEADER_BYTES;
  const offsets = {} as Record<keyof typeof sizes, number>;
  for (const name of Object.keys(sizes) as (keyof typeof sizes)[]) {
    offsets[name] = offset;
    offset = align(offset + sizes[name]);
  }
  return { columns, tiles, blocks, offsets, bytes: offset };
}

/** Bytes a field takes (ages, cracks, bounds and sums included). */
export function fieldBytes(spec: FieldSpec): number {
  return layout(spec).bytes;
}

/**
 * Makes a field in one buffer: header, then heights, ages, cracks, edges, bounds, sums and load counts. Heights, ages and
 * cracks start at `height`, 0 and `height` (m, s, m); bounds are to be renewed before the first hit.
 * @throws RangeError when a side is not a whole number of tiles, or a periodic side not an even one.
 */
export function makeField(spec: FieldSpec, height: number, allocate: Allocate): ArrayBufferLike {
  const whole = spec.nx % spec.tile === 0 && spec.ny % spec.tile === 0;
  if (!whole) throw new RangeError('a field is a whole number of tiles each way');
  // a periodic side of one tile only meets itself
  const meets = (n: number, periodic: boolean) => periodic && n !== spec.tile && n % (2 * spec.tile) !== 0;
  if (meets(spec.nx, spec.periodicX) || meets(spec.ny, spec.periodicY)) {
    throw new RangeError(
      'a periodic side is one tile or an even number of them, or two tiles of one colour would meet',
    );
  }
  const buffer = allocate(fieldBytes(spec));
  const ints = new Int32Array(buffer, 0, 8);
  const flags = (spec.periodicX ? 1 : 0) | (spec.periodicY ? 2 : 0) | (spec.edged ? 4 : 0);
  ints.set([MAGIC, VERSION, spec.nx, spec.ny, spec.block, spec.precision, flags, spec.tile]);
  new Float64Array(buffer, 32, 2).set([spec.dx, spec.dy]);
  const field = fieldFrom(buffer);
  field.heights.fill(height);
  field.cracks.fill(height);
  field.bounds.fill(height === OUT_OF_REACH ? OUT_OF_REACH : height);
  return buffer;
}

/**
 * Views a field's buffer without copying.
 * @throws RangeError when it is not a field's buffer, of another version, or cut short.
 */
export function fieldFrom(buffer: ArrayBufferLike): Field {
  if (buffer.byteLength < HEADER_BYTES) throw new RangeError('the buffer is too short to hold a field');
  const [magic, version, nx, ny, block, precision, flags, tile] = new Int32Array(buffer, 0, 8) as unknown as number[];
  if (magic !== MAGIC) throw new RangeError('the buffer does not hold a field');
  if (version !== VERSION) throw new RangeError(`field version ${version}, this program reads ${VERSION}`);
  const [dx, dy] = new Float64Array(buffer, 32, 2) as unknown as number[];
  const spec = {
    nx,
    ny,
    dx,
    dy,
    tile,
    block,
    precision,
    periodicX: ((flags as number) & 1) !== 0,
    periodicY: ((flags as number) & 2) !== 0,
    edged: ((flags as number) & 4) !== 0,
  } as FieldSpec;
  const { columns, tiles, blocks, offsets, bytes } = layout(spec);
  if (buffer.byteLength < bytes) throw new RangeError('the field buffer is cut short');
  const reals = (offset: number, length: number): Reals =>
    precision === 64 ? new Float64Array(buffer, offset, length) : new Float32Array(buffer, offset, length);
  return {
    nx: spec.nx,
    ny: spec.ny,
    dx: spec.dx,
    dy: spec.dy,
    tile: spec.tile,
    tilesX: spec.nx / spec.tile,
    tilesY: spec.ny / spec.tile,
    block: spec.block,
    periodicX: spec.periodicX,
    periodicY: spec.periodicY,
    heights: reals(offsets.heights, columns),
    ages: new Float32Array(buffer, offsets.ages, columns),
    cracks: new Float32Array(buffer, offsets.cracks, columns),
    edges: new Float32Array(buffer, offsets.edges, spec.edged ? columns : 0),
    bounds: reals(offsets.bounds, blocks),
    unscaled: new Uint8Array(buffer, offsets.unscaled, spec.edged ? blocks : 0),
    sums: new Float64Array(buffer, offsets.sums, tiles * SUMS),
    loads: new Float64Array(buffer, offsets.loads, tiles * LOAD_BINS),
  };
}

/** Makes the rim's arrays in one buffer: chips, then site factors. */
export function makeRim(n: number, spacing: number, cellsPerSite: number, allocate: Allocate): ArrayBufferLike {
  const sites = Math.ceil(n / cellsPerSite);
  const buffer = allocate(32 + 4 * (n + sites));
  new Int32Array(buffer, 0, 2).set([n, cellsPerSite]);
  new Float64Array(buffer, 8, 1)[0] = spacing;
  return buffer;
}

/** Views a rim's buffer without copying. */
export function rimFrom(buffer: ArrayBufferLike): Rim {
  const [n, cellsPerSite] = new Int32Array(buffer, 0, 2) as unknown as [number, number];
  const sites = Math.ceil(n / cellsPerSite);
  return {
    n,
    cellsPerSite,
    spacing: new Float64Array(buffer, 8, 1)[0] as number,
    chips: new Float32Array(buffer, 32, n),
    siteFactors: new Float32Array(buffer, 32 + 4 * n, sites),
  };
}
