import { makeOutline, type Outline } from '#src/base/outline.ts';
import { riseOf, type ToolFace } from '#src/physics/tool-face.ts';
import { type Chord, chordsAt } from './plane.ts';
import { strokesAbove } from './through.ts';

/** The tool's outline in the cutting plane. */

export interface ToolOutline {
  /** Width where the cut meets it, as new (m); of the part that is dimensioned where there are several. */
  readonly width: number;
  /** Middle of the width (m). */
  readonly centre: number;
  /** Depth of its tip below the entry face (m). */
  readonly faceDepth: number;
  /** Radius of its edge now (m). */
  readonly edgeRadius: number;
  /** Length lost to wear (m). */
  readonly worn: number;
  /** Radius of its edge when new (m). */
  readonly newEdgeRadius: number;
  /** Lost per side, at the edge (m), and the height over which that falls by e (m; left out, the same all the way up). */
  readonly sideLoss?: number;
  readonly sideDecay?: number;
  /** What the plane cuts of it; left out, one flat part of the width above. */
  readonly parts?: readonly ToolPart[];
}

/** One part of a tool in the cutting plane (m). */
export interface ToolPart extends Chord {
  /** Its face from left to right: x0, rise0, x1, rise1, ... behind the tip (m); left out, flat. */
  readonly face?: ArrayLike<number>;
  /** Pilots that run ahead of the face by `step` (m), each with an edge of its own; of a stepped face. */
  readonly pilots?: readonly Chord[];
  readonly step?: number;
  /** Ends at a bore: no rounded edge there. */
  readonly boreFrom?: boolean;
  readonly boreTo?: boolean;
}

/** A round passage through the tool (m). */
export interface Passage {
  readonly x: number;
  readonly y: number;
  readonly radius: number;
}

const ARC_STEPS = 8;
const FACE_STEPS = 96;
const FLANK_STEPS = 8;

function withoutBores(chord: Chord, y: number, bores: readonly Passage[]): ToolPart[] {
  let parts: ToolPart[] = [chord];
  for (const bore of bores) {
    const half = Math.sqrt(Math.max(0, bore.radius ** 2 - (y - bore.y) ** 2));
    if (half === 0) continue;
    const [left, right] = [bore.x - half, bore.x + half];
    parts = parts.flatMap((part) => {
      if (right <= part.from || left >= part.to) return [part];
      const pieces: ToolPart[] = [];
      if (left > part.from) pieces.push({ ...part, to: left, boreTo: true });
      if (right < part.to) pieces.push({ ...part, from: right, boreFrom: true });
      return pieces;
    });
  }
  return parts;
}

/** A part with its face; a flat one stays as it is. */
function withFace(part: ToolPart, face: ToolFace, y: number): ToolPart {
  if (face.kind === 'flat') return part;
  if (face.kind === 'stepped') {
    const pilots = chordsAt(makeOutline(face.pilot), y)
      .map(({ from, to }) => ({ from: Math.max(part.from, from), to: Math.min(part.to, to) }))
      .filter(({ from, to }) => to > from);
    return { ...part, pilots, step: face.step };
  }
  const rise = riseOf(face);
  const at = Array.from({ length: FACE_STEPS + 1 }, (_, n) => part.from + (n / FACE_STEPS) * (part.to - part.from));
  // the tip itself, which even steps may miss
  if (part.from < 0 && part.to > 0) at.push(0);
  return { ...part, face: at.sort((a, b) => a - b).flatMap((x) => [x, rise(x, y)]) };
}

/** What the plane y cuts of a tool with this outline, face and bores. */
export function toolParts(outline: Outline, face: ToolFace, y: number, bores: readonly Passage[] = []): ToolPart[] {
  return chordsAt(outline, y)
    .flatMap((chord) => withoutBores(chord, y, bores))
    .map((part) => withFace(part, face, y));
}

interface Edge {
  readonly radius: number;
  /** Radius at either end; 0 at a bore. */
  readonly left: number;
  readonly right: number;
}

/** How far the rounded edge stands back at a distance inside the flank (m). */
function setBack(radius: number, inside: number): number {
  if (inside >= radius) return 0;
  const way = radius - Math.max(0, inside);
  return radius - Math.sqrt(Math.max(0, radius * radius - way * way));
}

