import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { peakMotion, tipAmplitude, transducerAmplitudeFor } from '#src/physics/machine/amplitude.ts';
import { checkMachine, type Machine } from '#src/physics/machine/check.ts';
import {
  DETUNING_SHARE,
  endMassDetuning,
  jointStress,
  lengthShare,
  longestMassLikeTool,
  massRatio,
  toolDetuning,
  toolMass,
} from '#src/physics/machine/end-mass.ts';
import { type Horn, hornCharacter, judgeHorn, resonantLength } from '#src/physics/machine/horn.ts';
import { hornMaterials } from '#src/physics/machine/materials.ts';
import { HORN_SHAPES, hornWave, resonantWaveNumber } from '#src/physics/machine/waves.ts';
import { lowCarbonSteel } from '../samples.ts';

const shapes = fc.constantFrom(...HORN_SHAPES);
const horn: Horn = { shape: 'stepped', inputDiameter: 0.04, outputDiameter: 0.02, material: hornMaterials.titanium };
const tool = { material: lowCarbonSteel, area: (Math.PI / 4) * 0.006 ** 2, length: 0.01 };
const machine: Machine = { horn, tool, amplitude: 15e-6, frequency: 20e3 };

describe('amplitude at the tool', () => {
  it('is transducer amplitude times gain times loading factor, 0.9 unless given (assumed)', () => {
    expect(tipAmplitude(5e-6, { gain: 4 })).toBeCloseTo(5e-6 * 4 * 0.9, 18);
    expect(tipAmplitude(5e-6, { gain: 4, loadingFactor: 0.8 })).toBeCloseTo(5e-6 * 4 * 0.8, 18);
    expect(transducerAmplitudeFor(18e-6, { gain: 4 })).toBeCloseTo(5e-6, 18);
  });

  it('of 25 um at 20 kHz moves at 3.14 m/s and 3.95e5 m/s2', () => {
    const { speed, acceleration } = peakMotion(25e-6, 20e3);
    expect(speed).toBeCloseTo(Math.PI, 10);
    expect(acceleration).toBeCloseTo((2 * Math.PI * 20e3) ** 2 * 25e-6, 3);
    expect(acceleration / 1e5).toBeCloseTo(3.95, 2);
  });
});

describe('a mass at the end of a horn', () => {
  it('turns a plain bar to tan x = -mu x', () => {
    for (const mu of [0.01, 0.3, 1, 10]) {
      const x = Math.PI * endMassDetuning('uniform', 1, mu).frequencyRatio;
      expect(Math.abs(Math.sin(x) + mu * x * Math.cos(x))).toBeLessThan(1e-12 * (1 + mu));
    }
  });

  it('does nothing when it is nothing, and clamps the bar into a quarter wave when it is huge', () => {
    for (const shape of HORN_SHAPES) {
      const none = endMassDetuning(shape, 3, 0);
      expect(none.frequencyRatio).toBe(1);
      expect(none.gain).toBeCloseTo(hornCharacter(shape, 3).gain, 12);
    }
    expect(endMassDetuning('uniform', 1, 1e9).frequencyRatio).toBeCloseTo(0.5, 8);
  });

  it('shifts at first by m u_tip^2 / (2 sum of rho S u^2), Rayleigh', () => {
    for (const shape of HORN_SHAPES) {
      const n = shape === 'uniform' ? 1 : 3;
      const k = resonantWaveNumber(shape, n);
      // energy of the free mode from the derivative of the end strain with k: exact for the wave equation
      const h = 1e-5;
      const slope = (hornWave(shape, n, k + h).tipStrain - hornWave(shape, n, k - h).tipStrain) / (2 * h);
      const perMass = (k * hornWave(shape, n, k).tip) / slope;
      const mu = 1e-5;
      const { frequencyRatio } = endMassDetuning(shape, n, mu);
      expect(Math.abs((frequencyRatio - 1) / (mu * perMass) - 1)).toBeLessThan(1e-3);
    }
    // half of a plain bar's mass moves with its end
    expect((1 - endMassDetuning('uniform', 1, 1e-6).frequencyRatio) / 1e-6).toBeCloseTo(1, 4);
  });

  it('lowers the resonance, the more the heavier it is, for any profile and ratio', () => {
    fc.assert(
      fc.property(
        shapes,
        fc.double({ min: 1, max: 1000, noNaN: true }),
        fc.double({ min: 1e-4, max: 3, noNaN: true }),
        (s, n, mu) => {
          const light = endMassDetuning(s, n, mu).frequencyRatio;
          const heavy = endMassDetuning(s, n, 1.5 * mu).frequencyRatio;
          expect(heavy).toBeLessThanOrEqual(light);
          expect(light).toBeLessThanOrEqual(1);
          expect(heavy).toBeGreaterThan(0);
        },
      ),
      { seed: 81 },
    );
  });

  it('satisfies the balance of the end, u strain = mu k^2 u', () => {
    fc.assert(
      fc.property(
        shapes,
        fc.double({ min: 1, max: 100, noNaN: true }),
        fc.double({ min: 1e-3, max: 3, noNaN: true }),
        (s, n, mu) => {
          const k = endMassDetuning(s, n, mu).frequencyRatio * resonantWaveNumber(s, n);
          const { tip, tipStrain } = hornWave(s, n, k);
          expect(Math.abs(tipStrain - mu * k * k * tip)).toBeLessThan(1e-9 * (Math.abs(tipStrain) + n * n));
        },
      ),
      { seed: 82 },
    );
  });

  it('a cone bears a larger mass than an exponential horn of the same ratio (J. Jpn. Soc. Precis. Eng. 23 (1957) 568)', () => {
    for (const n of [2, 3, 5]) {
      expect(endMassDetuning('conical', n, 0.1).frequencyRatio).toBeGreaterThan(
        endMassDetuning('exponential', n, 0.1).frequencyRatio,
      );
    }
  });

  it('gain has an optimum mass in cone and exponential horn (J. Jpn. Soc. Precis. Eng. 23 (1957) 568)', () => {
    for (const shape of ['conical', 'exponential'] as const) {
      const gains = [0, 0.05, 0.1, 0.2, 0.4, 0.8, 3, 30].map((mu) => endMassDetuning(shape, 3, mu).gain);
      const best = gains.indexOf(Math.max(...gains));
      expect(best).toBeGreaterThan(0);
      expect(best).toBeLessThan(gains.length - 1);
    }
  });

  it('refuses a negative mass', () => {
    expect(() => endMassDetuning('conical', 2, -1)).toThrow(RangeError);
  });
});

