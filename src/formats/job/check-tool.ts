import { makeOutline, nearest, type Outline } from '#src/base/outline.ts';
import { DEGREES_PER_RADIAN } from '#src/base/units.ts';
import type { Bore } from '#src/physics/slurry/grid.ts';
import { riseOf, type ToolFace } from '#src/physics/tool-face.ts';
import { formatNumber } from '../numbers.ts';
import type { Problem } from '../problems.ts';
import type { JobFrame } from './draft.ts';
import { featureOf, sideGap } from './fit.ts';
import type { PassDraft } from './pass-draft.ts';
import { mm, problem, um } from './words.ts';

/** Cells along the longer side of a tool at which its face is looked at. */
const CELLS = 64;
/** Flanks steeper than this are cut like walls (rad). Common practice: a shaped face has flanks of at most about 75 degrees. */
const STEEPEST = 75 / DEGREES_PER_RADIAN;

function boresFit(_frame: JobFrame, { view, tool, bores, grit }: PassDraft): Problem[] {
  if (!tool || !bores) return [];
  const given = view.job.tool?.bores;
  return bores.flatMap((bore, k) => {
    const path = `${view.at('tool.bores')}[${k}]`;
    const inside = -nearest(tool, bore.x, bore.y).distance;
    if (inside <= bore.radius) {
      const message = `This bore reaches over the edge of the tool by ${mm(bore.radius - inside)}. Move it inward, or make it smaller.`;
      return [problem('refuse', path, given?.[k], `${mm(bore.radius)} or more inside the tool`, message)];
    }
    const other = bores.findIndex(
      (one, n) => n < k && Math.hypot(one.x - bore.x, one.y - bore.y) <= one.radius + bore.radius,
    );
    if (other >= 0) {
      const message = `This bore runs into bore ${other + 1}. Set them apart.`;
      return [problem('refuse', path, given?.[k], 'bores apart', message)];
    }
    if (grit && 2 * bore.radius <= grit.largest) {
      const message = `Grains reach ${um(grit.largest)} and do not pass this bore, ${um(2 * bore.radius)} wide. Make it wider, or take a finer grit.`;
      return [problem('refuse', path, given?.[k], `${um(3 * grit.largest)} wide or more`, message)];
    }
    if (!grit || 2 * bore.radius >= 3 * grit.largest) return [];
    const message = `Grains reach ${um(grit.largest)} and this bore is ${um(2 * bore.radius)} wide: it will clog. Make it wider, or take a finer grit.`;
    return [problem('warn', path, given?.[k], `${um(3 * grit.largest)} wide or more`, message)];
  });
}

/** Width of the finest part of a tool over its length below which the slurry under it cannot be worked out: three cells of 400. */
const FINEST = 3 / 400;

/** Smallest width of the tool, its bores, and the webs beside these (m). */
function finestPart(tool: Outline, bores: readonly Bore[]): number {
  return bores.reduce((width, { x, y, radius }, k) => {
    const webs = bores.slice(0, k).map((one) => Math.hypot(one.x - x, one.y - y) - one.radius - radius);
    return Math.min(width, 2 * radius, -nearest(tool, x, y).distance - radius, ...webs);
  }, featureOf(tool.spec));
}

function partsSeen({ view, tool, bores }: PassDraft): Problem[] {
  if (!tool || !bores) return [];
  const { xMin, xMax, yMin, yMax } = tool.bounds;
  const longest = Math.max(xMax - xMin, yMax - yMin);
  const finest = finestPart(tool, bores);
  if (finest >= FINEST * longest) return [];
  const ofBores = finest < featureOf(tool.spec);
  const message = `The finest part of the tool, ${mm(finest)}, is too fine for its length, ${mm(longest)}: the slurry under it cannot be worked out. Make it wider, or the tool shorter.`;
  const field = ofBores ? 'tool.bores' : 'tool.outline';
  const value = ofBores ? view.job.tool?.bores : view.job.tool?.outline;
  return [problem('refuse', view.at(field), value, `${mm(FINEST * longest)} or more`, message)];
}

/** What a face looks like over the tool: how far it stands back at most, and its steepest flank. */
interface Form {
  readonly height: number;
  readonly slope: number;
  readonly x: number;
  readonly y: number;
}

