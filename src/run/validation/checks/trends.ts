import { type Bench, bestHole, type Case, type Lab } from '../lab.ts';
import { bestPressure, bestRa, bestRate, estimateOf, exponent, leastFall, on } from '../looks.ts';
import { gain, sign } from '../parts.ts';
import { ABOVE_ONE, BELOW_ONE, between, type Check, number, type Part, type Range, within } from '../record.ts';
import { wearOf } from './base-set.ts';

const ABRASIVES = ['diamond', 'b4c', 'sic_black', 'al2o3_brown'] as const;

const cuttingPower = (name: string, abrasive: string, low: number, high: number): Part => ({
  what: `cutting power over diamond, ${name}`,
  unit: '',
  published: between(low, high),
  band: { low: low / 2, high: high * 2 },
  why: 'factor 2: the setting is not stated and grain strength is known to a factor 2',
  predict: gain({ abrasive }, { abrasive: 'diamond' }),
  reason: 'the crushing strength of the grain decides, and listed strengths are good to a factor 2',
});

const abrasives: Check = {
  id: 'T5',
  claim: 'diamond is faster than boron carbide, that than silicon carbide, that than alumina',
  source: 'relative cutting power in machining handbooks',
  basis: 'from memory',
  parts: [
    sign(
      'least step of the order, best rate on glass',
      ABOVE_ONE,
      (lab, amplitude) => leastFall(ABRASIVES.map((abrasive) => bestRate(on(lab, amplitude, { abrasive })))),
      'black silicon carbide and brown alumina are listed with nearly the same crushing strength',
    ),
    cuttingPower('boron carbide', 'b4c', 0.5, 0.6),
    cuttingPower('silicon carbide', 'sic_black', 0.25, 0.45),
    cuttingPower('alumina', 'al2o3_brown', 0.14, 0.16),
  ],
};

const wearStep = (first: string, second: string, names: string, reason?: string): Part =>
  sign(
    `wear of ${names}`,
    ABOVE_ONE,
    (lab, amplitude) => wearOf(lab, amplitude, 'soda_lime', first) / wearOf(lab, amplitude, 'soda_lime', second),
    reason,
  );

const NO_DUCTILITY = 'the two have nearly the same hardness: the difference is one of ductility';

const tools: Check = {
  id: 'T6',
  claim: 'soft brittle tool metals wear most: brass, then mild steel, then stainless and hard tool steel',
  source: 'practice, from memory',
  basis: 'from memory',
  parts: [
    wearStep('brass_free_cutting', 'low_carbon_steel', 'brass over mild steel, in glass', NO_DUCTILITY),
    wearStep('low_carbon_steel', 'stainless_304', 'mild over stainless steel, in glass', NO_DUCTILITY),
    wearStep('low_carbon_steel', 'tool_steel', 'mild over hard tool steel, in glass'),
    sign(
      'wear in alumina over glass, mild-steel tool',
      ABOVE_ONE,
      (lab, amplitude) => wearOf(lab, amplitude, 'alumina_995') / wearOf(lab, amplitude, 'soda_lime'),
    ),
  ],
};

const GRADES = ['F600', 'F400', 'F320', 'F240', 'F220', 'F180', 'F120', 'F100', 'F80', 'F60'] as const;

/** d50 of the grade whose best rate is the highest, over the double amplitude; and the last grade over it. */
function bestGrade(lab: Lab, amplitude: number): { readonly overStroke: number; readonly decline: number } {
  const rates = GRADES.map((grade) => bestRate(on(lab, amplitude, { grade })));
  const highest = Math.max(...rates);
  const grade = GRADES[rates.indexOf(highest)] as string;
  const { massMedian } = on(lab, amplitude, { grade }).conditions.grit;
  return { overStroke: massMedian / (2 * amplitude), decline: (rates.at(-1) as number) / highest };
}

const sizeExponent = (work: string, name: string, band: Range, reason: string): Part => ({
  what: `exponent of the best rate in d50, F600 to F320, ${name}`,
  unit: '',
  published: between(0.5, 1),
  band,
  why: 'Cook 0.5, Shaw 1, for fine grit; a rise is read for ceramics',
  predict: (lab, amplitude) => {
    const sizeOf = (grade: string) => on(lab, amplitude, { work, grade }).conditions.grit.massMedian;
    const [fine, coarse] = [sizeOf('F600'), sizeOf('F320')];
    const gradeOf = (d: number) => (d === fine ? 'F600' : 'F320');
    return exponent((d) => bestRate(on(lab, amplitude, { work, grade: gradeOf(d) })), fine, coarse);
  },
  reason,
});

const RISES: Range = { low: 0, high: 1.4 };

