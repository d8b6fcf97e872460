import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { gritLaw } from '#src/physics/grit-law.ts';
import { type JobRanges, type Range, type VariedInput, variedInputs, withInputs } from '#src/planning/inputs.ts';
import { conditionsOf, works } from '../support/conditions.ts';

const spread = (nominal: number, down: number, up = down): Range => ({
  low: nominal * (1 - down),
  nominal,
  high: nominal * (1 + up),
});

const glass = conditionsOf();
const alumina = conditionsOf({ work: works.alumina });
const { grit } = glass;
const lot = {
  gritMedian: spread(grit.massMedian, 0.05),
  gritSpread: spread(grit.spread, 0.3, 0),
  gritLargest: spread(grit.largest, 0.2),
} satisfies Partial<JobRanges>;

function namesOf(inputs: readonly VariedInput[]): string[] {
  return inputs.map(({ name }) => name);
}

describe('inputs', () => {
  test('are the ranges that have a width, and no others', () => {
    const ranges: JobRanges = {
      work: { hardness: spread(5.9e9, 0.1), density: spread(2230, 0) },
      crushStrength: spread(700e6, 0.5, 1),
      toolHardness: undefined,
    };
    expect(namesOf(variedInputs(glass, ranges))).toEqual(['hardness of the work', 'crushing strength of the grit']);
    expect(variedInputs(glass, { work: {} })).toEqual([]);
  });

  test('at their nominal values leave the conditions as they are, to rounding', () => {
    const { toughness, smallCrackToughness, hardness } = works.alumina;
    const ranges: JobRanges = {
      work: {
        hardness: spread(hardness, 0.1),
        toughness: spread(toughness, 0.2),
        smallCrackToughness: spread(smallCrackToughness, 0.3, 0.4),
      },
      ...lot,
      crushStrength: spread(700e6, 0.5, 1),
      toolHardness: spread(1.3e9, 0.1),
      chipWidthRatio: spread(3, 1 / 3),
    };
    const inputs = variedInputs(alumina, ranges);
    expect(inputs).toHaveLength(9);
    const back = withInputs(
      alumina,
      inputs,
      inputs.map(({ range }) => range.nominal),
    );
    expect(back.work).toEqual(alumina.work);
    expect(back.tool).toEqual(alumina.tool);
    expect(back.abrasive).toEqual(alumina.abrasive);
    expect(back.constants).toEqual(alumina.constants);
    // one power and one product of rounded ratios
    expect(back.grit.largest / grit.largest).toBeCloseTo(1, 14);
  });

  test.each([
    ['out of order', { low: 6e9, nominal: 5.9e9, high: 7e9 }],
    ['not positive', { low: 0, nominal: 5.9e9, high: 7e9 }],
    ['endless', { low: 5e9, nominal: 5.9e9, high: Infinity }],
    ['not numbers', { low: Number.NaN, nominal: 5.9e9, high: 7e9 }],
  ])('that are %s are refused by name', (_, hardness) => {
    expect(() => variedInputs(glass, { work: { hardness } })).toThrow(/hardness of the work/);
  });
});

describe('toughness', () => {
  test('of a glass is one property: its small-crack toughness is the same number', () => {
    const toughness = { low: 0.65e6, nominal: 0.77e6, high: 0.87e6 };
    const inputs = variedInputs(glass, { work: { toughness, smallCrackToughness: toughness } });
    expect(namesOf(inputs)).toEqual(['toughness of the work']);
    for (const value of [0.65e6, 0.7e6, 0.77e6, 0.81e6, 0.87e6]) {
      const { work } = withInputs(glass, inputs, [value]);
      expect(work.toughness).toBe(value);
      // a straight map of equal ranges, to rounding
      expect(work.smallCrackToughness / value).toBeCloseTo(1, 14);
    }
  });

  test('of a glass takes its small-crack toughness along when that has no range of its own', () => {
    const inputs = variedInputs(glass, { work: { toughness: spread(0.77e6, 0.1) } });
    expect(withInputs(glass, inputs, [0.7e6]).work.smallCrackToughness).toBeCloseTo(0.7e6, 6);
  });

  test('of a ceramic at the size of a grain never exceeds the long-crack one', () => {
    const work = {
      toughness: spread(works.alumina.toughness, 0.6, 0.3),
      smallCrackToughness: spread(1.75e6, 0.3, 0.5),
    };
    const ceramic = conditionsOf({ work: { ...works.alumina, smallCrackToughness: 1.75e6 } });
    const inputs = variedInputs(ceramic, { work });
    expect(namesOf(inputs)).toEqual(['toughness of the work', 'small-crack toughness of the work']);
    const unit = fc.double({ min: 0, max: 1, noNaN: true });
    fc.assert(
      fc.property(unit, unit, (a, b) => {
        const at = (range: Range, t: number) => range.low + t * (range.high - range.low);
        const small = at(work.smallCrackToughness, b);
        const got = withInputs(ceramic, inputs, [at(work.toughness, a), small]).work;
        expect(got.smallCrackToughness).toBe(Math.min(small, got.toughness));
      }),
      { seed: 61 },
    );
  });

  test('measured the other way round is left as it was measured', () => {
    const odd = conditionsOf({ work: { ...works.alumina, toughness: 1e6, smallCrackToughness: 1.2e6 } });
    const inputs = variedInputs(odd, { work: { toughness: spread(1e6, 0.1) } });
    expect(withInputs(odd, inputs, [0.95e6]).work.smallCrackToughness).toBe(1.2e6);
  });
});

describe('the grit lot', () => {
  test('is the law of its three numbers, whatever they are', () => {
    const inputs = variedInputs(glass, { work: {}, ...lot });
    const unit = fc.double({ min: 0, max: 1, noNaN: true });
    fc.assert(
      fc.property(unit, unit, unit, (...t) => {
        const values = inputs.map(({ range }, d) => range.low + (t[d] as number) * (range.high - range.low));
        const { grit: law } = withInputs(glass, inputs, values);
        expect(law).toEqual(gritLaw(law));
        expect(law.massMedian).toBe(values[0]);
        expect(law.spread).toBe(values[1]);
        expect(law.largest).toBeGreaterThanOrEqual(lot.gritLargest.low);
        expect(law.largest).toBeLessThanOrEqual(lot.gritLargest.high);
      }),
      { seed: 62 },
    );
  });

  test('that is coarser or wider has larger grains, as many spreads above its median', () => {
    const inputs = variedInputs(glass, { work: {}, ...lot });
    const place = (largest: number, median: number, s: number) => Math.log(largest / median) / s;
    const nominal = place(grit.largest, grit.massMedian, grit.spread);
    const coarser = withInputs(glass, inputs, [1.04 * grit.massMedian, 0.95 * grit.spread, grit.largest]).grit;
    // logarithms of ratios near two, to rounding
    expect(place(coarser.largest, coarser.massMedian, coarser.spread)).toBeCloseTo(nominal, 12);
  });

  test('keeps the cut-off of its standard when the largest grain has no range', () => {
    const { gritMedian, gritSpread } = lot;
    const inputs = variedInputs(glass, { work: {}, gritMedian, gritSpread });
    const { grit: law } = withInputs(glass, inputs, [gritMedian.high, gritSpread.low]);
    expect(law.largest).toBe(grit.largest);
    expect(law.meanVolumeDiameter).not.toBe(grit.meanVolumeDiameter);
  });
});
