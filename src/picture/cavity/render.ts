import type { BrickField } from '#src/voxel/bricks.ts';
import { LIGHT, type Palette, PEN, rgbOf } from '../palette.ts';
import { strokesAbove } from '../through.ts';
import { type CutCurve, curveLine, cutCurves } from './contour.ts';
import { type Grid, makeGrid, PAD } from './grid.ts';
import { CUT_FACE, ENTRY_FACE, look, newSight, type Sight, SURFACE } from './ray.ts';
import { makeShader, type Shader, type Shading, shadePlane, shadeSurface, untouched } from './shade.ts';
import { type Coverage, coverLine, newCoverage } from './stroke.ts';
import type { SectionView } from './view.ts';

export interface RenderStyle {
  readonly palette?: Palette;
  readonly shading?: Shading;
  /** Pixels per 1/96 inch: the cut outline is 1.7 of these wide. 1 when left out. */
  readonly unit?: number;
  /** Thickness of the work (m): paper shows below it. Left out, the work fills the picture. */
  readonly thickness?: number;
  /** The cut goes through `thickness`: height of the backing drawn beneath (m), 0 for air. */
  readonly through?: { readonly backing: number };
  /** Rows drawn between two yields; 16 when left out. */
  readonly rows?: number;
}

export interface Picture {
  readonly width: number;
  readonly height: number;
  /** Red, green, blue, alpha 0..255, row after row from the top. */
  readonly data: Uint8ClampedArray;
}

interface Job {
  readonly view: SectionView;
  readonly grid: Grid;
  readonly shader: Shader;
  readonly sight: Sight;
  readonly rgb: Float64Array;
  readonly cutTone: readonly [number, number, number];
  readonly faceTone: readonly [number, number, number];
  readonly paper: readonly [number, number, number];
  readonly backingTone: readonly [number, number, number];
  readonly thickness: number;
  readonly through: RenderStyle['through'];
  readonly picture: Picture;
  /** What each pixel's middle shows and how far into the sheet (voxels): where edges need more than one ray. */
  readonly kinds: Uint8Array;
  readonly runs: Float32Array;
}

const PAPER = 3;
const BACKING = 4;

/** Voxels above the far face from which a line of sight is taken to have left the work. */
const AT_FACE = 0.75;

/** Where a line of sight has passed the far face: paper, or the backing there, into job.rgb. */
function traceBeyond(job: Job): number {
  const { sight, grid, view } = job;
  if (!job.through?.backing) {
    job.rgb.set(job.paper);
    return PAPER;
  }
  const face = PAD + (job.thickness - grid.field.z0) / grid.field.pitch;
  const back = (sight.k - face) / view.rise;
  sight.run -= back;
  sight.j -= back;
  sight.k = face;
  shadePlane(job.rgb, job.shader, sight, job.backingTone);
  return BACKING;
}

/** Colour through one picture point (pixels, may be fractions) into job.rgb; returns what is seen there. */
function trace(job: Job, px: number, py: number): number {
  const { view, sight, rgb } = job;
  const down = view.top + py * view.pixel;
  if (down > job.thickness) {
    const backed = down < job.thickness + (job.through?.backing ?? 0);
    rgb.set(backed ? job.backingTone : job.paper);
    sight.run = 0;
    return backed ? BACKING : PAPER;
  }
  look(job.grid, view, view.left + px * view.pixel, down, sight);
  if (sight.kind === CUT_FACE) {
    rgb.set(job.cutTone);
    return CUT_FACE;
  }
  if (job.through !== undefined && sight.kind === SURFACE) {
    const { field } = job.grid;
    if (field.z0 + (sight.k - PAD + AT_FACE) * field.pitch > job.thickness) return traceBeyond(job);
  }
  const face = sight.kind === ENTRY_FACE ? 1 : untouched(job.grid, sight);
  if (face === 1) {
    rgb.set(job.faceTone);
    return ENTRY_FACE;
  }
  shadeSurface(rgb, job.shader, sight);
  for (let c = 0; c < 3; c++) rgb[c] = (rgb[c] as number) + face * ((job.faceTone[c] as number) - (rgb[c] as number));
  return SURFACE;
}

function setPixel(job: Job, at: number, red: number, green: number, blue: number): void {
  const { data } = job.picture;
  data[4 * at] = red;
  data[4 * at + 1] = green;
  data[4 * at + 2] = blue;
  data[4 * at + 3] = 255;
}

function drawRow(job: Job, row: number): void {
  const { width } = job.view;
  for (let column = 0; column < width; column++) {
    const at = row * width + column;
    job.kinds[at] = trace(job, column + 0.5, row + 0.5);
    job.runs[at] = job.sight.run;
    setPixel(job, at, job.rgb[0] as number, job.rgb[1] as number, job.rgb[2] as number);
  }
}

/** Step in depth between neighbours, in voxels, from which an edge is taken to pass between them. */
const EDGE_STEP = 6;

function onEdge(job: Job, at: number, other: number): boolean {
  if (job.kinds[at] !== job.kinds[other]) return true;
  return job.kinds[at] === SURFACE && Math.abs((job.runs[at] as number) - (job.runs[other] as number)) > EDGE_STEP;
}