function formOf(face: ToolFace, tool: Outline): Form {
  const { xMin, xMax, yMin, yMax } = tool.bounds;
  const step = Math.max(xMax - xMin, yMax - yMin) / CELLS;
  const rise = riseOf(face);
  let form: Form = { height: 0, slope: 0, x: 0, y: 0 };
  for (let y = yMin + step / 2; y < yMax; y += step) {
    for (let x = xMin + step / 2; x < xMax; x += step) {
      if (nearest(tool, x, y).distance > 0) continue;
      const here = rise(x, y);
      const slope = Math.hypot(rise(x + step, y) - here, rise(x, y + step) - here) / step;
      form = { ...(slope > form.slope ? { slope, x, y } : form), height: Math.max(form.height, here) };
    }
  }
  return form;
}

function faceLow({ view, face, tool, depth }: PassDraft, form: Form): Problem[] {
  if (!face || face.kind === 'flat' || !tool || depth === undefined || form.height <= depth) return [];
  const message = `The face stands back ${mm(form.height)} and the pass is ${mm(depth)} deep, so that not all of the face will cut. Go deeper, or make the face lower.`;
  return [problem('warn', view.at('tool.face'), view.job.tool?.face, `up to ${mm(depth)} high`, message)];
}

function faceGentle({ view, face }: PassDraft, form: Form): Problem[] {
  if (face?.kind !== 'relief' || Math.atan(form.slope) <= STEEPEST) return [];
  const degrees = formatNumber(Math.atan(form.slope) * DEGREES_PER_RADIAN, 3);
  const message = `The relief is as steep as ${degrees} degrees, near x ${mm(form.x)}, y ${mm(form.y)}: such a flank is cut like a wall and comes out wider by the overcut. Make it lower, or softer.`;
  const allowed = `up to ${formatNumber(STEEPEST * DEGREES_PER_RADIAN, 3)} degrees`;
  return [problem('warn', view.at('tool.face'), view.job.tool?.face, allowed, message)];
}

function reliefCovers({ view, face, tool }: PassDraft): Problem[] {
  if (face?.kind !== 'relief' || !tool) return [];
  const { nx, ny, dx, dy } = face.heights;
  const { xMin, xMax, yMin, yMax } = tool.bounds;
  const short = Math.max(xMax, -xMin) > (nx * dx) / 2 || Math.max(yMax, -yMin) > (ny * dy) / 2;
  if (!short) return [];
  const message = `The relief, ${mm(nx * dx)} x ${mm(ny * dy)}, is smaller than the tool: beyond it the heights of its edge hold. Make it as large as the tool.`;
  const allowed = `${mm(2 * Math.max(xMax, -xMin))} x ${mm(2 * Math.max(yMax, -yMin))} or more`;
  return [problem('warn', view.at('tool.face'), view.job.tool?.face, allowed, message)];
}

function pilotFits({ view, face, tool, grit }: PassDraft): Problem[] {
  if (face?.kind !== 'stepped' || !tool) return [];
  const path = `${view.at('tool.face')}.pilot`;
  const given = view.job.tool?.face;
  const value = given?.kind === 'stepped' ? given.pilot : undefined;
  const pilot = makeOutline(face.pilot);
  const gap = sideGap(tool, pilot);
  if (gap < 0) {
    const message = `The pilot is larger than the tool: it reaches over its edge by ${mm(-gap)}. Make it smaller.`;
    return [problem('refuse', path, value, 'inside the tool', message)];
  }
  const feature = featureOf(face.pilot);
  if (!grit || grit.largest <= feature / 3) return [];
  const message = `The largest grain is ${um(grit.largest)} and the pilot's smallest feature ${mm(feature)}. Take a finer grit, or a larger pilot.`;
  return [problem('warn', path, value, `largest grain at most ${um(feature / 3)}`, message)];
}

/** Bores, and the form of the face, against the tool they are in. */
export function checkToolForm(frame: JobFrame, pass: PassDraft): Problem[] {
  const { face, tool } = pass;
  const own = boresFit(frame, pass);
  const bores = own.some(({ severity }) => severity === 'refuse') ? own : [...own, ...partsSeen(pass)];
  if (!face || face.kind === 'flat' || !tool) return bores;
  const form = formOf(face, tool);
  return [...bores, ...pilotFits(pass), ...faceLow(pass, form), ...faceGentle(pass, form), ...reliefCovers(pass)];
}
