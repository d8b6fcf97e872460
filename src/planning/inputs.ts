import { pow } from '#src/base/math.ts';
import { gritLaw } from '#src/physics/grit-law.ts';
import type { Conditions, WorkMaterial } from '#src/physics/records.ts';
import { PROPERTY_SOURCES } from './bands.ts';

/**
 * What is not known exactly about a job: properties of the work, the grit lot, the grit's strength and the tool. The
 * process constants are not among them, they are the model's and its error is stated apart.
 */

/** Least, nominal and largest value of a property, SI; the law between them is triangular. */
export interface Range {
  readonly low: number;
  readonly nominal: number;
  readonly high: number;
}

/** Ranges of a job's properties; what has none is not varied. SI. */
export interface JobRanges {
  readonly work: Readonly<Partial<Record<keyof WorkMaterial, Range>>>;
  /** Median by mass (m), spread of ln d, and largest grain (m) of the lot. */
  readonly gritMedian?: Range | undefined;
  readonly gritSpread?: Range | undefined;
  readonly gritLargest?: Range | undefined;
  /** Crushing strength of the grit at 100 um (Pa). */
  readonly crushStrength?: Range | undefined;
  readonly toolHardness?: Range | undefined;
  /** Width of an edge chip over its depth: the proportions of flakes, which vary from place to place. */
  readonly chipWidthRatio?: Range | undefined;
}

/** One property that is varied. */
export interface VariedInput {
  /** Words for a sentence, after "the". */
  readonly name: string;
  readonly path: string;
  /** The source of spread it belongs to, in words. */
  readonly source: string;
  readonly range: Range;
  /** Conditions with this property at `value`; of several inputs in the order of `variedInputs`. */
  readonly apply: (conditions: Conditions, value: number) => Conditions;
}

const [MATERIAL, LOT] = PROPERTY_SOURCES;

type Inputs = (ranges: JobRanges, nominal: Conditions) => readonly (Omit<VariedInput, 'range'> & { range?: Range })[];

function workInput(key: keyof WorkMaterial, name: string): Inputs {
  return ({ work }) => [
    {
      name: `${name} of the work`,
      path: `work.${key}`,
      source: MATERIAL,
      ...given(work[key]),
      apply: (conditions, value) => ({ ...conditions, work: { ...conditions.work, [key]: value } }),
    },
  ];
}

/** A field for a range that may be missing. */
function given(range: Range | undefined): { range?: Range } {
  return range === undefined ? {} : { range };
}

/** The point of `to` that lies where `value` lies in `from`: the ends, the nominal, and straight between them. */
function samePlace(value: number, from: Range, to: Range): number {
  const below = value < from.nominal;
  const width = below ? from.nominal - from.low : from.high - from.nominal;
  const reach = below ? to.nominal - to.low : to.high - to.nominal;
  return to.nominal + (width === 0 ? 0 : ((value - from.nominal) / width) * reach);
}

/**
 * Toughness, and with it the small-crack toughness where the two are one by the rule of the class (glass, crystal): the
 * latter then is no input of its own. Elsewhere it is, and stays at or below the toughness, as every class has it,
 * unless a measured nominal value says otherwise.
 */
const toughnesses: Inputs = ({ work }, nominal) => {
  const name = 'toughness of the work';
  const long = nominal.work.toughness;
  const small = nominal.work.smallCrackToughness;
  const capped = (tough: number, own: number) => (small > long ? own : Math.min(own, tough));
  const asOne = small === long && work.toughness !== undefined;
  const own = work.smallCrackToughness ?? work.toughness;
  const withToughness = (conditions: Conditions, value: number): Conditions => {
    const moved =
      asOne && work.toughness && own
        ? samePlace(value, work.toughness, own)
        : capped(value, conditions.work.smallCrackToughness);
    return { ...conditions, work: { ...conditions.work, toughness: value, smallCrackToughness: moved } };
  };
  return [
    { name, path: 'work.toughness', source: MATERIAL, ...given(work.toughness), apply: withToughness },
    {
      name: `small-crack ${name}`,
      path: 'work.smallCrackToughness',
      source: MATERIAL,
      ...given(asOne ? undefined : work.smallCrackToughness),
      apply: (conditions, value) => ({
        ...conditions,
        work: { ...conditions.work, smallCrackToughness: capped(conditions.work.toughness, value) },
      }),
    },
  ];
};

