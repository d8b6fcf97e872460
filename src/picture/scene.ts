import { makeOutline, type Outline, type OutlineSpec, offsetSpec } from '#src/base/outline.ts';
import { entrySizeDepth, floorSizeDepth } from '#src/metrology/taper.ts';
import type { ToolFace } from '#src/physics/tool-face.ts';
import { type Chord, chordsAt, islandsAt, sectionPlane } from './plane.ts';
import { openAt } from './through.ts';
import { nominalLines, type Passage, type ToolPart, toolParts } from './tool.ts';

/** What a cut is, for pictures of it in section. SI. */
export interface CutSubject {
  readonly cavity: OutlineSpec;
  /** Of the pass that is shown. */
  readonly tool: OutlineSpec;
  readonly face: ToolFace;
  readonly bores: readonly Passage[];
  /** Depth wanted, to the tip (m). */
  readonly depth: number;
  /** Thickness of the work where the cavity goes through it (m). */
  readonly through?: number;
}

/** What the plane of the section cuts of cavity and tool, as drawn. */
export interface Scene {
  /** Where the plane lies (y, m). */
  readonly plane: number;
  /** The dimensioned island is round, so that sizes carry the diameter sign. */
  readonly round: boolean;
  readonly islands: readonly Chord[];
  /** The tool's part that is dimensioned, bores passed over, and all parts. */
  readonly toolChord: Chord;
  readonly toolParts: readonly ToolPart[];
  /** Size of the dimensioned island on the entry face, and the outlines of the cavity. */
  readonly nominalSize: number;
  readonly nominalLines: readonly (readonly number[])[];
  /** The floor is no plane. */
  readonly shaped: boolean;
  /** Height of the wall above such a floor (m), zero or less where the floor's form meets the entry face. */
  readonly wall: number;
  /** That is wall enough for the sizes and the taper measured of it. */
  readonly walled: boolean;
  /** How far a pilot runs ahead (m). */
  readonly step?: number;
  /** Sizes are read off the section: those of the whole outline are not the island's in this plane. */
  readonly bySection: boolean;
}

/** Tolerance for arcs of one circle (m). */
const SAME = 1e-9;

function isRound(outline: Outline, chord: Chord, y: number): boolean {
  return outline.loops.some(({ segments, hole }) => {
    const [first] = segments;
    if (hole || first?.kind !== 'arc') return false;
    const { cx, cy, radius } = first;
    const one = segments.every(
      (s) => s.kind === 'arc' && Math.abs(s.cx - cx) + Math.abs(s.cy - cy) + Math.abs(s.radius - radius) < SAME,
    );
    const middle = (chord.from + chord.to) / 2;
    return one && Math.abs(cx - middle) < radius / 2 && Math.abs(cy - y) < radius / 2;
  });
}

/** The face a cavity of the drawing has where the tool is smaller by `gap` per side. */
function grownFace(face: ToolFace, gap: number): ToolFace {
  if (face.kind === 'sphere') return { ...face, radius: face.radius + Math.max(0, gap) };
  if (face.kind !== 'stepped' || face.pilot.kind === 'path') return face;
  return { ...face, pilot: offsetSpec(face.pilot, gap) };
}

/** Whether the sizes of a whole outline are those of its section. */
function sizedWhole(spec: OutlineSpec): boolean {
  return spec.kind !== 'path' && !(spec.kind === 'regularPolygon' && spec.sides % 2 === 1);
}

/** Lays out the section of a cut. Throws RangeError when the plane meets neither cavity nor tool. */
export function sceneOf(subject: CutSubject): Scene {
  const { face, depth, through } = subject;
  const cavity = makeOutline(subject.cavity);
  const tool = makeOutline(subject.tool);
  const plane = sectionPlane(cavity);
  const islands = islandsAt(cavity, plane);
  const [first] = islands;
  const [toolChord] = islandsAt(tool, plane);
  if (first === undefined || toolChord === undefined) throw new RangeError('the plane of the section meets no island');
  const gap = (first.to - first.from - (toolChord.to - toolChord.from)) / 2;
  const parts = toolParts(tool, face, plane, subject.bores);
  const lines = nominalLines(toolParts(cavity, grownFace(face, gap), plane), depth, through);
  const [line = []] = lines;
  const formed = (line[line.length - 2] ?? 0) - (line[0] ?? 0);
  const shaped = face.kind !== 'flat' && face.kind !== 'stepped';
  const whole = chordsAt(cavity, plane).length === islands.length && through === undefined && formed > 0;
  const nominalSize = shaped && whole ? formed : first.to - first.from;
  const wall = depth - (shaped ? edgeRise(parts) : 0);
  const walled = wall > WALL_SHARE * depth;
  return {
    plane,
    round: isRound(cavity, first, plane),
    islands,
    toolChord,
    toolParts: parts,
    nominalSize,
    nominalLines: lines,
    shaped,
    wall,
    walled,
    ...(face.kind === 'stepped' && { step: face.step }),
    bySection: !sizedWhole(subject.cavity) || !walled,
  };
}

