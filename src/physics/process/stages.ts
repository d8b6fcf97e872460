import type { Exit } from '../pass.ts';
import type { SlurryFace } from './slurry-face.ts';

/** A part of the way down in which the same area is in contact. SI. */
export interface Stage {
  /** Depth of the tool's tip at its start and end (m). */
  readonly from: number;
  readonly to: number;
  /** Area of the face in contact (m2). */
  readonly area: number;
  /** The slurry under it; fresh where it is absent. */
  readonly slurry?: SlurryFace;
}

/** A stage, or a part of one, under one load. */
export interface Leg extends Stage {
  /** Pressure on the area in contact (Pa). */
  readonly pressure: number;
}

/** A through-cut: the exit and the thickness of the work (m). */
export type Through = Exit & { readonly thickness: number };

/** What legs are made from. */
export interface LegSetting {
  readonly load: number;
  readonly depth: number;
  readonly faceArea: number;
  readonly slurry?: SlurryFace | undefined;
  readonly stages?: readonly Stage[] | undefined;
  readonly exit?: Through | undefined;
}

function checkStages(stages: readonly Stage[], depth: number): void {
  let at = stages[0]?.from ?? Number.NaN;
  for (const { from, to, area } of stages) {
    if (!(from >= 0 && to > from && Math.abs(from - at) <= 1e-9 * to))
      throw new RangeError(`a stage from ${from} m to ${to} m does not follow the one before`);
    if (!(area > 0 && area < Number.POSITIVE_INFINITY))
      throw new RangeError(`a stage needs an area above zero, got ${area} m2`);
    at = to;
  }
  if (!(Math.abs(at - depth) <= 1e-9 * depth)) throw new RangeError(`the stages end at ${at} m, not at ${depth} m`);
}

/**
 * The way down in legs: the stages in order, cut where the load is taken back before an exit.
 * @throws RangeError when stages leave out a part of the depth, overlap, or have no area
 */
export function legsOf(setting: LegSetting): Leg[] {
  const { load, depth, faceArea, slurry, exit } = setting;
  const stages = setting.stages ?? [{ from: 0, to: depth, area: faceArea, ...(slurry && { slurry }) }];
  checkStages(stages, depth);
  const eased = exit && depth >= exit.thickness ? Math.max(0, exit.thickness - exit.from) : Number.POSITIVE_INFINITY;
  return stages.flatMap((stage): Leg[] => {
    const full = load / stage.area;
    const kept = full * (exit?.loadShare ?? 1);
    if (stage.to <= eased) return [{ ...stage, pressure: full }];
    if (stage.from >= eased) return [{ ...stage, pressure: kept }];
    return [
      { ...stage, to: eased, pressure: full },
      { ...stage, from: eased, pressure: kept },
    ];
  });
}

/** The legs down to a depth that is not the last. */
export function legsTo(legs: readonly Leg[], depth: number): Leg[] {
  return legs.filter(({ from }) => from < depth).map((leg) => ({ ...leg, to: Math.min(leg.to, depth) }));
}
