import { ALL_EMPTY, ALL_SOLID, BRICK_VOXELS, type BrickField } from '#src/voxel/bricks.ts';

/**
 * Voxel fields of closed forms, for tests and for looking at pictures before there is a cut. A form is a function that
 * is negative in the removed work and positive in the solid, in metres, changing by at most 1 (m/m) in any direction.
 */
export type Form = (x: number, y: number, z: number) => number;

export interface FieldSize {
  readonly nx: number;
  readonly ny: number;
  readonly nz: number;
  readonly pitch: number;
}

/** 3.2 x 3.2 x 1.04 mm at 5 um. */
export const DEMO_SIZE: FieldSize = { nx: 640, ny: 640, nz: 208, pitch: 5e-6 };

export interface Marks {
  /** Damage 0..255 at a depth (m) beneath the surface. */
  readonly damage?: (x: number, y: number, z: number, beneath: number) => number;
  readonly age?: (x: number, y: number, z: number) => number;
  /** How deep damage reaches at most (m): bricks are stored that far from the surface. */
  readonly reach?: number;
}

interface Brick {
  readonly solid: Uint8Array;
  readonly damage: Uint8Array;
  readonly age: Uint8Array;
}

function fillBrick(form: Form, marks: Marks, corner: readonly [number, number, number], pitch: number): Brick {
  const brick = {
    solid: new Uint8Array(BRICK_VOXELS),
    damage: new Uint8Array(BRICK_VOXELS),
    age: new Uint8Array(BRICK_VOXELS),
  };
  for (let n = 0; n < BRICK_VOXELS; n++) {
    const x = corner[0] + pitch * (n & 7);
    const y = corner[1] + pitch * ((n >> 3) & 7);
    const z = corner[2] + pitch * (n >> 6);
    const distance = form(x, y, z);
    brick.solid[n] = Math.round(255 * Math.min(1, Math.max(0, 0.5 + distance / pitch)));
    brick.damage[n] = distance > -pitch ? (marks.damage?.(x, y, z, Math.max(0, distance)) ?? 0) : 0;
    brick.age[n] = Math.abs(distance) < 2 * pitch ? (marks.age?.(x, y, z) ?? 0) : 0;
  }
  return brick;
}

/** Centres the field on x = y = 0 with its top at z = 0 and fills it from the form. */
export function bricksOf(form: Form, size: FieldSize = DEMO_SIZE, marks: Marks = {}): BrickField {
  const { nx, ny, nz, pitch } = size;
  const x0 = -pitch * (nx / 2 - 0.5);
  const y0 = -pitch * (ny / 2 - 0.5);
  const z0 = pitch / 2;
  const table = new Int32Array((nx >> 3) * (ny >> 3) * (nz >> 3));
  const bricks: Brick[] = [];
  const half = 3.5 * pitch;
  const near = half * Math.sqrt(3) + pitch;
  for (let b = 0; b < table.length; b++) {
    const i = (b % (nx >> 3)) * 8;
    const j = (Math.floor(b / (nx >> 3)) % (ny >> 3)) * 8;
    const k = Math.floor(b / ((nx >> 3) * (ny >> 3))) * 8;
    const corner = [x0 + pitch * i, y0 + pitch * j, z0 + pitch * k] as const;
    const distance = form(corner[0] + half, corner[1] + half, corner[2] + half);
    if (distance > near + (marks.reach ?? 0)) table[b] = ALL_SOLID;
    else if (distance < -near) table[b] = ALL_EMPTY;
    else {
      table[b] = bricks.length;
      bricks.push(fillBrick(form, marks, corner, pitch));
    }
  }
  const gather = (part: keyof Brick): Uint8Array => {
    const all = new Uint8Array(bricks.length * BRICK_VOXELS);
    bricks.forEach((brick, n) => {
      all.set(brick[part], n * BRICK_VOXELS);
    });
    return all;
  };
  const count = bricks.length;
  return {
    nx,
    ny,
    nz,
    pitch,
    x0,
    y0,
    z0,
    table,
    count,
    solid: gather('solid'),
    damage: gather('damage'),
    age: gather('age'),
  };
}

/** A ball of radius r about (0, 0, centre). */
export function sphereCap(radius: number, centre = 0): Form {
  return (x, y, z) => Math.sqrt(x * x + y * y + (z - centre) ** 2) - radius;
}

/** A cone with its tip down: radius r at the entry face, tip at depth. */
export function cone(radius: number, depth: number): Form {
  const slant = Math.sqrt(radius * radius + depth * depth);
  return (x, y, z) => ((Math.sqrt(x * x + y * y) - radius * (1 - z / depth)) * depth) / slant;
}

/** A straight-walled pocket with sharp corners. */
export function boxPocket(length: number, width: number, depth: number): Form {
  return (x, y, z) => Math.max(Math.abs(x) - length / 2, Math.abs(y) - width / 2, z - depth);
}