/** Places across the part at which its face is drawn: those given, and the chords of its rounded edges. */
function stations(part: ToolPart, edge: Edge): number[] {
  const at: number[] = [];
  const { face = [part.from, 0, part.to, 0] } = part;
  for (let n = 0; n < face.length; n += 2) at.push(Math.min(part.to, Math.max(part.from, face[n] as number)));
  for (let n = 1; n <= ARC_STEPS; n++) {
    const way = 1 - Math.cos((n / ARC_STEPS) * (Math.PI / 2));
    if (edge.left > 0) at.push(part.from + edge.left * way);
    if (edge.right > 0) at.push(part.to - edge.right * way);
  }
  return at.filter((x) => x >= part.from && x <= part.to).sort((a, b) => a - b);
}

function riseAlong({ face }: ToolPart, x: number): number {
  if (face === undefined) return 0;
  let n = 0;
  while (n + 4 < face.length && (face[n + 2] as number) < x) n += 2;
  const [x0, z0, x1, z1] = [face[n], face[n + 1], face[n + 2], face[n + 3]] as [number, number, number, number];
  return x1 > x0 ? z0 + Math.min(1, Math.max(0, (x - x0) / (x1 - x0))) * (z1 - z0) : z0;
}

/** A face without steps, edge to edge. */
function smoothPoints(part: ToolPart, edge: Edge, tip: number): number[] {
  return stations(part, edge).flatMap((x) => {
    const back = Math.max(setBack(edge.left, x - part.from), setBack(edge.right, part.to - x));
    return [x, tip - riseAlong(part, x) - back];
  });
}

function facePoints(part: ToolPart, edge: Edge, tip: number): number[] {
  const { pilots, step = 0, from, to } = part;
  if (pilots === undefined) return smoothPoints(part, edge, tip);
  const points: number[] = [];
  let at = from;
  for (const pilot of pilots) {
    const left = pilot.from > from ? edge.radius : edge.left;
    const right = pilot.to < to ? edge.radius : edge.right;
    const first = at === from ? edge.left : 0;
    if (pilot.from > at)
      points.push(...smoothPoints({ from: at, to: pilot.from }, { ...edge, left: first, right: 0 }, tip - step));
    points.push(...smoothPoints(pilot, { ...edge, left, right }, tip));
    at = pilot.to;
  }
  const first = at === from ? edge.left : 0;
  if (at < to) points.push(...smoothPoints({ from: at, to }, { ...edge, left: first }, tip - step));
  return points;
}

/** Cuts a line of points off above z = `top` (m) at both ends. */
function belowTop(points: readonly number[], top: number): number[] {
  let first = 0;
  let last = points.length - 2;
  while (first < last && (points[first + 1] as number) < top) first += 2;
  while (last > first && (points[last + 1] as number) < top) last -= 2;
  const meet = (inside: number, outside: number): number[] => {
    const [x0, z0, x1, z1] = [points[outside], points[outside + 1], points[inside], points[inside + 1]] as number[] as [
      number,
      number,
      number,
      number,
    ];
    return z1 === z0 ? [x0, top] : [x0 + ((top - z0) / (z1 - z0)) * (x1 - x0), top];
  };
  return [
    ...(first > 0 ? meet(first, first - 2) : []),
    ...points.slice(first, last + 2),
    ...(last < points.length - 2 ? meet(last, last + 2) : []),
  ];
}

/** The side from the face up to z = `top`, as worn: x0, z0, ... from the top down (m). `outward` is -1 at the left. */
function flank(tool: ToolOutline, foot: readonly [number, number], top: number, outward: number): number[] {
  const [x, z] = foot;
  const loss = tool.sideLoss ?? 0;
  if (z <= top) return [];
  const decay = tool.sideDecay;
  if (loss === 0 || decay === undefined) return [x, top];
  const points: number[] = [];
  for (let n = 0; n < FLANK_STEPS; n++) {
    const height = (1 - n / FLANK_STEPS) ** 2 * (z - top);
    points.push(x + outward * loss * (1 - Math.exp(-height / decay)), z - height);
  }
  return points;
}

