import { DEGREES_PER_RADIAN, MICROMETRES_PER_METRE, MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import { edgeChipDistance, edgeChipLoad, exitLigament } from '#src/physics/edge-chip.ts';
import { bestHole } from '../lab.ts';
import { bestEstimate, bestRa, mmPerMin, on } from '../looks.ts';
import { ABOVE_ONE, between, type Check, NO_WIDTH, number, type Part, within, words } from '../record.ts';
import { DUCTILE, HANDBOOK, wearOf } from './base-set.ts';

const CLOSED = 'the law is the published one: 1 % for the digits of its constant';

const closedForm = (what: string, unit: string, value: number, predict: Part['predict']): Part => ({
  what,
  unit,
  published: number(value),
  band: within(value, 1.01),
  why: CLOSED,
  predict,
});

const edgeLaw: Check = {
  id: 'E1',
  claim: 'an edge chips at 9.3 times toughness times distance to the power of 3/2',
  source: 'Chai and Lawn, Acta Mater. 55 (2007) 2555: the form is read, 9.3 is from memory',
  basis: 'from memory',
  parts: [
    closedForm('load, glass, 0.1 mm', 'N', 6.975, (lab) => edgeChipLoad(0.75e6, 0.1e-3, lab.constants)),
    closedForm('load, alumina of 4 MPa m^0.5, 0.5 mm', 'N', 415.9, (lab) => edgeChipLoad(4e6, 0.5e-3, lab.constants)),
    closedForm(
      'distance, glass, 1 N',
      'um',
      27.39,
      (lab) => MICROMETRES_PER_METRE * edgeChipDistance(0.75e6, 1, lab.constants),
    ),
  ],
};

const entryChips: Check = {
  id: 'E2',
  claim: 'chips at the entry are one to three grain sizes wide',
  source: 'reports of several authors',
  basis: 'from memory',
  settled: ['runoutScatter', 'runoutCap'],
  parts: (['F220', 'F320', 'F600'] as const).map((grade) => ({
    what: `95 % of the rim is chipped less wide than, over d50, ${grade}`,
    unit: '',
    quantity: 'edgeChip',
    published: between(1, 3),
    band: { low: 0.5, high: 4 },
    why: 'an order of magnitude only',
    predict: (lab, amplitude) => {
      const { grit } = on(lab, amplitude, { grade }).conditions;
      return bestEstimate(lab, amplitude, { grade }).edgeChipP95.width / grit.massMedian;
    },
    reason: '2 um of run-out is coarse for fine grit: the squeeze at the wall does not shrink with the grain',
  })),
};

const exit: Check = {
  id: 'E3',
  claim: 'without a backing the last ligament breaks at a thickness set by load and strength alone',
  source: 'clamped plate under uniform pressure',
  basis: 'derived',
  parts: [
    closedForm('ligament, 10 N, 40 MPa', 'mm', 0.2443, () => MILLIMETRES_PER_METRE * exitLigament(10, 40e6)),
    closedForm('ligament, 2 N, 40 MPa', 'mm', 0.1093, () => MILLIMETRES_PER_METRE * exitLigament(2, 40e6)),
  ],
};

const table: Check = {
  id: 'E4',
  claim: 'handbook rates and wear ratios of tungsten carbide and tool steel, in their own numbers',
  source: HANDBOOK,
  basis: 'from memory',
  settled: ['chipYield', 'plasticShare'],
  parts: [
    {
      what: 'rate in tungsten carbide',
      unit: 'mm/min',
      quantity: 'rate',
      published: number(0.25),
      band: within(0.25, 2),
      why: 'factor 2, the reading of the amplitude',
      predict: (lab, amplitude) => mmPerMin(bestHole(on(lab, amplitude, { work: 'wc_6co' })).rate),
      reason: 'glass is slow at the small reading, and carbide slower still than the ratio (see D1, D4)',
    },
    {
      what: 'stock : tool wear, tool steel by mild steel',
      unit: '',
      published: number(1),
      band: within(1, 2),
      why: 'factor 2',
      predict: (lab, amplitude) => 1 / wearOf(lab, amplitude, DUCTILE.toolSteel),
      reason:
        'what leaves a dent in ductile metal is bounded by where cracks can start (B2), not followed, and comes out too little',
    },
  ],
};

/** Peak-to-valley over the mean roughness of a cut floor. Assumed. */
const RT_OVER_RA = 9;

const damageDepth: Check = {
  id: 'E5',
  claim: 'damage under the floor is as deep as under other loose-abrasive floors',
  source:
    'bounds 0.3 L^0.68 and 2 L^0.85 (um, grain size L): Lambropoulos, from memory; damage over Rt of 2.92 +- 0.75 (lapping) to 7.4 +- 1.3: abstracts read',
  basis: 'from memory',
  parts: [
    ...(
      [
        ['F600', 1.37, 13.3],
        ['F320', 2.98, 35.2],
        ['F220', 4.88, 65.4],
      ] as const
    ).map(
      ([grade, low, high]): Part => ({
        what: `damage depth in glass, 99 % of the hits, ${grade}`,
        unit: 'um',
        quantity: 'damage',
        published: between(low, high),
        band: { low, high },
        why: 'the published bounds themselves',
        predict: (lab, amplitude) => MICROMETRES_PER_METRE * bestEstimate(lab, amplitude, { grade }).damageDepth,
        reason: 'fine grit at its own best load bears more for its size than it does in lapping',
      }),
    ),
    {
      what: 'damage depth in glass, 99.9 % of the hits, F320',
      unit: 'um',
      quantity: 'damage',
      published: between(2.98, 35.2),
      band: { low: 2.98, high: 35.2 },
      why: 'the published bounds, though they are for what is seen in sections: one crack in a hundred, not in a thousand',
      predict: (lab, amplitude) => MICROMETRES_PER_METRE * bestEstimate(lab, amplitude).largestDamage,
      reason: 'at the best load a few grains bear more than any does in lapping',
    },
    {
      what: `largest damage over Rt, glass, F320 (Rt taken as ${RT_OVER_RA} Ra)`,
      unit: '',
      published: between(2.9, 7.4),
      band: { low: 1.4, high: 11 },
      why: 'between the smaller ratio halved and the larger one and a half times: Rt over Ra is 6 to 14',
      predict: (lab, amplitude) => {
        const { largestDamage, floorRa } = bestEstimate(lab, amplitude);
        return largestDamage / (RT_OVER_RA * floorRa);
      },
      reason: 'damage or roughness is off: see D12',
    },
  ],
};

const GRAINS =
  'a grain of ceramic that chips at all chips as deep as glass, b ~ E^(1/2) / H; loss along grain boundaries is not modelled';

const sizeOverRa = (
  part: Pick<Part, 'published' | 'band' | 'why'> & { readonly reason?: string },
  work: string,
  name: string,
): Part => ({
  what: `d50 over Ra, ${name}, F320`,
  unit: '',
  quantity: 'roughness',
  predict: (lab, amplitude) => {
    const { massMedian } = on(lab, amplitude, { work }).conditions.grit;
    return massMedian / bestRa(lab, amplitude, { work });
  },
  ...part,
});

const HARD = {
  published: between(60, 100),
  band: { low: 30, high: 200 },
  why: 'factor 2: an order of magnitude only',
  reason: GRAINS,
} as const;

const roughness: Check = {
  id: 'E6',
  claim: 'Ra is a fixed share of the grain: d50/27 to d50/35 in glass, d50/60 to d50/100 in hard work',
  source: 'loose-abrasive lapping',
  basis: 'from memory',
  settled: ['crackDepth'],
  parts: [
    sizeOverRa(
      {
        published: between(27, 35),
        band: { low: 20, high: 46 },
        why: 'form right, numbers within 30 %',
        reason: 'at the best load the few largest grains bear most: the floor is rougher than below it',
      },
      'soda_lime',
      'glass',
    ),
    sizeOverRa(HARD, 'alumina_995', 'alumina 99.5 %'),
    sizeOverRa(HARD, 'si3n4', 'silicon nitride'),
    sizeOverRa({ ...HARD, reason: 'its floor is all dents (see D12)' }, 'wc_6co', 'tungsten carbide'),
  ],
};

const wall: Check = {
  id: 'E7',
  claim: 'the hole is wider at the entry: a taper of 0.1 to 0.5 degrees per side',
  source: 'practice; no number for blind holes is known that could be leant on',
  basis: 'from memory',
  parts: [
    {
      what: 'overcut at the entry over the floor',
      unit: '',
      published: words('above 1'),
      band: ABOVE_ONE,
      why: NO_WIDTH,
      predict: (lab, amplitude) => {
        const { overcutEntry, overcutFloor } = bestEstimate(lab, amplitude);
        return overcutEntry / overcutFloor;
      },
    },
    {
      what: 'taper per side, glass, 12.7 mm deep',
      unit: 'deg',
      published: between(0.1, 0.5),
      band: { low: 0.03, high: 0.5 },
      why: '0.05 to 0.2 mm on the diameter over 20 to 40 mm is 0.036 to 0.29 deg: both are remembered',
      predict: (lab, amplitude) => DEGREES_PER_RADIAN * bestEstimate(lab, amplitude).taper,
      reason: 'the run-out is not stated; wear of the tool down its side adds to the taper',
    },
  ],
};

const corner: Check = {
  id: 'E8',
  claim: 'the corner between wall and floor is rounded by 0.02 to 0.1 mm, fine grit to rough',
  source: 'practice',
  basis: 'from memory',
  parts: [
    {
      what: 'corner radius, glass, F320, tool edge new at 0.03 mm',
      unit: 'mm',
      published: between(0.02, 0.1),
      band: { low: 0.01, high: 0.2 },
      why: 'factor 2: an order of magnitude only',
      predict: (lab, amplitude) => MILLIMETRES_PER_METRE * bestEstimate(lab, amplitude).cornerRadius,
      reason: 'the edge of the tool and the gaps under and beside it add up',
    },
  ],
};

const sideWear: Check = {
  id: 'E9',
  claim: 'the tool loses a tenth to a fifth as much of its diameter as of its length',
  source: 'practice',
  basis: 'from memory',
  parts: [
    {
      what: 'loss on the diameter over loss of length, glass, 12.7 mm deep',
      unit: '',
      published: between(0.1, 0.2),
      band: { low: 0.05, high: 0.4 },
      why: 'factor 2: remembered, and neither depth nor work is stated',
      predict: (lab, amplitude) => {
        const { toolSideLoss, toolWearLength } = bestEstimate(lab, amplitude);
        return (2 * toolSideLoss) / toolWearLength;
      },
      reason: 'it rests on the run-out, which is not stated: squeezes of 2 um wear the side little',
    },
  ],
};

/** E1 to E9: edge, exit, damage, roughness, wall, corner and side of the tool. */
export const effects: readonly Check[] = [
  edgeLaw,
  entryChips,
  exit,
  table,
  damageDepth,
  roughness,
  wall,
  corner,
  sideWear,
];
