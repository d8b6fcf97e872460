import type { FigureName } from '#src/planning/figures.ts';

/** What a figure is called, its unit, and the digits it is shown with. */
export interface FigureWords {
  readonly label: string;
  readonly unit: string;
  readonly digits: number;
}

/** Words for every figure of a result, in the order people read them. */
export const FIGURE_WORDS: Readonly<Record<FigureName, FigureWords>> = {
  timeMin: { label: 'Machining time', unit: 'min', digits: 3 },
  depthMm: { label: 'Depth', unit: 'mm', digits: 4 },
  rateMmPerMin: { label: 'Rate, start and end', unit: 'mm/min', digits: 3 },
  mrrMm3PerMin: { label: 'Work removed', unit: 'mm3/min', digits: 3 },
  entrySizeMm: { label: 'Entry size', unit: 'mm', digits: 4 },
  floorSizeMm: { label: 'Floor size', unit: 'mm', digits: 4 },
  overcutEntryUm: { label: 'Overcut at the entry, per side', unit: 'um', digits: 3 },
  overcutFloorUm: { label: 'Overcut at the floor, per side', unit: 'um', digits: 3 },
  taperDeg: { label: 'Taper, per side', unit: 'deg', digits: 3 },
  cornerRadiusUm: { label: 'Corner radius', unit: 'um', digits: 3 },
  floorFlatnessUm: { label: 'Floor flatness', unit: 'um', digits: 3 },
  floorHumpUm: { label: 'Floor hump', unit: 'um', digits: 3 },
  floorRaUm: { label: 'Floor Ra', unit: 'um', digits: 3 },
  floorRzUm: { label: 'Floor Rz', unit: 'um', digits: 3 },
  edgeChipMaxUm: { label: 'Edge chip, largest width', unit: 'um', digits: 3 },
  edgeChipP95Um: { label: 'Edge chip, width of 95 %', unit: 'um', digits: 3 },
  edgeChipDepthUm: { label: 'Edge chip, largest depth', unit: 'um', digits: 3 },
  exitChipMaxUm: { label: 'Exit chip, largest width', unit: 'um', digits: 3 },
  damageDepthUm: { label: 'Damage depth, 99 % of hits', unit: 'um', digits: 3 },
  damageDepthLargestUm: { label: 'Damage depth, largest', unit: 'um', digits: 3 },
  stockNeededUm: { label: 'Stock a next pass needs', unit: 'um', digits: 3 },
  toolWearLengthMm: { label: 'Tool wear, length', unit: 'mm', digits: 3 },
  toolWearRatio: { label: 'Tool wear, tool over work', unit: 'by volume', digits: 2 },
  toolEdgeRadiusUm: { label: 'Tool edge radius', unit: 'um', digits: 3 },
  toolSideLossUm: { label: 'Tool wear, per side', unit: 'um', digits: 3 },
  stallMargin: { label: 'Stall margin', unit: '', digits: 3 },
  rateBestLoadN: { label: 'Load of the greatest rate', unit: 'N', digits: 3 },
  impacts: { label: 'Impacts on the floor', unit: '', digits: 3 },
};
