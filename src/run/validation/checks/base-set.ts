import { bestHole, type Case, type Lab } from '../lab.ts';
import { leastFall, mmPerMin, on, overGlass } from '../looks.ts';
import { ABOVE_ONE, between, type Check, NO_WIDTH, number, type Part, within, words } from '../record.ts';

/** The base set: penetration and tool wear by material. */
export const HANDBOOK = 'handbook table, e.g. Benedict, Nontraditional Manufacturing Processes (1987)';

const rateOverGlass = (part: Pick<Part, 'published' | 'band' | 'why' | 'reason'>, work: string, name = ''): Part => ({
  what: `rate over glass${name}`,
  unit: '',
  quantity: 'rate',
  predict: (lab, amplitude) => overGlass(lab, amplitude, work),
  workVaried: work,
  ...part,
});

/** Length of tool lost over depth of the handbook's hole. */
export const wearOf = (lab: Lab, amplitude: number, work: Case['work'], tool = 'low_carbon_steel') =>
  bestHole(on(lab, amplitude, { work, tool })).wear;

const wearPart = (work: string, name: string, published: number, factor: number, why: string): Part => ({
  what: `tool : work wear, ${name}`,
  unit: '',
  quantity: 'toolWear',
  published: number(published),
  band: within(published, factor),
  why: `factor ${factor}: ${why}`,
  predict: (lab, amplitude) => wearOf(lab, amplitude, work),
  reason: 'one wear constant stands for all; the published ratio says neither grade nor volume or length',
});

const rate: Check = {
  id: 'D1',
  claim: 'soda-lime glass is sunk at the handbook rate',
  source: HANDBOOK,
  basis: 'from memory',
  parts: [
    {
      what: 'rate at the best load',
      unit: 'mm/min',
      quantity: 'rate',
      published: number(3.81),
      band: { low: 1.5, high: 9.5 },
      why: 'factor 2.5: the reading of the amplitude alone is about 2; the load is not stated',
      predict: (lab, amplitude) => mmPerMin(bestHole(on(lab, amplitude)).rate),
      workVaried: 'soda_lime',
      reason: 'the load and the amplitude of the handbook are not stated',
    },
  ],
};

const ratioCheck = (id: string, claim: string, part: Part): Check => ({
  id,
  claim,
  source: HANDBOOK,
  basis: 'from memory',
  parts: [part],
});

const quartz = ratioCheck(
  'D2',
  'quartz is slower than glass by the handbook ratio',
  rateOverGlass(
    {
      published: number(0.43),
      band: { low: 0.22, high: 0.85 },
      why: 'factor 2: hardness and toughness of quartz are uncertain by 20 to 30 %',
      reason: 'the properties of quartz differ by direction, and the model takes one of each',
    },
    'quartz',
  ),
);

const germanium = ratioCheck(
  'D3',
  'germanium is slower than glass by the handbook ratio',
  rateOverGlass(
    {
      published: number(0.57),
      band: { low: 0.3, high: 1.3 },
      why: 'factor 2: lateral cracks alone run high, so that a mild miss tells something',
      reason: 'its low toughness makes lateral cracks long; the ductile contact of germanium is not in the laws',
    },
    'germanium',
  ),
);

const carbide = ratioCheck(
  'D4',
  'tungsten carbide with 6 % cobalt is slower than glass by the handbook ratio',
  rateOverGlass(
    {
      published: number(0.067),
      band: { low: 0.03, high: 0.15 },
      why: 'factor 2.2: toughness 8 to 14 MPa m^0.5',
      reason: 'only dents remove it: carbide grains pulled out by fatigue of the cobalt are not modelled',
    },
    'wc_6co',
  ),
);

const NO_BASIS = 'whether by volume or by length is not stated';

const wear: Check = {
  id: 'D5',
  claim: 'a mild-steel tool wears little in glass, more in quartz, most in tungsten carbide',
  source: HANDBOOK,
  basis: 'from memory',
  parts: [
    wearPart('soda_lime', 'glass', 0.01, 3, NO_BASIS),
    wearPart('quartz', 'quartz', 0.02, 3, NO_BASIS),
    wearPart('wc_6co', 'tungsten carbide', 0.67, 3, NO_BASIS),
    {
      what: 'least step of the order carbide, quartz, glass',
      unit: '',
      published: words('strict order'),
      band: ABOVE_ONE,
      why: NO_WIDTH,
      predict: (lab, amplitude) =>
        leastFall(['wc_6co', 'quartz', 'soda_lime'].map((work) => wearOf(lab, amplitude, work))),
    },
  ],
};

