import type { BrickField } from '#src/voxel/bricks.ts';
import { type Grid, makeGrid, PAD } from './grid.ts';
import { newNormalScratch, surfaceNormal } from './normal.ts';
import { CUT_FACE, ENTRY_FACE, look, newSight } from './ray.ts';
import { untouched } from './shade.ts';
import type { SectionView } from './view.ts';

/** What a picture point shows, in work coordinates (m). */
export interface Probe {
  readonly kind: 'cut' | 'entry' | 'surface';
  readonly x: number;
  readonly y: number;
  readonly z: number;
  /** Outward unit normal; towards the viewer (0, -1, 0) on the cut face, up (0, 0, -1) on the entry face. */
  readonly normal: readonly [number, number, number];
}

/** A function that says what lies under a picture point (pixels from the top left corner). */
export function makeProbe(
  field: BrickField,
  view: SectionView,
  grid: Grid = makeGrid(field),
): (px: number, py: number) => Probe {
  const sight = newSight();
  const normal = new Float64Array(3);
  const scratch = newNormalScratch();
  return (px, py) => {
    look(grid, view, view.left + px * view.pixel, view.top + py * view.pixel, sight);
    const x = (sight.i - PAD) * field.pitch + field.x0;
    const y = (sight.j - PAD) * field.pitch + field.y0;
    const z = (sight.k - PAD) * field.pitch + field.z0;
    if (sight.kind === CUT_FACE) return { kind: 'cut', x, y, z, normal: [0, -1, 0] };
    if (sight.kind === ENTRY_FACE || untouched(grid, sight) === 1)
      return { kind: 'entry', x, y, z, normal: [0, 0, -1] };
    surfaceNormal(normal, grid, sight, scratch);
    return { kind: 'surface', x, y, z, normal: [...normal] as [number, number, number] };
  };
}