/** Uniform numbers in [0, 1) from a 32-bit state: the generator mulberry32, good enough for bumps. */
export function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** Shallow overlapping dents on a square of edge `span`: depth (m) of the deepest dent at each cell, n x n. */
export function dents(n: number, span: number, count: number, seed: number): Float32Array {
  const random = seeded(seed);
  const depth = new Float32Array(n * n);
  const cell = span / n;
  for (let d = 0; d < count; d++) {
    const cx = random() * n;
    const cy = random() * n;
    const radius = (8e-6 + 26e-6 * random() ** 2) / cell;
    const deep = 0.24 * radius * cell * (0.5 + 0.5 * random());
    const shift = 3.0e-6 * (random() - 0.5);
    for (let j = Math.max(0, Math.floor(cy - radius)); j < Math.min(n, cy + radius + 1); j++) {
      for (let i = Math.max(0, Math.floor(cx - radius)); i < Math.min(n, cx + radius + 1); i++) {
        const s = ((i - cx) ** 2 + (j - cy) ** 2) / (radius * radius);
        if (s >= 1) continue;
        const at = j * n + i;
        depth[at] = Math.max(depth[at] as number, shift + deep * (1 - s));
      }
    }
  }
  return depth;
}

function bilinear(map: Float32Array, n: number, u: number, v: number): number {
  const i = Math.min(n - 2, Math.max(0, Math.floor(u)));
  const j = Math.min(n - 2, Math.max(0, Math.floor(v)));
  const a = Math.min(1, Math.max(0, u - i));
  const b = Math.min(1, Math.max(0, v - j));
  const at = j * n + i;
  const top = (map[at] as number) * (1 - a) + (map[at + 1] as number) * a;
  return top * (1 - b) + ((map[at + n] as number) * (1 - a) + (map[at + n + 1] as number) * a) * b;
}

export interface DemoPocket {
  readonly diameter: number;
  readonly depth: number;
  /** tan of the wall's lean. */
  readonly taper: number;
  readonly cornerRadius: number;
  readonly seed: number;
}

export const DEMO_POCKET: DemoPocket = {
  diameter: 2.6e-3,
  depth: 0.64e-3,
  taper: Math.tan((0.42 * Math.PI) / 180),
  cornerRadius: 62e-6,
  seed: 1,
};

interface Chip {
  readonly x: number;
  readonly y: number;
  readonly radius: number;
  readonly drop: number;
}

/** Scallops round the rim; the widest is `largest` (m) wide. */
export function rimChips(pocket: DemoPocket, count: number, largest: number): Chip[] {
  const random = seeded(pocket.seed + 77);
  const chips: Chip[] = [];
  for (let n = 0; n < count; n++) {
    const angle = 2 * Math.PI * random();
    const width = n === 0 ? largest : largest * (0.12 + 0.6 * random() ** 4);
    const radius = 1.3 * width;
    const at = n === 0 ? (2 * Math.PI * 116) / 360 : angle;
    const r = pocket.diameter / 2 + width - radius;
    chips.push({ x: r * Math.cos(at), y: r * Math.sin(at), radius, drop: 0.42 });
  }
  return chips;
}

/** Distance-like field of the nearest scallop, an oblate ball about a point of the entry face. */
function chipForm(chips: readonly Chip[], x: number, y: number, z: number): number {
  let nearest = Number.POSITIVE_INFINITY;
  for (const chip of chips) {
    const d = Math.sqrt((x - chip.x) ** 2 + (y - chip.y) ** 2 + (z / chip.drop) ** 2) - chip.radius;
    if (d < nearest) nearest = d;
  }
  return nearest * 0.42;
}

/** A tapered round pocket with rough floor and wall, corner fillet and chipped rim. */
export function pocketForm(pocket: DemoPocket = DEMO_POCKET): Form {
  const { depth, taper, cornerRadius: fillet } = pocket;
  const n = 900;
  const span = 1.23 * pocket.diameter;
  const perArea = (pocket.diameter / DEMO_POCKET.diameter) ** 2;
  const floor = dents(n, span, Math.round(34000 * perArea), pocket.seed);
  const wall = dents(n, span, Math.round(22000 * perArea), pocket.seed + 1);
  const chips = rimChips(pocket, 150, 54e-6);
  const bySector: Chip[][] = Array.from({ length: 64 }, () => []);
  const sector = (x: number, y: number): number => Math.floor(((Math.atan2(y, x) / Math.PI + 1) / 2) * 64) & 63;
  for (const chip of chips) {
    const s = sector(chip.x, chip.y);
    for (const near of [s + 63, s, s + 1]) (bySector[near & 63] as Chip[]).push(chip);
  }
  const lean = 1 / Math.sqrt(1 + taper * taper);
  return (x, y, z) => {
    const r = Math.sqrt(x * x + y * y);
    const edge = pocket.diameter / 2 - taper * z;
    let side = (r - edge) * lean;
    let below = z - depth;
    if (side > -60e-6 && side < 30e-6) {
      const along = ((Math.atan2(y, x) / Math.PI + 1) / 2) * 2 * (n - 1);
      side -= 0.5 * bilinear(wall, n, along % (n - 1), ((z + 1e-4) / span) * n * 0.8);
    }
    if (below > -60e-6 && below < 30e-6) below -= bilinear(floor, n, (x / span + 0.5) * n, (y / span + 0.5) * n);
    let inside = Math.max(side, below);
    if (side > -fillet && below > -fillet) inside = Math.sqrt((side + fillet) ** 2 + (below + fillet) ** 2) - fillet;
    if (z > 60e-6 || Math.abs(side) > 120e-6) return inside;
    return Math.min(inside, chipForm(bySector[sector(x, y)] as Chip[], x, y, z));
  };
}

