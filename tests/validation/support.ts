import { stockLibrary } from '#src/formats/stock-library.ts';
import { publishedConstants } from '#src/physics/constants.ts';
import { slurryConstants } from '#src/physics/process/constants.ts';
import { type Lab, makeLab } from '#src/run/validation/lab.ts';
import type { Check, Row } from '#src/run/validation/record.ts';
import { validationTable } from '#src/run/validation/table.ts';

/** A lab over the library and the constants the program comes with. */
export const stockLab = (): Lab => makeLab(stockLibrary, publishedConstants, slurryConstants);

/** The rows of some checks as they stand. */
export const rowsOf = (checks: readonly Check[]): Row[] => [...validationTable(stockLab(), { checks })];
