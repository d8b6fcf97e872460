import { PASCALS_PER_MEGAPASCAL } from '#src/base/units.ts';
import { bestHole, type Case, HOLE, type Lab, rateAt } from '../lab.ts';
import { bestEstimate, bestPressure, bestRate, exponent, middleRate, on } from '../looks.ts';
import { ABOVE_ONE, between, type Check, NO_WIDTH, number, type Part, words } from '../record.ts';

/** A factor either way of a setting, for exponents: wide enough that the points of the load curve do not show. */
const AROUND = 1.2;

/** Exponent of a quantity in the amplitude, about the amplitude. */
const inAmplitude = (amplitude: number, of: (amplitude: number) => number) =>
  exponent(of, amplitude / AROUND, amplitude * AROUND);

const amplitudeLaw: Check = {
  id: 'D6',
  claim: 'the rate rises with the amplitude, and faster where the load is the best for each',
  source: 'Shaw 1956 (0.75), Cook 1966 (0.5), throwing 1.5; at the best load Rozenberg 1964 (2)',
  basis: 'from memory',
  parts: [
    {
      what: 'exponent at a quarter of the best load',
      unit: '',
      published: between(0.5, 1.5),
      band: { low: 0.5, high: 1.6 },
      why: 'spread of the published laws',
      predict: (lab, amplitude) => {
        const pressure = 0.25 * bestPressure(on(lab, amplitude));
        return inAmplitude(amplitude, (a) => middleRate(on(lab, a), pressure));
      },
      reason: 'lift-off stands in for everything that frees a grit, and its size law is assumed',
    },
    {
      what: 'exponent at the best load of each amplitude',
      unit: '',
      published: number(2),
      band: { low: 1.2, high: 2.3 },
      why: 'spread of the published laws',
      predict: (lab, amplitude) => inAmplitude(amplitude, (a) => bestRate(on(lab, a))),
      reason: 'how fast slurry is exchanged with a larger stroke is assumed, not measured',
    },
  ],
};

const LOW_FREQUENCY = 16e3;
const HIGH_FREQUENCY = 25e3;
const inFrequency = (of: (frequency: number) => number) => exponent(of, LOW_FREQUENCY, HIGH_FREQUENCY);

const frequencyLaw: Check = {
  id: 'D7',
  claim: 'the rate is about proportional to the frequency',
  source: 'Shaw 1956, Cook 1966; measured about linear',
  basis: 'from memory',
  parts: [
    {
      what: 'exponent from 16 to 25 kHz at half the best load',
      unit: '',
      published: number(1),
      band: { low: 0.8, high: 1.6 },
      why: 'measured near linear; exchange and thrown grits add to it',
      predict: (lab, amplitude) => {
        const pressure = 0.5 * bestPressure(on(lab, amplitude, { frequency: LOW_FREQUENCY }));
        return inFrequency((frequency) => middleRate(on(lab, amplitude, { frequency }), pressure));
      },
    },
    {
      what: 'the same at the best load of each frequency',
      unit: '',
      published: number(1),
      band: { low: 0.8, high: 1.6 },
      why: 'which load is held is not stated, so the same band',
      predict: (lab, amplitude) => inFrequency((frequency) => bestRate(on(lab, amplitude, { frequency }))),
    },
  ],
};

const loadExponent = (grade: string): Part => ({
  what: `exponent of the load, 0.15 to 0.4 of the best, ${grade}`,
  unit: '',
  published: between(0.75, 1),
  band: { low: 0.6, high: 1.15 },
  why: 'spread of the published laws',
  predict: (lab, amplitude) => {
    const bench = on(lab, amplitude, { grade });
    const best = bestPressure(bench);
    return exponent((pressure) => middleRate(bench, pressure), 0.15 * best, 0.4 * best);
  },
});

const bestLoad = (what: string, changes: Partial<Case>): Part => ({
  what: `best load, ${what}`,
  unit: 'MPa',
  published: between(0.05, 0.5),
  band: { low: 0.03, high: 0.6 },
  why: 'the place of the best load is about 55 % sure',
  predict: (lab, amplitude) => bestPressure(on(lab, amplitude, changes)) / PASCALS_PER_MEGAPASCAL,
  reason: 'grain strength and bulking of debris set it, and both are known to a factor 2',
});

const fall = (grade: string): Part => ({
  what: `rate at 2.5 times the best load over the best, ${grade}`,
  unit: '',
  published: words('falls'),
  band: { low: 0, high: 0.9 },
  why: 'a tenth is beyond the scatter of repeated holes',
  predict: (lab, amplitude) => {
    const bench = on(lab, amplitude, { grade });
    return middleRate(bench, 2.5 * bestPressure(bench)) / bestRate(bench);
  },
  reason: 'coarse grit bears what this load asks for',
});

