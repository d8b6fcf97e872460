import { METRES_PER_MICROMETRE, MICROMETRES_PER_METRE } from '#src/base/units.ts';
import { formatNumber } from '../numbers.ts';
import type { Problem } from '../problems.ts';
import type { Draft } from './draft.ts';
import { featureOf } from './fit.ts';

/** Memory one cut may take (bytes). */
const MEMORY = 2e9;
/**
 * Bytes a column of floor or wall takes: heights, ages, cracks and edge distances at 4 bytes each, its share of the
 * bounds, and what it adds to the bricks: two bricks of 8^3 over 8 x 8 columns, at three bytes a voxel.
 */
const BYTES_PER_COLUMN = 4 * 4 + 0.25 + (2 * 512 * 3) / 64;
/** Voxels across the smallest feature, at least. */
const FEWEST_ACROSS = 8;

/** Surface that columns stand on: the floor's bounding rectangle, and the walls (m2). */
function surface({ cavity, depth = 0, passes }: Draft): number {
  if (!cavity) return 0;
  const { bounds, perimeter } = cavity.outline;
  const overcut = passes.reduce((largest, pass) => Math.max(largest, pass.overcut ?? 0), 0);
  const { xMin, xMax, yMin, yMax } = bounds;
  return (xMax - xMin + 4 * overcut) * (yMax - yMin + 4 * overcut) + perimeter * depth;
}

/** The smallest voxel that fits into memory, rounded up to two digits (um). */
export function smallestVoxelUm(draft: Draft): number {
  const exact = Math.sqrt((surface(draft) * BYTES_PER_COLUMN) / MEMORY) * MICROMETRES_PER_METRE;
  if (!(exact > 0)) return 0;
  const unit = 10 ** (Math.floor(Math.log10(exact)) - 1);
  return Number((Math.ceil(exact / unit - 1e-9) * unit).toPrecision(2));
}

/** Checks how the cut is to be computed: voxel against memory and features. */
export function checkCut(draft: Draft): Problem[] {
  const { voxelUm, quality } = draft.job.cut ?? {};
  const found: Problem[] = [];
  const refuse = (path: string, value: unknown, allowed: string, message: string) =>
    found.push({ path, value, allowed, message, severity: 'refuse' });
  if (voxelUm === undefined) return found;
  if (quality !== undefined) {
    refuse('cut.quality', quality, 'nothing beside voxelUm', 'A quality chooses the voxel. Keep quality or voxelUm.');
  }
  if (!draft.cavity || draft.depth === undefined) return found;
  const least = smallestVoxelUm(draft);
  const most = Math.min(featureOf(draft.cavity.outline.spec) / FEWEST_ACROSS, draft.depth) * MICROMETRES_PER_METRE;
  const allowed = `${least} to ${formatNumber(most, 3)} um`;
  if (voxelUm < least) {
    const columns = surface(draft) / (voxelUm * METRES_PER_MICROMETRE) ** 2;
    const gigabytes = formatNumber((columns * BYTES_PER_COLUMN) / 1e9, 2);
    const message = `This voxel needs about ${gigabytes} GB of memory, and a cut may take ${MEMORY / 1e9} GB. Enter ${least} or more.`;
    refuse('cut.voxelUm', voxelUm, allowed, message);
  } else if (voxelUm > most) {
    refuse('cut.voxelUm', voxelUm, allowed, 'This voxel is too coarse for the cavity. Enter less.');
  }
  return found;
}