/** Share of the depth that must be wall for the entry size to be one of the outline's. */
const WALL_SHARE = 0.15;

/** How far the face stands back at the edge of the tool (m). */
function edgeRise(parts: readonly ToolPart[]): number {
  const face = parts[0]?.face;
  return face === undefined ? 0 : (face[1] as number);
}

/** What was measured of the whole cavity (m). */
export interface WholeSizes {
  readonly depth: number;
  readonly entrySize: number;
  readonly floorSize: number;
  /** Largest chips of the entry and of the exit, down the wall: sizes are read beyond them. */
  readonly chipDepth: number;
  readonly exitChipDepth?: number;
  /** The cut has come out at this depth. */
  readonly through?: number;
}

/** The sizes that are drawn, of the dimensioned island, and where the islands lie (m). */
export interface SceneSizes {
  readonly centre: number;
  readonly centres?: readonly number[];
  readonly extent: Chord;
  readonly entrySize: number;
  readonly floorSize: number;
}

const width = ({ from, to }: Chord): number => to - from;
const middle = ({ from, to }: Chord): number => (from + to) / 2;

/** Depth at which the lower size is read off the section. */
function lowerLevel(scene: Scene, sizes: WholeSizes): number {
  const { depth, through, exitChipDepth = 0 } = sizes;
  if (through !== undefined)
    return Math.max(0.3 * through, Math.min(floorSizeDepth(through), through - 1.1 * exitChipDepth));
  const { step } = scene;
  return step === undefined ? floorSizeDepth(depth) : Math.max(floorSizeDepth(depth), depth - step / 2);
}

/** Depth at which the entry size is read off the section: under the chips, and within the wall if there is but little. */
function entryLevel({ walled, wall }: Scene, { depth, chipDepth }: WholeSizes): number {
  const level = Math.min(0.4 * depth, Math.max(entrySizeDepth(depth), 1.05 * chipDepth));
  return walled || wall <= 0 ? level : Math.min(level, wall / 2);
}

/** The stretches open at a depth, one for each island; undefined where one is not open there. */
function spansAt(scene: Scene, lines: readonly ArrayLike<number>[], level: number, join: number): Chord[] | undefined {
  const open = openAt(lines, level, join);
  const spans = scene.islands.map((island) => {
    const own = open.filter(({ from, to }) => to > island.from && from < island.to);
    const [first] = own;
    return first === undefined ? undefined : { from: first.from, to: (own.at(-1) as Chord).to };
  });
  return spans.every((span) => span !== undefined) ? spans : undefined;
}

/**
 * The sizes to draw on the section, `lines` of the cut as `openAt` takes them: those measured of the whole cavity where they
 * are the island's in this plane, else read off the lines. Stretches nearer than `join` (m) count as one. Undefined where the
 * cut has no walls to be read.
 */
export function sizesIn(
  scene: Scene,
  lines: readonly ArrayLike<number>[],
  sizes: WholeSizes,
  join: number,
): SceneSizes | undefined {
  const level = entryLevel(scene, sizes);
  const entry = spansAt(scene, lines, level, join);
  const lower =
    scene.shaped && sizes.through === undefined ? undefined : spansAt(scene, lines, lowerLevel(scene, sizes), join);
  const [first] = entry ?? [];
  const floorRead = lower?.[0] === undefined ? Number.NaN : width(lower[0]);
  if (!scene.bySection) {
    const { entrySize } = sizes;
    if (!Number.isFinite(entrySize)) return undefined;
    const centre = middle(scene.islands[0] as Chord);
    const floorSize = Number.isFinite(sizes.floorSize) ? sizes.floorSize : floorRead;
    return { centre, extent: { from: centre - entrySize / 2, to: centre + entrySize / 2 }, entrySize, floorSize };
  }
  if (entry === undefined || first === undefined) return undefined;
  // holes stand where the tool's islands do
  const centres = scene.islands.map(middle);
  const grown = scene.wall > 0 ? 0 : entryGrowth(scene, lines, level, join);
  const last = entry.at(-1) as Chord;
  return {
    centre: centres[0] as number,
    ...(centres.length > 1 && { centres }),
    extent: { from: first.from - grown / 2, to: last.to + grown / 2 },
    entrySize: width(first) + grown,
    floorSize: floorRead,
  };
}

/** How much wider a floor without walls is at the entry face than at `level`, drawn on straight from twice as deep. */
function entryGrowth(scene: Scene, lines: readonly ArrayLike<number>[], level: number, join: number): number {
  const [near] = spansAt(scene, lines, level, join) ?? [];
  const [far] = spansAt(scene, lines, 2 * level, join) ?? [];
  return near === undefined || far === undefined ? 0 : Math.max(0, width(near) - width(far));
}