const round = (diameter: number): Partial<Case> => ({ outline: { kind: 'circle', diameter } });

const loadLaw: Check = {
  id: 'D8',
  claim: 'the rate rises with the load to a best load and falls beyond it; the best load rises with the amplitude',
  source: 'Shaw 1956 (0.75), Cook 1966 (1); best loads 0.05 to 0.5 MPa; tools of 10 to 15 mm, grit of 30 to 100 um',
  basis: 'from memory',
  parts: [
    loadExponent('F320'),
    loadExponent('F150'),
    bestLoad('F320, 12.7 mm', {}),
    bestLoad('F220, 12.7 mm', { grade: 'F220' }),
    bestLoad('F150, 12.7 mm', { grade: 'F150' }),
    bestLoad('F320, 10 mm', round(10e-3)),
    bestLoad('F320, 15 mm', round(15e-3)),
    fall('F320'),
    fall('F150'),
    {
      what: 'best load at 1.2 A over that at A / 1.2',
      unit: '',
      published: words('above 1'),
      band: ABOVE_ONE,
      why: NO_WIDTH,
      predict: (lab, amplitude) =>
        bestPressure(on(lab, amplitude * AROUND)) / bestPressure(on(lab, amplitude / AROUND)),
    },
  ],
};

const concentrationStep = (high: number, low: number, band: Part['band']): Part => ({
  what: `best rate at ${100 * high} over ${100 * low} vol%`,
  unit: '',
  published: words('saturates at 30 to 40 vol%'),
  band,
  why: 'that it saturates is certain, the shape is not',
  predict: (lab, amplitude) =>
    bestRate(on(lab, amplitude, { concentration: high })) / bestRate(on(lab, amplitude, { concentration: low })),
  reason: 'the gap holds less grit than the slurry, and how much less is a model of packing',
});

const concentration: Check = {
  id: 'D9',
  claim: 'more grit in the slurry helps up to 30 to 40 vol% and little beyond',
  source: 'Kennedy and Grieve 1975',
  basis: 'from memory',
  parts: [concentrationStep(0.4, 0.2, { low: 1, high: 1.5 }), concentrationStep(0.6, 0.4, { low: 0.6, high: 1.1 })],
};

const hammering: Check = {
  id: 'D11',
  claim: 'most of the removal is by grits caught between tool and work',
  source: 'Soundararajan and Radhakrishnan 1986',
  basis: 'from memory',
  parts: [
    {
      what: 'share by hammering at the best load',
      unit: '',
      published: number(0.8),
      band: { low: 0.6, high: 1 },
      why: 'one source',
      predict: (lab, amplitude) => 1 - bestEstimate(lab, amplitude).freeImpactShare,
    },
  ],
};

const DEPTHS = [0, 0.25, 0.5, 0.75, 1, 1.5, 2] as const;
/** Load at which the fall with depth is looked at, over the best for one diameter: what a careful operator keeps. */
const CAREFUL = 0.6;

const byDepth = (lab: Lab, amplitude: number) => {
  const bench = on(lab, amplitude);
  const pressure = CAREFUL * bestHole(bench).pressure;
  return (diameters: number) => rateAt(bench, diameters * HOLE, pressure);
};

const depthLaw: Check = {
  id: 'D13',
  claim: 'the rate falls as a solid tool goes deeper without forced flow',
  source: 'El-Hofy, Fundamentals of Machining Processes: the sign; the amount is judgement',
  basis: 'read',
  parts: [
    {
      what: 'rate at one depth over that at the depth before, largest, down to two diameters',
      unit: '',
      published: words('never rises'),
      band: { low: 0, high: 1.02 },
      why: '2 % of noise',
      predict: (lab, amplitude) => {
        const at = byDepth(lab, amplitude);
        return DEPTHS.slice(1).reduce<number>(
          (most, depth, k) => Math.max(most, at(depth) / at(DEPTHS[k] as number)),
          0,
        );
      },
    },
    {
      what: 'rate one diameter deep over the start, 0.6 of the best load',
      unit: '',
      published: words('falls'),
      band: { low: 0.3, high: 0.95 },
      why: 'the size is judgement',
      predict: (lab, amplitude) => {
        const at = byDepth(lab, amplitude);
        return at(1) / at(0);
      },
    },
  ],
};

/** D6 to D9: amplitude, frequency, load, concentration. */
export const settingLaws: readonly Check[] = [amplitudeLaw, frequencyLaw, loadLaw, concentration];
/** D11 and D13. */
export const shareOfHammering: readonly Check[] = [hammering];
export const depthLaws: readonly Check[] = [depthLaw];
