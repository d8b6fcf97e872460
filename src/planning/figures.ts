/** One predicted figure, in the unit its name states; an array where a drawing has several sizes. */
export interface Figure {
  /** Null when the figure could not be had; `covers` then says why. */
  readonly value: number | readonly number[] | null;
  /** Ends of the band, of the same shape as the value; both null when there is none, one null when it is open there. */
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
  /** Centre of the floor above its rim. */
  'floorHumpUm',
  'floorRaUm',
  'floorRzUm',
  'edgeChipMaxUm',
  'edgeChipP95Um',
  /** Down the wall, of the chip that is deepest there. */
  'edgeChipDepthUm',
  /** Width of the largest chip where a cut comes out, on the exit face. */
  'exitChipMaxUm',
  /** 99 % of hits. */
  'damageDepthUm',
  'damageDepthLargestUm',
  /** What a next pass has to take off per side and off the floor to remove the damage of this one. */
  'stockNeededUm',
  'toolWearLengthMm',
  'toolWearRatio',
  'toolEdgeRadiusUm',
  /** Tool lost per side, where it is worn most. */
  'toolSideLossUm',
  /** Share of the stall load that is left: 1 - load / stall load; 0 at the stall. */
  'stallMargin',
  /** Static load of the greatest rate at full depth. */
  'rateBestLoadN',
  'impacts',
] as const;

export type FigureName = (typeof FIGURE_NAMES)[number];
export type Figures = { readonly [N in FigureName]: Figure };

/** Values of all figures, without bands; null or not finite where there is none. */
export type FigureValues = Readonly<Record<FigureName, Figure['value']>>;

/** The values of figures. */
export function valuesOf(figures: Figures): FigureValues {
  const entries = FIGURE_NAMES.map((name): [FigureName, Figure['value']] => [name, figures[name].value]);
  return Object.fromEntries(entries) as FigureValues;
}

/** The elements of a value: none when it is null, one for a number. */
export function elementsOf(value: Figure['value']): readonly number[] {
  if (value === null) return [];
  return typeof value === 'number' ? [value] : value;
}

/** Elements in the shape of another value: a number for a number, an array for an array. */
export function shapedLike(value: Figure['value'], elements: readonly number[]): Figure['value'] {
  return typeof value === 'number' ? (elements[0] as number) : elements;
}

/** A figure without a band. */
export function plainFigure(value: Figure['value'], covers: string = NO_BAND): Figure {
  return { value, low: null, high: null, covers };
}
