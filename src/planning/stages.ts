import { makeOutline, nearest, type Outline, type OutlineSpec } from '#src/base/outline.ts';
import { riseOf, type ToolFace } from '#src/physics/tool-face.ts';

/** What an earlier pass has left: its opening and the depth of its floor (m). */
export interface Opened {
  readonly outline: OutlineSpec;
  readonly depth: number;
}

/** A tool on its way down. Metres. */
export interface Descent {
  readonly tool: OutlineSpec;
  readonly face: ToolFace;
  /** Depth its tip is to reach. */
  readonly depth: number;
  readonly earlier?: Opened;
}

/** A stretch of the way on which so much of the face cuts. Metres, m2. */
export interface Contact {
  readonly from: number;
  readonly to: number;
  readonly area: number;
  /** All of the face cuts. */
  readonly whole: boolean;
}

/** Cells across the longer side of the tool, stretches a face that slopes is cut into, and parts of its area left out. */
const CELLS = 160;
const STRETCHES = 10;
const LEAST_SHARE = 1e-3;
/** Depths closer than this are one (m). */
const SAME = 1e-9;

/**
 * How much of a tool's face is in contact at each depth of its tip: a point that stands back by t over a surface already
 * b deep touches from t + b on. Flat tools in untouched work have one stretch, finishing tools their shelf and then the
 * floor, sloping faces ten. The way to the first contact is free and left out; so is a tip that never touches.
 */
export function contactsOf({ tool, face, depth, earlier }: Descent): Contact[] {
  const outline = makeOutline(tool);
  if (face.kind === 'flat' && !earlier) return [{ from: 0, to: depth, area: outline.area, whole: true }];
  const cells = touchedCells(outline, face, earlier);
  const total = cells.reduce((sum, { area }) => sum + area, 0);
  const levels = levelsOf(cells, depth);
  const contacts: Contact[] = [];
  let before = 0;
  for (let n = 0; n + 1 < levels.length; n++) {
    const from = levels[n] as number;
    const to = levels[n + 1] as number;
    const middle = (from + to) / 2;
    const area = cells.reduce((sum, cell) => sum + (cell.at <= middle ? cell.area : 0), 0);
    if (area < LEAST_SHARE * total) continue;
    // what barely grew goes on as before
    const last = contacts.at(-1);
    if (last && last.to === from && area - before < LEAST_SHARE * total)
      contacts[contacts.length - 1] = { ...last, to };
    else {
      contacts.push({ from, to, area, whole: area > (1 - LEAST_SHARE) * total });
      before = area;
    }
  }
  return contacts;
}

interface Cell {
  /** Depth of the tip at which it first touches (m). */
  readonly at: number;
  readonly area: number;
}

/** Cells of the face with the depth each touches at; those cut by an edge count by what lies inside. */
function touchedCells(tool: Outline, face: ToolFace, earlier: Opened | undefined): Cell[] {
  const { xMin, xMax, yMin, yMax } = tool.bounds;
  const pitch = Math.max(xMax - xMin, yMax - yMin) / CELLS;
  const nx = Math.ceil((xMax - xMin) / pitch);
  const ny = Math.ceil((yMax - yMin) / pitch);
  const rise = riseOf(face);
  const opened = earlier && makeOutline(earlier.outline);
  const inside = (outline: Outline, x: number, y: number) =>
    Math.max(0, Math.min(1, 0.5 - nearest(outline, x, y).distance / pitch));
  const cells: Cell[] = [];
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx; i++) {
      const x = (xMin + xMax) / 2 + (i + 0.5 - nx / 2) * pitch;
      const y = (yMin + yMax) / 2 + (j + 0.5 - ny / 2) * pitch;
      const area = inside(tool, x, y) * pitch * pitch;
      if (area === 0) continue;
      const share = opened ? inside(opened, x, y) : 0;
      const at = rise(x, y);
      if (share < 1) cells.push({ at, area: area * (1 - share) });
      if (share > 0) cells.push({ at: at + (earlier as Opened).depth, area: area * share });
    }
  }
  const sum = cells.reduce((all, { area }) => all + area, 0);
  // the tool's own area is known exactly
  return cells.map((cell) => ({ ...cell, area: (cell.area * tool.area) / sum }));
}

/** Ends of the stretches: each depth at which something touches where these are few, equal steps where they are many. */
function levelsOf(cells: readonly Cell[], depth: number): number[] {
  const starts = cells
    .map(({ at }) => at)
    .filter((at) => at < depth - SAME)
    .sort((a, b) => a - b);
  const first = starts[0];
  if (first === undefined) return [];
  const distinct = starts.filter((at, n) => n === 0 || at - (starts[n - 1] as number) > SAME);
  if (distinct.length <= STRETCHES) return [...distinct, depth];
  const last = starts.at(-1) as number;
  const steps = Array.from({ length: STRETCHES + 1 }, (_, k) => first + ((last - first) * k) / STRETCHES);
  return [...steps.filter((at) => at < depth - SAME), depth];
}