function partProfile(tool: ToolOutline, part: ToolPart, top: number, state: 'worn' | 'new'): Float64Array {
  const worn = state === 'worn';
  const loss = worn ? (tool.sideLoss ?? 0) : 0;
  const given = Math.max(0, worn ? tool.edgeRadius : tool.newEdgeRadius);
  const left = part.boreFrom ? 0 : loss;
  const right = part.boreTo ? 0 : loss;
  const kept = { ...part, from: part.from + left, to: part.to - right };
  const radius = Math.min((kept.to - kept.from) / 2, given);
  const edge = { radius, left: part.boreFrom ? 0 : radius, right: part.boreTo ? 0 : radius };
  const tip = worn ? tool.faceDepth : tool.faceDepth + tool.worn;
  const face = belowTop(facePoints(kept, edge, tip), top);
  const end = face.length - 2;
  const sided = worn ? tool : { ...tool, sideLoss: 0 };
  const rightSide = flank(
    part.boreTo ? { ...sided, sideLoss: 0 } : sided,
    [face[end], face[end + 1]] as [number, number],
    top,
    1,
  );
  const up: number[] = [];
  for (let n = rightSide.length - 2; n >= 0; n -= 2) up.push(rightSide[n] as number, rightSide[n + 1] as number);
  const down = flank(
    part.boreFrom ? { ...sided, sideLoss: 0 } : sided,
    [face[0], face[1]] as [number, number],
    top,
    -1,
  );
  return Float64Array.from([...down, ...face, ...up]);
}

/** The parts of a tool; one flat part where none are given. */
export function partsOf(tool: ToolOutline): readonly ToolPart[] {
  return tool.parts ?? [{ from: tool.centre - tool.width / 2, to: tool.centre + tool.width / 2 }];
}

/**
 * Each part's outline (x0, z0, x1, z1, ... in m): down the left flank from z = `top`, across the face, up the right flank.
 * A face that reaches above `top` ends there.
 */
export function toolProfiles(tool: ToolOutline, top: number, state: 'worn' | 'new' = 'worn'): Float64Array[] {
  return partsOf(tool).map((part) => partProfile(tool, part, top, state));
}

/** Where a profile's left or right side stands at a depth (m); its end where it does not reach there. */
export function sideAt(profile: ArrayLike<number>, z: number, side: 'left' | 'right'): number {
  const count = profile.length / 2;
  const at = (n: number): number => 2 * (side === 'left' ? n : count - 1 - n);
  for (let n = 0; n + 1 < count; n++) {
    const [x0, z0] = [profile[at(n)], profile[at(n) + 1]] as [number, number];
    const [x1, z1] = [profile[at(n + 1)], profile[at(n + 1) + 1]] as [number, number];
    if (z0 <= z && z1 >= z && z1 > z0) return x0 + ((z - z0) / (z1 - z0)) * (x1 - x0);
  }
  return profile[at(0)] as number;
}

/** Lines (x0, z0, ... each, m) of a cavity as drawn: what a tool of these parts, new and sharp, leaves at this depth. */
export function nominalLines(parts: readonly ToolPart[], depth: number, thickness?: number): number[][] {
  const sharp = { width: 0, centre: 0, faceDepth: depth, edgeRadius: 0, worn: 0, newEdgeRadius: 0, parts };
  const profiles = toolProfiles(sharp, 0);
  if (thickness === undefined) return profiles.map((profile) => Array.from(profile));
  return profiles.flatMap((profile) => {
    const { lines } = strokesAbove(profile, thickness, { from: 0, to: 0 });
    return lines.map((line) => [...line]);
  });
}

/** What a tool has taken out of a backing from z = `thickness` on: as its profiles, ending `into` deep. */
export function recessProfiles(tool: ToolOutline, thickness: number, into: number): Float64Array[] {
  if (!(into > 0)) return [];
  const sunk = toolProfiles({ ...tool, faceDepth: thickness + into }, thickness);
  return sunk.filter((profile) => profile.some((z, n) => n % 2 === 1 && z > thickness));
}
