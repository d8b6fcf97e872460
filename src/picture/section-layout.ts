import { oneTwoFive } from './ticks.ts';

/** Where things lie on the section drawing: scale, edges and the cut through a thick work. Units of 1/96 inch. */
export interface SectionFrame {
  readonly width: number;
  readonly height: number;
  /** Units per metre across and down. */
  readonly across: number;
  readonly down: number;
  /** Vertical over horizontal scale: 1 except for very flat or very deep cavities. */
  readonly exaggeration: number;
  /** Middle of the cavity, entry face, floor and lower edge of what is drawn of the work. */
  readonly middle: number;
  readonly face: number;
  readonly floor: number;
  readonly bottom: number;
  /** The work is thicker than drawn: a break runs through it. */
  readonly broken: boolean;
  /** The enlarged corner stands beneath the work, where the work is too thin to hold it. */
  readonly cornerBelow: boolean;
  /** Edges of the work as drawn. */
  readonly left: number;
  readonly right: number;
}

export const SECTION_WIDTH = 680;
/** 180 mm, the text width of an A4 page, at 96 units an inch. */
export const PRINT_WIDTH = (SECTION_WIDTH * 25.4e-3) / 96;

const FACE = 132;
const LEFT_ZONE = 160;
const RIGHT_ZONE = 206;
const LOWEST_CAVITY = 64;
const HIGHEST_CAVITY = 300;
const NARROWEST_CAVITY = 110;
const BELOW_FLOOR = 72;
const TALLEST_REST = 120;

/** Radius of the circle with the corner enlarged. */
export const DETAIL_RADIUS = 58;

function verticalScale(depth: number, entrySize: number): { across: number; exaggeration: number } {
  const widest = SECTION_WIDTH - LEFT_ZONE - RIGHT_ZONE;
  const across = widest / entrySize;
  const height = depth * across;
  if (height < LOWEST_CAVITY) {
    const least = LOWEST_CAVITY / height;
    let times = oneTwoFive(least);
    if (times < least) times = oneTwoFive(times * 2.5);
    return { across, exaggeration: times };
  }
  if (height <= HIGHEST_CAVITY) return { across, exaggeration: 1 };
  const narrowed = HIGHEST_CAVITY / depth;
  if (narrowed * entrySize >= NARROWEST_CAVITY) return { across: narrowed, exaggeration: 1 };
  const kept = NARROWEST_CAVITY / entrySize;
  return { across: kept, exaggeration: oneTwoFive(HIGHEST_CAVITY / (depth * kept)) };
}

/** Lays out a cavity of this depth and entry size (m) in a work of this thickness, with `foot` units for text beneath. */
export function sectionFrame(depth: number, entrySize: number, thickness: number, foot: number): SectionFrame {
  const { across, exaggeration } = verticalScale(depth, entrySize);
  const down = across * exaggeration;
  const floor = FACE + depth * down;
  const rest = (thickness - depth) * down;
  const broken = rest > TALLEST_REST;
  const bottom = broken ? floor + BELOW_FLOOR : floor + Math.max(2, rest);
  const cornerBelow = !broken && bottom < FACE + 2 * DETAIL_RADIUS + 70;
  const corner = cornerBelow ? bottom + 2 * DETAIL_RADIUS + 34 : FACE + 196;
  const below = Math.max(bottom, floor + BELOW_FLOOR + (broken ? 34 : 0), corner);
  return {
    width: SECTION_WIDTH,
    height: below + foot,
    across,
    down,
    exaggeration,
    middle: (LEFT_ZONE + SECTION_WIDTH - RIGHT_ZONE) / 2,
    face: FACE,
    floor,
    bottom: broken ? below : bottom,
    broken,
    cornerBelow,
    left: 8,
    right: SECTION_WIDTH - 8,
  };
}