/**
 * The grit lot. Where the largest grain is varied, it stays as many spreads above the median as it was when these move
 * (a coarser or wider lot has larger grains), its own draw comes on top as a ratio, and the range's ends bound it. Where
 * it is not, the standard's cut-off holds whatever the lot.
 */
const gritLot: Inputs = ({ gritMedian, gritSpread, gritLargest }, nominal) => {
  const moves = gritLargest !== undefined;
  const most = nominal.grit.largest;
  const lot = { source: LOT };
  return [
    {
      ...lot,
      name: 'median size of the grit',
      path: 'grit.massMedian',
      ...given(gritMedian),
      apply: (c, value) => {
        const { massMedian, spread, largest } = c.grit;
        const scaled = moves ? largest * (value / massMedian) : largest;
        return { ...c, grit: gritLaw({ massMedian: value, spread, largest: scaled }) };
      },
    },
    {
      ...lot,
      name: "spread of the grit's sizes",
      path: 'grit.spread',
      ...given(gritSpread),
      apply: (c, value) => {
        const { massMedian, spread, largest } = c.grit;
        const scaled = moves ? massMedian * pow(largest / massMedian, value / spread) : largest;
        return { ...c, grit: gritLaw({ massMedian, spread: value, largest: scaled }) };
      },
    },
    {
      ...lot,
      name: 'largest grain of the grit',
      path: 'grit.largest',
      ...given(gritLargest),
      apply: (c, value) => {
        const { low, high } = gritLargest as Range;
        const largest = Math.min(high, Math.max(low, c.grit.largest * (value / most)));
        return { ...c, grit: gritLaw({ massMedian: c.grit.massMedian, spread: c.grit.spread, largest }) };
      },
    },
  ];
};

const rest: Inputs = ({ crushStrength, toolHardness, chipWidthRatio }) => [
  {
    name: 'crushing strength of the grit',
    path: 'abrasive.crushStrength',
    source: MATERIAL,
    ...given(crushStrength),
    apply: (c, value) => ({ ...c, abrasive: { ...c.abrasive, crushStrength: value } }),
  },
  {
    name: 'hardness of the tool',
    path: 'tool.hardness',
    source: MATERIAL,
    ...given(toolHardness),
    apply: (c, value) => ({ ...c, tool: { ...c.tool, hardness: value } }),
  },
  {
    name: 'proportions of edge chips',
    path: 'constants.chipWidthRatio',
    source: MATERIAL,
    ...given(chipWidthRatio),
    apply: (c, value) => ({ ...c, constants: { ...c.constants, chipWidthRatio: value } }),
  },
];

/** What matters most first: the first inputs of a designed sample fill their space best. */
const ALL: readonly Inputs[] = [
  workInput('hardness', 'hardness'),
  toughnesses,
  gritLot,
  rest,
  workInput('youngsModulus', "Young's modulus"),
  workInput('poisson', "Poisson's ratio"),
  workInput('density', 'density'),
];

function checked(input: VariedInput): VariedInput {
  const { low, nominal, high } = input.range;
  if (0 < low && low <= nominal && nominal <= high && high < Infinity) return input;
  throw new RangeError(`the range of the ${input.name} is not in order: ${low}, ${nominal}, ${high}`);
}

/**
 * The properties of a job that are varied: those with a range that has a width. Nominal values of the ranges are taken to
 * be those of `conditions`.
 * @throws RangeError naming the property whose range is not positive, finite and in order
 */
export function variedInputs(conditions: Conditions, ranges: JobRanges): VariedInput[] {
  return ALL.flatMap((inputs) => inputs(ranges, conditions))
    .flatMap(({ range, ...input }) => (range === undefined ? [] : [checked({ ...input, range })]))
    .filter(({ range }) => range.high > range.low);
}

/** Conditions with every input at its value, same order. */
export function withInputs(
  conditions: Conditions,
  inputs: readonly VariedInput[],
  values: ArrayLike<number>,
): Conditions {
  return inputs.reduce((current, input, d) => input.apply(current, values[d] as number), conditions);
}
