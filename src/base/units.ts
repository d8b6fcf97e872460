/**
 * Ratios to SI. Below the boundary (files, command line, screen) every number is SI and carries no suffix; a number that
 * is not SI carries its unit in its name and is converted once, with one of these.
 */

export const METRES_PER_MILLIMETRE = 1e-3;
export const METRES_PER_MICROMETRE = 1e-6;
export const MICROMETRES_PER_METRE = 1e6;
export const MILLIMETRES_PER_METRE = 1e3;
export const PASCALS_PER_MEGAPASCAL = 1e6;
export const PASCALS_PER_GIGAPASCAL = 1e9;
export const HERTZ_PER_KILOHERTZ = 1e3;
export const SECONDS_PER_MINUTE = 60;
/** m/s per mm/min. */
export const METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE = 1e-3 / 60;
/** Pa m^0.5 per MPa m^0.5. */
export const PASCAL_ROOT_METRES_PER_MEGAPASCAL_ROOT_METRE = 1e6;
export const CUBIC_METRES_PER_CUBIC_MILLIMETRE = 1e-9;
export const DEGREES_PER_RADIAN = 57.29577951308232;
