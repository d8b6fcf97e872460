import type { ProcessConstants } from '#src/physics/constants.ts';
import type { Lab } from './lab.ts';

/** How a published value is known. */
export type Basis = 'read' | 'from memory' | 'common practice, no source' | 'derived';

/** What kind of figure a value is, for the error by figure; absent where it is an order, a sign or a shape. */
export type Quantity = 'rate' | 'toolWear' | 'overcut' | 'roughness' | 'damage' | 'edgeChip';

/** A range, both ends inside; null is open. */
export interface Range {
  readonly low: number | null;
  readonly high: number | null;
}

/** A published value: a range of numbers, both ends alike for one number, or words alone. */
export interface Published extends Range {
  readonly text: string;
}

/** What is compared in one line: a number in a band. */
export interface Part {
  /** What the number is. */
  readonly what: string;
  readonly unit: string;
  readonly quantity?: Quantity;
  readonly published: Published;
  readonly band: Range;
  /** Why the band is as wide as it is. */
  readonly why: string;
  /** The model's value at an amplitude (m, zero-to-peak), in the unit stated. */
  readonly predict: (lab: Lab, amplitude: number) => number;
  /** Library names of the work whose property ranges move the value most. */
  readonly workVaried?: string;
  /** Why it misses, where it does or is near to. */
  readonly reason?: string;
}

/** One claim about the process, compared part by part; it holds when all its parts do. */
export interface Check {
  /** D1 to D14: the main checks. B: base set, T: trends, E: edges and other effects. */
  readonly id: string;
  readonly claim: string;
  readonly source: string;
  readonly basis: Basis;
  /** Constants that were settled by it without the check's id in the words beside them. */
  readonly settled?: readonly (keyof ProcessConstants)[];
  readonly parts: readonly Part[];
}

/** Whether the predicted values are in the band at both amplitudes, at one, at none. */
export type Inside = 'both' | 'one' | 'none';

/** One line of the table. Predicted values are for 19 and 38 um zero-to-peak. */
export interface Row extends Omit<Part, 'predict' | 'reason' | 'workVaried'> {
  readonly id: string;
  readonly claim: string;
  readonly source: string;
  readonly basis: Basis;
  readonly predicted: readonly number[];
  /** Lowest and highest over the ranges of the work's hardness and toughness, both amplitudes, where asked for. */
  readonly propertyRange?: readonly [number, number];
  readonly inside: Inside;
  /** A constant was fitted to this check: it is a calibration and no validation. */
  readonly fitted: boolean;
  /** Why it misses; empty where it does not. */
  readonly reason: string;
}

/** One published number, with the digits it was published with. */
export const number = (value: number): Published => ({ text: String(value), low: value, high: value });

/** A published range. */
export const between = (low: number, high: number): Published => ({ text: `${low} to ${high}`, low, high });

/** A published statement without a number. */
export const words = (text: string): Published => ({ text, low: null, high: null });

/** A value within a factor either way. */
export const within = (value: number, factor: number): Range => ({ low: value / factor, high: value * factor });

/** More, or less, than one by more than rounding: a sign or an order. */
export const ABOVE_ONE: Range = { low: 1.001, high: null };
export const BELOW_ONE: Range = { low: 0, high: 0.999 };
export const NO_WIDTH = 'a sign or an order has no width';
