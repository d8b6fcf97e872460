import { MICROMETRES_PER_METRE } from '#src/base/units.ts';
import { bestEstimate, bestRa, exponent, on } from '../looks.ts';
import { between, type Check, number, type Part, within } from '../record.ts';

const overcutPart = (what: string, of: 'overcutEntry' | 'overcutFloor'): Part => ({
  what: `radial overcut over d50, ${what}`,
  unit: '',
  quantity: 'overcut',
  published: between(0.75, 2),
  band: { low: 0.75, high: 3 },
  why: 'the rule may be meant on the radius or on the diameter',
  predict: (lab, amplitude) => bestEstimate(lab, amplitude)[of] / on(lab, amplitude).conditions.grit.massMedian,
  reason: 'the run-out is not stated, and the wall grows until the largest grains pass',
});

/** D10: size of the hole, at 2 um of run-out. */
export const overcut: Check = {
  id: 'D10',
  claim: 'the hole is larger than the tool by one to two grain sizes per side',
  source: 'rules of practice of several authors: 1.5 to 4 grain sizes, probably on the diameter',
  basis: 'from memory',
  parts: [overcutPart('entry', 'overcutEntry'), overcutPart('floor', 'overcutFloor')],
};

const raExponent = (name: string, work: string): Part => ({
  what: `exponent of Ra in d50, F600 to F230, ${name}`,
  unit: '',
  published: between(0.5, 1),
  band: { low: 0.4, high: 1.2 },
  why: 'remembered with low confidence',
  predict: (lab, amplitude) => {
    const size = (grade: string) => on(lab, amplitude, { work, grade }).conditions.grit.massMedian;
    const [fine, coarse] = [size('F600'), size('F230')];
    return exponent((d) => bestRa(lab, amplitude, { work, grade: d === fine ? 'F600' : 'F230' }), fine, coarse);
  },
  reason: 'a floor of dents is as rough as its dents are deep, and these grow with the grain',
});

const raLevel = (grade: string, value: number): Part => ({
  what: `Ra of tungsten carbide, ${grade}`,
  unit: 'um',
  quantity: 'roughness',
  published: number(value),
  band: within(value, 2.5),
  why: 'factor 2.5: remembered with low confidence, and "hard work" is no one material',
  predict: (lab, amplitude) => MICROMETRES_PER_METRE * bestRa(lab, amplitude, { work: 'wc_6co', grade }),
  reason: 'its floor is all dents, and the roughness of such a floor is taken from their whole depth',
});

/** D12: roughness of the floor. */
export const roughness: Check = {
  id: 'D12',
  claim: 'the floor is rougher by coarser grit and in glass; in hard work 0.5 um by 50 um grit, 0.25 um by 11 um',
  source: 'handbook figures for 240 to 280 mesh and 800 mesh',
  basis: 'from memory',
  parts: [
    raExponent('glass', 'soda_lime'),
    raExponent('tungsten carbide', 'wc_6co'),
    raLevel('F230', 0.5),
    raLevel('F240', 0.5),
    raLevel('F500', 0.25),
    raLevel('F600', 0.25),
    {
      what: 'Ra of glass over tungsten carbide, F320',
      unit: '',
      quantity: 'roughness',
      published: between(1.5, 4),
      band: { low: 1.2, high: 5 },
      why: 'remembered with low confidence',
      predict: (lab, amplitude) => bestRa(lab, amplitude) / bestRa(lab, amplitude, { work: 'wc_6co' }),
      reason: 'the floor of tungsten carbide comes out too rough: see above',
    },
  ],
};
