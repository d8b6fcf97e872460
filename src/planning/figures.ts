/** One predicted figure, in the unit its name states; an array where a drawing has several sizes. */
export interface Figure {
  /** Null when the figure could not be had; `covers` then says why. */
  readonly value: number | readonly number[] | null;
  /** Ends of the band, of the same shape as the value; null when there is none. */
  readonly low: number | readonly number[] | null;
  readonly high: number | readonly number[] | null;
  /** What the band covers, or why there is none. */
  readonly covers: string;
}

/** What `covers` says of a figure without a band. */
export const NO_BAND = 'no band yet';

/** Names of the figures of a pass and of a job, with their units. */
export const FIGURE_NAMES = [
  'timeMin',
  'depthMm',
  /** At the start and at the end. */
  'rateMmPerMin',
  'mrrMm3PerMin',
  'entrySizeMm',
  'floorSizeMm',
  'overcutEntryUm',
  'overcutFloorUm',
  'taperDeg',
  'cornerRadiusUm',
  'floorFlatnessUm',
  'floorRaUm',
  'floorRzUm',
  'edgeChipMaxUm',
  'edgeChipP95Um',
  /** Down the wall, of the chip that is deepest there. */
  'edgeChipDepthUm',
  /** 99 % of hits. */
  'damageDepthUm',
  'damageDepthLargestUm',
  'toolWearLengthMm',
  'toolWearRatio',
  'toolEdgeRadiusUm',
  /** Share of the stall load that is left: 1 - load / stall load; 0 at the stall. */
  'stallMargin',
  'impacts',
] as const;

export type FigureName = (typeof FIGURE_NAMES)[number];
export type Figures = { readonly [N in FigureName]: Figure };

/** A figure without a band. */
export function plainFigure(value: Figure['value'], covers: string = NO_BAND): Figure {
  return { value, low: null, high: null, covers };
}
