import { log } from '#src/base/math.ts';
import { METRES_PER_MICROMETRE, PASCALS_PER_GIGAPASCAL, PASCALS_PER_MEGAPASCAL } from '#src/base/units.ts';
import { constantNotes } from '#src/physics/constants.ts';
import type { Conditions, WorkMaterial } from '#src/physics/records.ts';
import type { JobRanges, Range } from '#src/planning/inputs.ts';
import {
  type AbrasiveRecord,
  findGrade,
  findMaterial,
  type GritRecord,
  type Library,
  type Property,
} from '../library.ts';
import { DEFAULTS } from './defaults.ts';
import type { PartialJob } from './desk.ts';
import { ownProperty, WORK_PROPERTIES, Z_D3 } from './matter.ts';

type Workpiece = NonNullable<PartialJob['workpiece']>;
type SlurryFields = NonNullable<PartialJob['slurry']>;

/** A range that holds its nominal value, whatever it was built from. */
function range(nominal: number, low: number, high: number): Range {
  return { low: Math.min(nominal, low), nominal, high: Math.max(nominal, high) };
}

const scaled = ({ min, max }: Property, nominal: number, ratio: number) => range(nominal, min * ratio, max * ratio);

/**
 * Ranges of the work's properties: the job's own where it gives one; a plain number of the job's own is known exactly; else the
 * library's.
 */
function workRanges(workpiece: Workpiece, work: WorkMaterial, library: Library): JobRanges['work'] {
  const id = workpiece.material;
  const record = id === undefined ? undefined : findMaterial(library.materials, id).found;
  const ranges: { -readonly [K in keyof WorkMaterial]?: Range } = {};
  for (const [name, own, ratio] of WORK_PROPERTIES) {
    const given = workpiece[name];
    const nominal = work[own];
    if (typeof given === 'object') {
      const { min, max } = given;
      ranges[own] = range(nominal, (min ?? nominal / ratio) * ratio, (max ?? nominal / ratio) * ratio);
    } else if (ownProperty(workpiece, name) === undefined && record) {
      ranges[own] = scaled(record.properties[name], nominal, ratio);
    }
  }
  return ranges;
}

type LotRanges = Required<Pick<JobRanges, 'gritMedian' | 'gritSpread' | 'gritLargest'>>;

/** Width of a close lot over the widest that conforms, and what a lot of unknown width may have more. Assumed. */
const CLOSE_LOT = 0.8;
const WIDE_LOT = 1.1;
/** Deviation of a median whose tolerance nobody states. Assumed: about what micro grades have, and half a step of a sieved grade. */
const MEDIAN_TOLERANCE = 0.06;

/**
 * A lot of unstated width: median and spread as close as lots of one maker are.
 * Largest grain from 1.1 to 1.5 times the size that 3 % exceed, 1.3 being assumed for it.
 */
function unstatedLot({ massMedian, spread, largest }: Conditions['grit']): LotRanges {
  return {
    gritMedian: range(massMedian, massMedian * (1 - MEDIAN_TOLERANCE), massMedian * (1 + MEDIAN_TOLERANCE)),
    gritSpread: range(spread, CLOSE_LOT * spread, WIDE_LOT * spread),
    gritLargest: range(largest, (1.1 / 1.3) * largest, (1.5 / 1.3) * largest),
  };
}

/**
 * A lot that conforms to its grade: the median within its tolerance; the spread from that of a close lot to the widest coarse
 * side, where the median is least and the size exceeded by 3 % is at its limit; the largest grain from half way between that
 * size and the standard's largest, on a log scale, up to it.
 */
function gradeLot(record: GritRecord, grit: Conditions['grit']): LotRanges {
  const um = METRES_PER_MICROMETRE;
  const unstated = unstatedLot(grit);
  const { d50Um, d3Um, largestUm } = record;
  const least = d50Um.min;
  const most = d50Um.max;
  const median = least === null || most === null ? unstated.gritMedian : range(grit.massMedian, least * um, most * um);
  const widest = d3Um === null || least === null ? WIDE_LOT * grit.spread : log(d3Um / least) / Z_D3;
  const upTo = d3Um === null ? (CLOSE_LOT * grit.largest + grit.largest) / 2 : Math.sqrt(d3Um * um * grit.largest);
  return {
    gritMedian: median,
    gritSpread: range(grit.spread, CLOSE_LOT * grit.spread, widest),
    gritLargest: largestUm === null ? unstated.gritLargest : range(grit.largest, upTo, grit.largest),
  };
}

/** Listed crushing strengths are good to a factor of two. */
const CRUSH_FACTOR = 2;

function crushRange({ properties }: AbrasiveRecord, nominal: number): Range {
  const { min, max } = properties.crushStrengthMPa;
  const known = scaled(properties.crushStrengthMPa, nominal, PASCALS_PER_MEGAPASCAL);
  return max > min ? known : range(nominal, nominal / CRUSH_FACTOR, nominal * CRUSH_FACTOR);
}

/** What is not known exactly about one pass of a job, from the job's own ranges, the libraries and the grade's tolerances. SI. */
export function rangesOf(job: PartialJob, conditions: Conditions, library: Library): JobRanges {
  const slurry: SlurryFields = job.slurry ?? {};
  const { work, grit, abrasive, tool } = conditions;
  const grade = slurry.grit === undefined ? undefined : findGrade(library, slurry.grit, slurry.gritMethod).found;
  const grains = findMaterial(library.abrasives, slurry.abrasive ?? '').found;
  const metal = findMaterial(library.tools, job.tool?.material ?? DEFAULTS['tool.material']).found;
  const { min, max } = constantNotes.chipWidthRatio;
  return {
    work: workRanges(job.workpiece ?? {}, work, library),
    ...(grade ? gradeLot(grade, grit) : unstatedLot(grit)),
    ...(grains && { crushStrength: crushRange(grains, abrasive.crushStrength) }),
    ...(metal && { toolHardness: scaled(metal.properties.hardnessGPa, tool.hardness, PASCALS_PER_GIGAPASCAL) }),
    chipWidthRatio: range(conditions.constants.chipWidthRatio, min, max),
  };
}