describe('a tool on a horn', () => {
  it('weighs density x area x length, against a bar of the horn', () => {
    expect(toolMass(tool)).toBeCloseTo(7870 * (Math.PI / 4) * 0.006 ** 2 * 0.01, 15);
    const bar = 4430 * (Math.PI / 4) * 0.02 ** 2 * resonantLength(horn, 20e3);
    expect(massRatio(horn, tool, 20e3)).toBeCloseTo(toolMass(tool) / bar, 14);
  });

  it('is a mass up to a twentieth of its wavelength: 12.8 mm of steel at 20 kHz', () => {
    const longest = longestMassLikeTool(lowCarbonSteel, 20e3);
    expect(longest).toBeCloseTo(Math.sqrt(205e9 / 7870) / 20e3 / 20, 12);
    expect(lengthShare({ ...tool, length: longest }, 20e3)).toBeCloseTo(1 / 20, 14);
    expect(Math.tan(Math.PI / 10) / (Math.PI / 10)).toBeCloseTo(1.034, 3);
  });

  it('short, pulls at its joint like a rigid mass: rho L omega^2 A', () => {
    const short = { ...tool, length: 1e-4 };
    const rigid = 7870 * 1e-4 * (2 * Math.PI * 20e3) ** 2 * 20e-6;
    expect(Math.abs(jointStress(short, 20e-6, 20e3) / rigid - 1)).toBeLessThan(1e-5);
  });
});

describe('the machine as a whole', () => {
  const codes = (m: Machine) => checkMachine(m).findings.map(({ code, answer }) => `${code}: ${answer}`);

  it('has nothing against 15 um from a stepped titanium horn of ratio 2 and a small steel tool', () => {
    const check = checkMachine(machine);
    expect(check.findings).toEqual([]);
    expect(check.gain).toBeCloseTo(4, 12);
    expect(check.transducerAmplitude).toBeCloseTo(15e-6 / (4 * 0.9), 15);
    expect(check.largestAmplitude).toBeCloseTo(judgeHorn(horn, 15e-6, 20e3).limit, 15);
    expect(1 - check.detuning.frequencyRatio).toBeLessThan(DETUNING_SHARE);
    expect(check.detuning).toEqual(toolDetuning(horn, tool, 20e3));
  });

  it('refuses what breaks the horn or the tool and warns above half of it', () => {
    expect(codes({ ...machine, amplitude: 25e-6 })).toEqual(['tool-fatigue: warn']);
    expect(codes({ ...machine, amplitude: 60e-6 })).toEqual(['horn-fatigue: warn', 'tool-fatigue: refuse']);
    expect(codes({ ...machine, amplitude: 120e-6 })).toContain('horn-fatigue: refuse');
  });

  it('warns of a horn that breaks when the load is lifted', () => {
    const { largestAmplitude } = checkMachine(machine);
    expect(codes({ ...machine, amplitude: 0.95 * largestAmplitude })).toContain('horn-fatigue-free: warn');
  });

  it('warns of long and heavy tools unless the horn was tuned with them', () => {
    const long = { ...tool, area: 3e-4, length: 0.015 };
    expect(codes({ ...machine, tool: long })).toEqual(['tool-long: warn', 'tool-detunes: warn']);
    expect(codes({ ...machine, tool: long, tunedWithTool: true })).toEqual([]);
  });

  it('warns of more than 25 um without a horn and outside 20 to 40 kHz (common practice, no source)', () => {
    const bare: Horn = { ...horn, shape: 'uniform', outputDiameter: 0.04 };
    const finding = checkMachine({ ...machine, horn: bare, amplitude: 24e-6 }).findings.find(
      ({ code }) => code === 'transducer-amplitude',
    );
    expect(finding?.value).toBeCloseTo(24e-6 / 0.9, 15);
    expect(codes({ ...machine, frequency: 16.3e3 })).toEqual(['frequency-unusual: warn']);
  });
});
