import { cos, PI, pow, sin } from '#src/base/math.ts';

/** Indentation fracture mechanics as published: references for checks. The laws in use are in `crater.ts`. All SI. */

/** What the published laws read. */
export interface IndentedSolid {
  readonly youngsModulus: number;
  readonly hardness: number;
  readonly toughness: number;
}

/** 68 deg, between axis and face of a Vickers pyramid. */
export const VICKERS_HALF_ANGLE = (68 * PI) / 180;

/** Half-diagonal of a Vickers indent, H = P / 2a^2 (m). */
export function vickersHalfDiagonal({ hardness }: IndentedSolid, load: number): number {
  return Math.sqrt(load / (2 * hardness));
}

/** Radial crack length, Anstis, Chantikul, Lawn and Marshall 1981 (from memory): K = xi sqrt(E/H) P / c^(3/2) (m). */
export function anstisCrack(solid: IndentedSolid, load: number, xi = 0.016): number {
  return pow((xi * Math.sqrt(solid.youngsModulus / solid.hardness) * load) / solid.toughness, 2 / 3);
}

/** Load below which no crack forms, Lawn and Evans 1977 (J. Mater. Sci. 12, 2195; from memory): 54.47 (alpha / (eta^2
 * theta^4)) K^4/H^3, alpha = 2/pi, eta = 1, theta = 0.2 (N). */
export function lawnEvansLoad({ toughness, hardness }: IndentedSolid): number {
  const ratio = toughness / hardness;
  return 54.47 * (2 / PI / 0.0016) * ratio * ratio * ratio * toughness;
}

/** Smallest crack, Lawn and Evans 1977 (from memory): 44.2 (K/H)^2 (m). */
export function lawnEvansCrack({ toughness, hardness }: IndentedSolid): number {
  const ratio = toughness / hardness;
  return 44.2 * ratio * ratio;
}

/** Critical depth of cut, Bifano, Dow and Scattergood 1991 (J. Eng. Ind. 113, 184; from memory): 0.15 (E/H)(K/H)^2 (m). */
export function criticalDepth({ youngsModulus, hardness, toughness }: IndentedSolid): number {
  const ratio = toughness / hardness;
  return 0.15 * (youngsModulus / hardness) * ratio * ratio;
}

/** Lateral crack constants of Marshall, Lawn and Evans 1982 (from memory). */
export const LATERAL_ZETA = 0.025;
export const LATERAL_THRESHOLD_ZETA = 1.2e3;
/** Geometry factor A: plate segments freed by the radials, and the clamped plate. */
export const FREED_SEGMENTS = 3 / 4;
export const CLAMPED_PLATE = 3 / (4 * PI);

/** Constant of c = k (cot psi)^(5/12) E^(3/8) (K H)^(-1/2) P^(5/8): sqrt(zeta_L / sqrt(A)). */
export function lateralConstant(geometry: number): number {
  return Math.sqrt(LATERAL_ZETA / Math.sqrt(geometry));
}

function cotangent(halfAngle: number): number {
  return cos(halfAngle) / sin(halfAngle);
}

/** Lateral threshold P0 = (zeta0 / A^2)(cot psi)^(-2/3)(K^4/H^3)(E/H) (N), Marshall, Lawn and Evans 1982. */
export function lateralThreshold(
  solid: IndentedSolid,
  halfAngle = VICKERS_HALF_ANGLE,
  geometry = FREED_SEGMENTS,
): number {
  const ratio = solid.toughness / solid.hardness;
  const material = ratio * ratio * ratio * solid.toughness * (solid.youngsModulus / solid.hardness);
  return (LATERAL_THRESHOLD_ZETA / (geometry * geometry)) * pow(cotangent(halfAngle), -2 / 3) * material;
}

/** Lateral radius far above the threshold (m), Marshall, Lawn and Evans 1982. */
export function lateralRadius(
  solid: IndentedSolid,
  load: number,
  halfAngle = VICKERS_HALF_ANGLE,
  geometry = FREED_SEGMENTS,
): number {
  return (
    (lateralConstant(geometry) *
      pow(cotangent(halfAngle), 5 / 12) *
      pow(solid.youngsModulus, 3 / 8) *
      pow(load, 5 / 8)) /
    Math.sqrt(solid.toughness * solid.hardness)
  );
}

/** Lateral radius with its threshold, c_inf sqrt(1 - (P0/P)^(1/4)) (m). */
export function lateralRadiusAboveThreshold(solid: IndentedSolid, load: number): number {
  const threshold = lateralThreshold(solid);
  if (load <= threshold) return 0;
  return lateralRadius(solid, load) * Math.sqrt(1 - pow(threshold / load, 1 / 4));
}

/**
 * The three published forms of lateral depth, b = k (cot psi)^(1/3) (E^(1/2) / H) P^(1/2) (m): the bottom of the plastic
 * zone (0.707), Lambropoulos 1996 (0.43, with sqrt(sin psi)) and the rotary ultrasonic literature (0.226). From memory.
 */
export function lateralDepth(
  solid: IndentedSolid,
  load: number,
  form: 'plastic-zone' | 'lambropoulos' | 'rotary',
): number {
  const factor = {
    'plastic-zone': Math.SQRT1_2,
    lambropoulos: 0.43 * Math.sqrt(sin(VICKERS_HALF_ANGLE)),
    rotary: 0.226,
  };
  const scale = (pow(cotangent(VICKERS_HALF_ANGLE), 1 / 3) * Math.sqrt(solid.youngsModulus)) / solid.hardness;
  return factor[form] * scale * Math.sqrt(load);
}