const grit: Check = {
  id: 'T7',
  claim: 'coarser grit is faster up to a best size of one to one and a half strokes, and slower beyond',
  source: 'Shaw 1956 (1), Cook 1966 (0.5); rise read in Lee and Chan 1997 and Cherku 2008; best size from memory',
  basis: 'from memory',
  settled: ['liftOff'],
  parts: [
    sizeExponent('soda_lime', 'glass', { low: 0.3, high: 1.4 }, 'fine grit is crushed and starved less than assumed'),
    sizeExponent('sic_sintered', 'silicon carbide', RISES, 'fine grit stays below the cracking threshold'),
    sizeExponent(
      'wc_6co',
      'tungsten carbide',
      RISES,
      'the volume of a dent per load grows only as d^0.25, and lift-off takes more than that away',
    ),
    {
      what: 'best grade over the double amplitude, glass',
      unit: '',
      published: between(1, 1.5),
      band: { low: 0.5, high: 3 },
      why: 'factor 2: remembered, and steps of the grades are 1.3',
      predict: (lab, amplitude) => bestGrade(lab, amplitude).overStroke,
      reason: 'each grade has its own spread in its standard, and the spread shifts the best',
    },
    sign('rate of F60 over the best grade', BELOW_ONE, (lab, amplitude) => bestGrade(lab, amplitude).decline),
    sign(
      'best load of F600 over F320',
      BELOW_ONE,
      (lab, amplitude) => bestPressure(on(lab, amplitude, { grade: 'F600' })) / bestPressure(on(lab, amplitude)),
      'fine grains are stronger for their size, and in glass debris stalls the face before they crush',
    ),
  ],
};

const concentration: Check = {
  id: 'T8',
  claim: 'at low concentration the rate rises with its fourth root',
  source: 'Shaw 1956',
  basis: 'from memory',
  parts: [
    {
      what: 'exponent of the rate, 5 to 20 vol%, at the best load',
      unit: '',
      published: number(0.25),
      band: { low: 0, high: 0.6 },
      why: 'other counts of the grits give 0 to 0.5',
      predict: (lab, amplitude) => exponent((c) => bestRate(on(lab, amplitude, { concentration: c })), 0.05, 0.2),
    },
  ],
};

const thick = (viscosity: number): Partial<Case> => ({ carrier: { viscosity, density: 998 } });

const viscosityPart = (viscosity: number, value: number): Part => ({
  what: `best rate in a carrier of ${1e3 * viscosity} mPa s over water`,
  unit: '',
  published: number(value),
  band: within(value, 2.5),
  why: 'remembered to an order of magnitude',
  predict: gain(thick(viscosity)),
  reason: 'one Reynolds number stands for all exchange, and it falls too fast with viscosity',
});

const viscosity: Check = {
  id: 'T9',
  claim: 'a thicker carrier lowers the rate and the overcut',
  source: 'both signs are read; relative rates of 0.5 and 0.2 from memory',
  basis: 'from memory',
  parts: [
    sign('best rate in 3 mPa s over water', BELOW_ONE, gain(thick(3e-3))),
    viscosityPart(10e-3, 0.5),
    viscosityPart(100e-3, 0.2),
    sign(
      'overcut at the entry in 10 mPa s over water, both under 0.6 of the best load in 10 mPa s',
      BELOW_ONE,
      (lab, amplitude) => {
        const thickened = on(lab, amplitude, thick(10e-3));
        const pressure = 0.6 * bestHole(thickened).pressure;
        const overcut = (bench: Bench) => estimateOf(bench, pressure).overcutEntry;
        return overcut(thickened) / overcut(on(lab, amplitude));
      },
      'a slower cut leaves the wall exposed for longer, which makes up for what the carrier keeps from it',
    ),
  ],
};

const finish: Check = {
  id: 'T10',
  claim: 'roughness rises with the amplitude, and tougher, harder work is smoother and slower',
  source: 'Lee and Chan 1997 read for the amplitude; Dam, Quist and Schreiber 1995 from memory for the work',
  basis: 'from memory',
  parts: [
    sign(
      'Ra of glass at 1.2 A over A / 1.2',
      ABOVE_ONE,
      (lab, amplitude) => bestRa(lab, 1.2 * amplitude) / bestRa(lab, amplitude / 1.2),
      'the stroke hardly changes which grains bear the load',
    ),
    sign(
      'least step of Ra: glass, alumina 99.5 %, tungsten carbide',
      ABOVE_ONE,
      (lab, amplitude) =>
        leastFall(['soda_lime', 'alumina_995', 'wc_6co'].map((work) => bestRa(lab, amplitude, { work }))),
      'a grain of alumina that chips at all chips as deep as glass (see E6)',
    ),
  ],
};

/** Glass with one property changed. */
const altered = (lab: Lab, amplitude: number, change: 'hardness' | 'smallCrackToughness', factor: number) => {
  const { work } = on(lab, amplitude).conditions;
  return bestHole(on(lab, amplitude, { work: { ...work, [change]: factor * work[change] } })).rate;
};

const properties: Check = {
  id: 'T11',
  claim: 'the rate falls with the hardness and with the toughness of the work',
  source: 'Komaraiah and Reddy 1993',
  basis: 'from memory',
  parts: (
    [
      ['hardness', 'hardness'],
      ['toughness', 'smallCrackToughness'],
    ] as const
  ).map(([name, key]) =>
    sign(
      `rate with 1.3 times the ${name} of glass over the rate of glass`,
      BELOW_ONE,
      (lab, amplitude) => altered(lab, amplitude, key, 1.3) / altered(lab, amplitude, key, 1),
    ),
  ),
};

/** T5 to T11: how the rate, the finish and the tool respond to one setting at a time. */
export const trends: readonly Check[] = [abrasives, tools, grit, concentration, viscosity, finish, properties];