/** The demo pocket with damage that reaches 15 to 45 um and ages in patches. */
export function demoField(size: FieldSize = DEMO_SIZE, pocket: DemoPocket = DEMO_POCKET): BrickField {
  const patches = dents(200, 3.2e-3, 9000, pocket.seed + 5);
  const reachAt = (x: number, y: number, z: number): number => {
    const onWall = Math.sqrt(x * x + y * y) > pocket.diameter / 2 - pocket.cornerRadius;
    const along = onWall ? (Math.atan2(y, x) / Math.PI + 1) * 0.99 : x / 3.2e-3 + 0.5;
    const across = onWall ? z / 3.2e-3 : y / 3.2e-3 + 0.5;
    const patch = bilinear(patches, 200, (along % 1) * 200, across * 200);
    return 12e-6 + 5 * Math.max(0, patch);
  };
  return bricksOf(pocketForm(pocket), size, {
    reach: 50e-6,
    damage: (x, y, z, beneath) => {
      const reach = reachAt(x, y, z);
      return beneath >= reach ? 0 : Math.round(255 * Math.min(1, 1.6 * (1 - beneath / reach)));
    },
    age: (x, y, z) => Math.round(Math.min(255, 60 + (reachAt(x, y, z) - 12e-6) * 6e6)),
  });
}

/** The union of what several forms remove. */
export function together(...forms: readonly Form[]): Form {
  return (x, y, z) => Math.min(...forms.map((form) => form(x, y, z)));
}

/** A form moved across. */
export function moved(form: Form, dx: number, dy: number): Form {
  return (x, y, z) => form(x - dx, y - dy, z);
}

/** A round hole with a flat floor. */
export function roundHole(radius: number, depth: number): Form {
  return (x, y, z) => Math.max(Math.sqrt(x * x + y * y) - radius, z - depth);
}

/** A large round hole with a smaller one running ahead of it. */
export function steppedHole(large: readonly [number, number], pilot: readonly [number, number]): Form {
  return together(roundHole(...large), roundHole(...pilot));
}

/** Scallops round the rim of a hole, on the face z = `face`; the widest, at `at` (rad), is `largest` (m) wide. */
export function scallops(radius: number, face: number, largest: number, at = 0): Form {
  const random = seeded(5);
  const chips = Array.from({ length: 60 }, (_, n): Chip => {
    const width = n === 0 ? largest : largest * (0.1 + 0.6 * random() ** 3);
    const angle = n === 0 ? at : 2 * Math.PI * random();
    const ball = 1.3 * width;
    const r = radius + width - ball;
    return { x: r * Math.cos(angle), y: r * Math.sin(angle), radius: ball, drop: 0.42 };
  });
  return (x, y, z) => {
    const rim = Math.abs(Math.sqrt(x * x + y * y) - radius);
    if (rim > 3 * largest || Math.abs(z - face) > 2 * largest) return Math.max(rim - largest, largest) * 0.42;
    return chipForm(chips, x, y, z - face);
  };
}

/** A hole through a plate, chipped at both faces. Below the plate there is air, or work where `backed`. */
export function throughHole(
  hole: { readonly radius: number; readonly thickness: number; readonly exitChip: number },
  backed: boolean,
): Form {
  const { radius, thickness, exitChip } = hole;
  const bore = roundHole(radius, backed ? thickness : 2 * thickness);
  const chips = [scallops(radius, 0, 0.5 * exitChip, 2), scallops(radius, thickness, exitChip)];
  const pierced = together(bore, ...chips);
  if (!backed) return (x, y, z) => Math.min(pierced(x, y, z), thickness - z);
  return (x, y, z) => Math.max(pierced(x, y, z), z - thickness);
}

/** Shallow dents on everything a form removes: `depth` (m) at most. */
export function roughened(form: Form, depth = 6e-6): Form {
  const n = 256;
  const span = 1e-3;
  const map = dents(n, span, 9000, 11);
  const share = depth / 15e-6;
  const wrap = (value: number): number => ((((value / span) % 1) + 1) % 1) * (n - 1);
  return (x, y, z) => {
    const at = form(x, y, z);
    if (Math.abs(at) > 40e-6) return at;
    return at - 0.6 * share * bilinear(map, n, wrap(x + 0.7 * y + 0.3 * z), wrap(z + 0.4 * y - 0.2 * x));
  };
}