const ALUMINAS = [
  ['alumina_96', '96 %'],
  ['alumina_995', '99.5 %'],
] as const;

const ceramic: Check = {
  id: 'D14',
  claim: 'technical ceramic of the alumina type is slower than glass by the handbook ratio and wears the tool more',
  source: HANDBOOK,
  basis: 'from memory',
  parts: ALUMINAS.flatMap(([work, name]) => [
    rateOverGlass(
      {
        published: number(0.4),
        band: { low: 0.15, high: 0.7 },
        why: 'grade unknown; common brittleness indices give 0.15 to 0.45',
        reason: 'the toughness of alumina at the size of a grain is known to a factor 2 at best',
      },
      work,
      `, alumina ${name}`,
    ),
    wearPart(work, `alumina ${name}`, 0.013, 4, `grade unknown; ${NO_BASIS}`),
  ]),
};

/** Cavities that the laws of brittle work cannot be trusted with: a ductile metal as the work, never cracking. */
const ductile = (youngsModulus: number, poisson: number, hardness: number, density: number): Case['work'] => ({
  youngsModulus,
  poisson,
  hardness,
  density,
  toughness: 100e6,
  smallCrackToughness: 100e6,
});

/** Hardened tool steel, mild steel, brass and titanium as work: as in the library of tool materials. */
export const DUCTILE = {
  toolSteel: ductile(193e9, 0.29, 7.2e9, 7810),
  mildSteel: ductile(205e9, 0.29, 1.3e9, 7870),
  brass: ductile(97e9, 0.31, 1.4e9, 8500),
  titanium: ductile(114e9, 0.33, 3.42e9, 4430),
} as const;

const step = (faster: readonly [string, Case['work']], slower: readonly [string, Case['work']], reason = ''): Part => ({
  what: `rate of ${faster[0]} over ${slower[0]}`,
  unit: '',
  published: words('above 1'),
  band: ABOVE_ONE,
  why: NO_WIDTH,
  predict: (lab, amplitude) =>
    bestHole(on(lab, amplitude, { work: faster[1] })).rate / bestHole(on(lab, amplitude, { work: slower[1] })).rate,
  reason,
});

const ordering: Check = {
  id: 'B1',
  claim: 'the handbook order of materials: glass, germanium, quartz, technical ceramic, tungsten carbide, tool steel',
  source: HANDBOOK,
  basis: 'from memory',
  parts: [
    step(
      ['glass', 'soda_lime'],
      ['germanium', 'germanium'],
      'germanium comes out faster than glass: lateral cracks scale with the inverse square of its low toughness (see D3)',
    ),
    step(['germanium', 'germanium'], ['quartz', 'quartz']),
    step(
      ['quartz', 'quartz'],
      ['alumina 99.5 %', 'alumina_995'],
      'the two are 8 % apart in the handbook, less than the model knows of either',
    ),
    step(['alumina 99.5 %', 'alumina_995'], ['tungsten carbide', 'wc_6co']),
    step(['tungsten carbide', 'wc_6co'], ['tool steel', DUCTILE.toolSteel]),
  ],
};

const METALS = [
  ['mild steel', DUCTILE.mildSteel, 0.039],
  ['brass', DUCTILE.brass, 0.066],
  ['titanium', DUCTILE.titanium, 0.04],
] as const;

const metals: Check = {
  id: 'B2',
  claim: 'ductile metals are sunk at most a tenth as fast as glass',
  source: 'Neppiras and Foskett 1956 to 1957 (16.3 kHz, 12.5 um, 100 mesh)',
  basis: 'from memory',
  parts: METALS.map(([name, work, value]) => ({
    what: `rate over glass, ${name}`,
    unit: '',
    published: { ...between(0, 0.1), text: String(value) },
    band: { low: 0, high: 0.1 },
    why: 'an upper bound; numbers for one setting only',
    predict: (lab, amplitude) => overGlass(lab, amplitude, work),
    reason: 'what leaves a dent in ductile metal is bounded by where cracks can start, not followed',
  })),
};

/** D1 to D5 and D14: the base set. */
export const baseSet: readonly Check[] = [rate, quartz, germanium, carbide, wear];
export const ceramics: readonly Check[] = [ceramic];
/** The base set's order, and metals. */
export const orders: readonly Check[] = [ordering, metals];
