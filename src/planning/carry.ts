import type { BandScale } from './bands.ts';
import { elementsOf, type Figure, type FigureName } from './figures.ts';

/** How changes of the estimate carry over to a figure of the cut: as ratios or differences, and of which figure. */
export interface CarrySource {
  /** The figure of the estimate they are taken from. */
  readonly name: FigureName;
  readonly scale: BandScale;
  /** How it was taken from another figure, in words; empty for its own. */
  readonly words: string;
}

/** Figures that may be zero or negative, or that are a size plus something small: their changes add. */
const ADDING: ReadonlySet<FigureName> = new Set(['depthMm', 'entrySizeMm', 'floorSizeMm', 'taperDeg', 'stallMargin']);

/** How deviations of a figure add up. */
export function bandScale(name: FigureName): BandScale {
  return ADDING.has(name) ? 'difference' : 'ratio';
}

/** Figures to lean on where the estimate has no law of the figure's own, in order. */
const RELATED: Readonly<Partial<Record<FigureName, readonly CarrySource[]>>> = {
  floorRzUm: [{ name: 'floorRaUm', scale: 'ratio', words: 'scaled with floor Ra' }],
  // the fillet is the tool's edge plus the gap at the foot
  cornerRadiusUm: [{ name: 'overcutFloorUm', scale: 'difference', words: 'shifted with the overcut at the floor' }],
  exitChipMaxUm: [{ name: 'edgeChipMaxUm', scale: 'ratio', words: 'scaled with the edge chip at the entry' }],
  edgeChipP95Um: [{ name: 'edgeChipMaxUm', scale: 'ratio', words: 'scaled with the largest edge chip' }],
  edgeChipDepthUm: [{ name: 'edgeChipMaxUm', scale: 'ratio', words: 'scaled with the width of the edge chip' }],
  damageDepthLargestUm: [{ name: 'damageDepthUm', scale: 'ratio', words: 'scaled with the damage depth' }],
  stockNeededUm: [{ name: 'damageDepthLargestUm', scale: 'ratio', words: 'scaled with the largest damage depth' }],
  toolSideLossUm: [{ name: 'toolWearLengthMm', scale: 'ratio', words: 'scaled with the length lost by the tool' }],
};

/**
 * Where a figure of this value takes the estimate's changes from: its own law where there is one of the same shape, else
 * a related figure; null where there is neither. Flatness is the floor's hump where that makes up half of it or more,
 * and texture otherwise.
 */
export function sourceOf(
  name: FigureName,
  value: Figure['value'],
  nominal: (name: FigureName) => Figure['value'],
): CarrySource | null {
  const fits = (other: FigureName) => {
    const estimated = nominal(other);
    return (
      estimated !== null &&
      typeof estimated === typeof value &&
      elementsOf(estimated).length === elementsOf(value).length
    );
  };
  if (fits(name)) return { name, scale: bandScale(name), words: '' };
  if (name === 'floorFlatnessUm') return flatnessSource(value, nominal);
  return RELATED[name]?.find((source) => fits(source.name)) ?? null;
}

function flatnessSource(value: Figure['value'], nominal: (name: FigureName) => Figure['value']): CarrySource | null {
  const hump = nominal('floorHumpUm');
  if (typeof value === 'number' && typeof hump === 'number' && Math.abs(hump) >= 0.5 * value) {
    return { name: 'floorHumpUm', scale: 'ratio', words: "scaled with the floor's hump" };
  }
  if (typeof nominal('floorRaUm') !== 'number') return null;
  return { name: 'floorRaUm', scale: 'ratio', words: 'scaled with floor Ra' };
}

/** A value moved as the estimate moved from `before` to `after`; NaN where that has no meaning. */
export function moved(value: number, before: number, after: number, scale: BandScale): number {
  if (scale === 'ratio' && before > 0 && after >= 0) return value * (after / before);
  return value + (after - before);
}
