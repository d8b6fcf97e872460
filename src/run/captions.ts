import { nominalSizes } from '#src/base/outline.ts';
import {
  DEGREES_PER_RADIAN,
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
  MILLIMETRES_PER_METRE,
} from '#src/base/units.ts';
import { passViews } from '#src/formats/job/passes.ts';
import type { Limits, ResolvedJob, ResolvedPass } from '#src/formats/job/resolve.ts';
import { formatNumber } from '#src/formats/numbers.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';
import type { SectionLimits } from '#src/picture/section.ts';
import type { Cut } from '#src/voxel/cut.ts';
import { version } from './version.ts';

/** What the pictures say in words of a job, its passes and its limits. */

const nameIn = (records: readonly { readonly id: string; readonly name: string }[], id: string | undefined) =>
  records.find((record) => record.id === id)?.name;

/** Abrasive and grade of a pass in words. */
export function gritText(job: ResolvedJob, pass: ResolvedPass): string {
  const view = passViews(job.file)[job.passes.indexOf(pass)];
  const slurry = view?.job.slurry ?? job.file.slurry;
  const abrasive = nameIn(stockLibrary.abrasives, slurry.abrasive) ?? slurry.abrasive;
  const size = slurry.grit ?? `d50 ${formatNumber(pass.conditions.grit.massMedian / METRES_PER_MICROMETRE, 3)} \u00b5m`;
  return `${abrasive} ${size}`;
}

/** How the tool was driven. */
function driveText({ feed, staticLoad }: ResolvedPass): string {
  if (feed === undefined) return `${formatNumber(staticLoad, 3)} N`;
  return `fed at ${formatNumber(feed / METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE, 3)} mm/min`;
}

/** How a pass was set: slurry, vibration, drive. */
function settingText(job: ResolvedJob, pass: ResolvedPass): string {
  const { conditions } = pass;
  const amplitude = formatNumber(conditions.amplitude / METRES_PER_MICROMETRE, 3);
  return (
    `${gritText(job, pass)}, ${formatNumber(100 * conditions.concentration, 3)} vol%, ${amplitude} \u00b5m zero to peak at ` +
    `${formatNumber(conditions.frequency / 1e3, 4)} kHz, ${driveText(pass)}`
  );
}

/** One line for a pass of several: what it is called, its setting and its tool. */
function passText(job: ResolvedJob, pass: ResolvedPass, index: number): string {
  const title = pass.title === '' ? '' : `, ${pass.title}`;
  const round = pass.tool.kind === 'circle' || pass.tool.kind === 'ring';
  const sizes = nominalSizes(pass.tool).map((size) => formatNumber(size * MILLIMETRES_PER_METRE, 4));
  const tool = round ? `\u00d8\u2009${sizes[0]} mm` : `${sizes.join(' \u00d7 ')} mm`;
  return `Pass ${index + 1}${title}: ${settingText(job, pass)}, tool ${tool}`;
}

/** What was set: one line for a single pass, else one for each; then how the cut was computed. */
export function captionOf(job: ResolvedJob, passes: readonly ResolvedPass[], { model }: Cut): string[] {
  const { magnification, floor } = model;
  const work = nameIn(stockLibrary.materials, job.file.workpiece.material) ?? 'a material of the job\u2019s own';
  const voxel = formatNumber(floor.dx / METRES_PER_MICROMETRE, 3);
  const magnified = magnification > 1 ? `, lateral magnification ${formatNumber(magnification, 3)}` : '';
  const made =
    `oxel ${voxel} \u00b5m${magnified}, seed ${job.cut.seed}, Spallwright ${version}. ` +
    'An estimate, to be confirmed by a trial cut.';
  const [only] = passes;
  if (only !== undefined && passes.length === 1) return [`${work}, ${settingText(job, only)}`, `V${made}`];
  return [...passes.map((pass, n) => passText(job, pass, n)), `Work: ${work}; v${made}`];
}

/** The drawing's limits as the section writes them; deviations where it has several sizes. */
export function limitTexts(limits: Limits, nominal: readonly number[]): SectionLimits {
  const mm = (metres: number) => (metres / METRES_PER_MILLIMETRE).toFixed(3);
  const signed = (metres: number) =>
    `${metres < 0 ? '\u2212' : '+'}${formatNumber(Math.abs(metres) / METRES_PER_MILLIMETRE, 3)}`;
  const [size = 0, ...more] = nominal;
  const bound = (metres: number) => (more.length > 0 ? signed(metres) : mm(size + metres));
  const entry = [limits.entrySizeLower, limits.entrySizeUpper]
    .flatMap((limit) => (limit === undefined ? [] : [bound(limit)]))
    .join(more.length > 0 ? ' / ' : ' to ');
  return {
    ...(entry !== '' && { entry: more.length > 0 ? entry : `${entry} mm` }),
    ...(limits.taper !== undefined && { taper: `\u2264 ${(limits.taper * DEGREES_PER_RADIAN).toFixed(2)}\u00b0` }),
    ...(limits.cornerRadius !== undefined && { corner: `\u2264 ${mm(limits.cornerRadius)} mm` }),
    ...(limits.edgeChip !== undefined && {
      chip: `\u2264 ${formatNumber(limits.edgeChip / METRES_PER_MICROMETRE, 3)} \u00b5m`,
    }),
  };
}
