import { bestAt, type Case, HOLE } from '../lab.ts';
import { bestPressure, bestZones, exponent, middleRate, on } from '../looks.ts';
import { areaOf, gain, gainAt, round, sign } from '../parts.ts';
import { ABOVE_ONE, BELOW_ONE, between, type Check, number, type Part } from '../record.ts';

const SMALL = 8e-3;
const LARGE = 20e-3;

const area: Check = {
  id: 'T1',
  claim: 'at the same static load the rate falls as the cutting area of the tool grows, about inversely',
  source: 'practice',
  basis: 'common practice, no source',
  parts: [
    {
      what: 'exponent of the rate in the area, tools of 8 and 12.7 mm under 0.3 of the best load of the larger',
      unit: '',
      published: number(-1),
      band: { low: -1.4, high: -0.6 },
      why: '"about": the load law alone spans 0.6 to 1.15 (D8); starved middles add to it',
      predict: (lab, amplitude) => {
        const load = 0.3 * bestPressure(on(lab, amplitude)) * areaOf(HOLE);
        const diameterOf = (s: number) => (s < areaOf(HOLE) ? SMALL : HOLE);
        return exponent(
          (s) => middleRate(on(lab, amplitude, round(diameterOf(s))), load / s),
          areaOf(SMALL),
          areaOf(HOLE),
        );
      },
    },
  ],
};

const solidFace: Check = {
  id: 'T2',
  claim: 'larger solid faces are slower at the same pressure, for want of slurry in their middle',
  source: 'practice, from memory',
  basis: 'from memory',
  parts: [
    sign('rate of a 20 mm over a 12.7 mm tool, 0.4 of the best pressure', BELOW_ONE, gainAt(0.4, round(LARGE))),
    sign('best rate of a 20 mm over a 12.7 mm tool', BELOW_ONE, gain(round(LARGE))),
    sign('best load (N) of a 20 mm over a 12.7 mm tool', ABOVE_ONE, (lab, amplitude) => {
      const force = (diameter: number) => bestPressure(on(lab, amplitude, round(diameter))) * areaOf(diameter);
      return force(LARGE) / force(HOLE);
    }),
  ],
};

const RING: Partial<Case> = { outline: { kind: 'ring', outerDiameter: HOLE, innerDiameter: HOLE - 4e-3 } };
const BORED: Partial<Case> = { bores: [{ x: 0, y: 0, radius: 1.5e-3 }] };

const openFace: Check = {
  id: 'T3',
  claim: 'ring-shaped and bored tools are faster than the full face',
  source: 'practice, from memory',
  basis: 'from memory',
  parts: [
    sign('best rate of a ring of 2 mm wall over the full face', ABOVE_ONE, gain(RING)),
    sign('best rate with a 3 mm bore, not pumped, over the full face', ABOVE_ONE, gain(BORED)),
  ],
};

/** Twice the handbook's depth (m). */
const DEEP = 2 * HOLE;
const DRAWN: Partial<Case> = { ...BORED, delivery: { kind: 'suction', pressure: 50e3 } };

const PUMPED: Partial<Case> = { ...BORED, delivery: { kind: 'throughTool', pressure: 100e3 } };

/** Best rate at twice the depth with a change over that of another setting. */
const deepGain =
  (changes: Partial<Case>, base: Partial<Case>): Part['predict'] =>
  (lab, amplitude) =>
    bestAt(on(lab, amplitude, changes), DEEP).rate / bestAt(on(lab, amplitude, base), DEEP).rate;

const forcedPart = (what: string, changes: Partial<Case>): Part => ({
  what: `best rate 25.4 mm deep, 3 mm bore, ${what}, over the full face left alone`,
  unit: '',
  published: between(2, 5),
  band: { low: 1.3, high: 7.5 },
  why: 'factor 1.5: neither tool nor pressure is stated',
  predict: deepGain(changes, {}),
  reason: 'the film under the face is so thin that this pressure moves little through it',
});

const forced: Check = {
  id: 'T12',
  claim: 'slurry pumped in or drawn off through the tool makes deep holes two to five times faster',
  source: 'Kazantsev, as reported',
  basis: 'from memory',
  parts: [
    forcedPart('drawn off at 50 kPa', DRAWN),
    forcedPart('pumped in at 100 kPa', PUMPED),
    sign(
      'drawn off over the bored tool left alone',
      ABOVE_ONE,
      deepGain(DRAWN, BORED),
      'a bore left alone counts as an open edge with slurry as fresh as in the side gap; drawing makes it the old end',
    ),
    sign('pumped in over the bored tool left alone', ABOVE_ONE, deepGain(PUMPED, BORED)),
  ],
};

const hump: Check = {
  id: 'T4',
  claim: 'under a flat solid tool the middle of the floor lags: an uncut hump grows there',
  source: 'die sinking of silicon carbide, abstract read: the sign only',
  basis: 'read',
  parts: [
    sign(
      'what the middle tenth would remove over the outer tenth, one gap, half the best load',
      BELOW_ONE,
      (lab, a) => {
        const { inner, outer } = bestZones(on(lab, a), 0.5);
        return inner / outer;
      },
    ),
  ],
};

/** T1 to T4 and T12: size and form of the face, and flow through it. */
export const faces: readonly Check[] = [area, solidFace, openFace, hump, forced];