/** Pixels that an edge crosses, drawn again with 3 x 3 rays. */
function smoothRow(job: Job, row: number): void {
  const { width, height } = job.view;
  for (let column = 0; column < width; column++) {
    const at = row * width + column;
    const edge =
      (column > 0 && onEdge(job, at, at - 1)) ||
      (column + 1 < width && onEdge(job, at, at + 1)) ||
      (row > 0 && onEdge(job, at, at - width)) ||
      (row + 1 < height && onEdge(job, at, at + width));
    if (!edge) continue;
    let red = 0;
    let green = 0;
    let blue = 0;
    for (let n = 0; n < 9; n++) {
      trace(job, column + ((n % 3) + 0.5) / 3, row + (Math.floor(n / 3) + 0.5) / 3);
      red += job.rgb[0] as number;
      green += job.rgb[1] as number;
      blue += job.rgb[2] as number;
    }
    setPixel(job, at, red / 9, green / 9, blue / 9);
  }
}

/** Points x0, z0, ... (m) of the cut face in picture pixels. */
export function lineInPicture(view: SectionView, line: ArrayLike<number>): number[] {
  return Array.from(line, (value, n) => (value - (n % 2 === 0 ? view.left : view.top)) / view.pixel);
}

/** A cut curve in picture pixels; open ones run on to both sides of the picture. */
export function curveInPicture(view: SectionView, curve: CutCurve): Float64Array {
  const count = curve.x.length;
  const across = (n: number): number => ((curve.x[n] as number) - view.left) / view.pixel;
  const down = (n: number): number => ((curve.z[n] as number) - view.top) / view.pixel;
  const points = new Float64Array(2 * (count + (curve.closed ? 1 : 2)));
  const shift = curve.closed ? 0 : 1;
  for (let n = 0; n < count; n++) {
    points[2 * (n + shift)] = across(n);
    points[2 * (n + shift) + 1] = down(n);
  }
  if (curve.closed) {
    points[2 * count] = across(0);
    points[2 * count + 1] = down(0);
    return points;
  }
  points[0] = Math.min(0, across(0)) - 4;
  points[1] = down(0);
  points[2 * count + 2] = Math.max(view.width, across(count - 1)) + 4;
  points[2 * count + 3] = down(count - 1);
  return points;
}

/** The cut outline in picture pixels: entry face, walls and floor, and the far face where the picture shows it. */
function cutLines(job: Job): ArrayLike<number>[] {
  const { view, grid, thickness, through } = job;
  const curves = cutCurves(grid.field, view.yCut, grid, through === undefined ? undefined : thickness);
  const main = curves.find(({ closed }) => !closed);
  const inPicture = curves.filter((curve) => through === undefined || curve !== main);
  const lines: ArrayLike<number>[] = inPicture.map((curve) => curveInPicture(view, curve));
  const margin = 4 * view.pixel;
  const ends = { from: view.left - margin, to: view.left + view.width * view.pixel + margin };
  const whole = main === undefined || through === undefined ? [] : [ends.from, 0, ...curveLine(main), ends.to, 0];
  const seen = Number.isFinite(thickness) ? strokesAbove(whole, thickness, ends) : { lines: [], face: [] };
  const pieces = [...seen.lines, ...seen.face.map(({ from, to }) => [from, thickness, to, thickness])];
  return [...lines, ...pieces.map((piece) => lineInPicture(view, piece))];
}

function inkOutline(picture: Picture, coverage: Coverage, ink: readonly [number, number, number]): void {
  const { data } = picture;
  for (let at = 0; at < coverage.alpha.length; at++) {
    const share = (coverage.alpha[at] as number) / 255;
    if (share === 0) continue;
    for (let c = 0; c < 3; c++) {
      const under = data[4 * at + c] as number;
      data[4 * at + c] = under + share * ((ink[c] as number) - under);
    }
  }
}

/**
 * Draws the half-section. A generator: it yields the share done, 0..1, after every few rows so that the caller may let
 * others in, and returns the picture. The same field, view and style give the same bytes.
 */
export function* renderSteps(
  field: BrickField,
  view: SectionView,
  style: RenderStyle = {},
): Generator<number, Picture> {
  const { width, height } = view;
  const palette = style.palette ?? LIGHT;
  const unit = style.unit ?? 1;
  const rows = style.rows ?? 16;
  const grid = makeGrid(field);
  const picture: Picture = { width, height, data: new Uint8ClampedArray(4 * width * height) };
  const job: Job = {
    view,
    grid,
    shader: makeShader(grid, view.yCut, style.shading ?? { kind: 'plain' }, rgbOf(palette.matt)),
    sight: newSight(),
    rgb: new Float64Array(3),
    cutTone: rgbOf(palette.glass),
    faceTone: rgbOf(palette.glassTop),
    paper: rgbOf(palette.paper),
    backingTone: rgbOf(palette.plotGround),
    thickness: style.thickness ?? Number.POSITIVE_INFINITY,
    through: style.through,
    picture,
    kinds: new Uint8Array(width * height),
    runs: new Float32Array(width * height),
  };
  for (let row = 0; row < height; row++) {
    drawRow(job, row);
    if (row % rows === rows - 1) yield (0.8 * row) / height;
  }
  for (let row = 0; row < height; row++) {
    smoothRow(job, row);
    if (row % rows === rows - 1) yield 0.8 + (0.2 * row) / height;
  }
  const coverage = newCoverage(width, height);
  for (const line of cutLines(job)) coverLine(coverage, line, PEN.cut * unit);
  inkOutline(picture, coverage, rgbOf(palette.ink));
  return picture;
}

/** Draws the half-section in one go. */
export function render(field: BrickField, view: SectionView, style: RenderStyle = {}): Picture {
  const steps = renderSteps(field, view, style);
  while (true) {
    const step = steps.next();
    if (step.done) return step.value;
  }
}
