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
  /** Lower edge of what is drawn of a backing; `bottom` where there is none. */
  readonly backing: number;
}

/** What the frame is laid out for. Lengths in m. */
export interface SectionSpace {
  readonly depth: number;
  /** From the leftmost wall to the rightmost. */
  readonly span: number;
  readonly thickness: number;
  /** Vertical dimensions side by side at the left. */
  readonly heights?: number;
  readonly through?: 'air' | 'backing';
  /** No corner is drawn enlarged. */
  readonly cornerless?: boolean;
  /** Units for text beneath. */
  readonly foot: number;
}

export const SECTION_WIDTH = 680;
/** 180 mm, the text width of an A4 page, at 96 units an inch. */
export const PRINT_WIDTH = (SECTION_WIDTH * 25.4e-3) / 96;

const FACE = 132;
/** Room at the left for two vertical dimensions; each further one takes a step more. */
const LEFT_ZONE = 160;
/** Distance of one vertical dimension from the next. */
export const HEIGHT_STEP = 52;
const RIGHT_ZONE = 206;
const LOWEST_CAVITY = 64;
const HIGHEST_CAVITY = 300;
const NARROWEST_CAVITY = 110;
const BELOW_FLOOR = 72;
const TALLEST_REST = 120;
const BACKING = 50;
const BELOW_EXIT = 62;

/** Radius of the circle with the corner enlarged. */
export const DETAIL_RADIUS = 58;

function verticalScale(depth: number, span: number, widest: number): { across: number; exaggeration: number } {
  const across = widest / span;
  const height = depth * across;
  if (height < LOWEST_CAVITY) {
    const least = LOWEST_CAVITY / height;
    let times = oneTwoFive(least);
    if (times < least) times = oneTwoFive(times * 2.5);
    return { across, exaggeration: times };
  }
  if (height <= HIGHEST_CAVITY) return { across, exaggeration: 1 };
  const narrowed = HIGHEST_CAVITY / depth;
  if (narrowed * span >= NARROWEST_CAVITY) return { across: narrowed, exaggeration: 1 };
  const kept = NARROWEST_CAVITY / span;
  return { across: kept, exaggeration: oneTwoFive(HIGHEST_CAVITY / (depth * kept)) };
}

/** Lower edges of the work, of the backing and of the drawing above its foot. */
function edgesBelow(space: SectionSpace, floor: number, rest: number) {
  const { through, cornerless } = space;
  if (through !== undefined) {
    const backing = through === 'backing' ? floor + BACKING : floor;
    return { broken: false, cornerBelow: false, bottom: floor, backing, below: backing + BELOW_EXIT };
  }
  const broken = rest > TALLEST_REST;
  const bottom = broken ? floor + BELOW_FLOOR : floor + Math.max(2, rest);
  const cornerBelow = !cornerless && !broken && bottom < FACE + 2 * DETAIL_RADIUS + 70;
  const corner = cornerBelow ? bottom + 2 * DETAIL_RADIUS + 34 : cornerless ? 0 : FACE + 196;
  const below = Math.max(bottom, floor + BELOW_FLOOR + (broken ? 34 : 0), corner);
  const edge = broken ? below : bottom;
  return { broken, cornerBelow, bottom: edge, backing: edge, below };
}

/** Lays out a cavity in its work. */
export function sectionFrame(space: SectionSpace): SectionFrame {
  const { depth, span, thickness } = space;
  const leftZone = LEFT_ZONE + HEIGHT_STEP * Math.max(0, (space.heights ?? 2) - 2);
  const { across, exaggeration } = verticalScale(depth, span, SECTION_WIDTH - leftZone - RIGHT_ZONE);
  const down = across * exaggeration;
  const floor = FACE + depth * down;
  const { below, ...edges } = edgesBelow(space, floor, (thickness - depth) * down);
  return {
    width: SECTION_WIDTH,
    height: below + space.foot,
    across,
    down,
    exaggeration,
    middle: (leftZone + SECTION_WIDTH - RIGHT_ZONE) / 2,
    face: FACE,
    floor,
    ...edges,
    left: 8,
    right: SECTION_WIDTH - 8,
  };
}
