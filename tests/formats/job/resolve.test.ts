import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { makeOutline, type OutlineSpec } from '#src/base/outline.ts';
import { ruleOfThumbOvercut } from '#src/formats/job/draft.ts';
import { overallWidth, sideGap } from '#src/formats/job/fit.ts';
import { outlineFileOf, outlineSpecOf } from '#src/formats/job/outline-file.ts';
import { readJob } from '#src/formats/job/read.ts';
import { resolveJob } from '#src/formats/job/resolve.ts';
import type { JobFile } from '#src/formats/job/schema.ts';
import { RefusedError } from '#src/formats/problems.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';
import { publishedConstants } from '#src/physics/constants.ts';

const short: JobFile = {
  spallwright: 1,
  workpiece: { material: 'soda_lime' },
  cavity: { outline: { kind: 'circle', diameterMm: 3 }, depthMm: 1 },
  slurry: { abrasive: 'b4c', grit: 'F320' },
};

const resolve = (change: Partial<JobFile>) => resolveJob({ ...short, ...change }, stockLibrary);

describe('a job of few fields', () => {
  const job = resolve({});

  test('takes the stated defaults: 20 kHz, 20 um, run-out 2 um, 30 vol%, edge 0.030 mm, standard, one replicate', () => {
    expect(job.conditions).toMatchObject({ frequency: 20e3, amplitude: 20 * 1e-6, concentration: 0.3 });
    expect(job).toMatchObject({ runout: 2e-6, edgeRadius: 0.03 * 1e-3 });
    expect(job.cut).toEqual({ quality: 'standard', voxel: undefined, seed: 1, replicates: 1 });
  });

  test('is cut by a low-carbon steel tool under the published constants', () => {
    expect(job.conditions.tool.fatigueStrength).toBe(200e6);
    expect(job.conditions.constants).toBe(publishedConstants);
  });

  test('names every default it took', () => {
    expect(job.defaultsUsed.toSorted()).toEqual([
      'cut.quality',
      'cut.replicates',
      'cut.seed',
      'machine.amplitudeUm',
      'machine.frequencyKHz',
      'machine.lateralRunoutUm',
      'machine.staticLoadN',
      'slurry.carrier',
      'slurry.concentrationVolPercent',
      'slurry.delivery',
      'slurry.renewal',
      'tool.edgeRadiusMm',
      'tool.material',
      'tool.outline',
      'tool.wearCompensated',
      'workpiece.cavityXMm',
      'workpiece.cavityYMm',
      'workpiece.lengthMm',
      'workpiece.thicknessMm',
      'workpiece.widthMm',
    ]);
  });

  test('is pressed with 0.15 MPa on the area of its tool, and says so', () => {
    expect(job.pressure).toBeCloseTo(0.15e6, 3);
    expect(job.staticLoad).toBeCloseTo(0.15e6 * job.toolArea, 12);
    expect(job.notes.join(' ')).toMatch(/0\.15 MPa/);
  });

  // 1.9 x 29.2 um is less than 1.3 x 49 um + 2 um.
  test('has a tool smaller than the cavity by 1.9 median grains a side', () => {
    const overcut = 1.9 * 29.2e-6;
    expect(job.predictedOvercut).toBeCloseTo(overcut, 12);
    expect(job.tool).toMatchObject({ kind: 'circle' });
    expect(overallWidth(job.tool)).toBeCloseTo(3e-3 - 2 * overcut, 12);
    expect(job.sideGap).toBeCloseTo(overcut, 12);
  });

  test('warns that 20 um is over half of what mild steel bears, and of nothing else', () => {
    expect(job.warnings.map((warning) => warning.path)).toEqual(['machine.amplitudeUm']);
  });
});

describe('what a job states', () => {
  test('is converted once, to SI', () => {
    const job = resolve({
      workpiece: { material: 'soda_lime', lengthMm: 20, widthMm: 10, thicknessMm: 6, cavityXMm: 1, cavityYMm: -2 },
      machine: { frequencyKHz: 25, amplitudeUm: 15, staticLoadN: 0.7, lateralRunoutUm: 3 },
      slurry: { abrasive: 'diamond', grit: '#400', concentrationVolPercent: 20 },
      cut: { voxelUm: 4, seed: 9 },
    });
    expect(job.stock).toEqual({ length: 20e-3, width: 10e-3, thickness: 6e-3, cavityX: 1e-3, cavityY: -2e-3 });
    expect(job.conditions).toMatchObject({ frequency: 25e3, concentration: 0.2 });
    expect(job.conditions.amplitude).toBeCloseTo(15e-6, 15);
    expect(job.conditions.grit.massMedian).toBeCloseTo(30e-6, 15);
    expect(job.conditions.grit.largest).toBeCloseTo(75e-6, 15);
    expect(job).toMatchObject({ staticLoad: 0.7, runout: 3 * 1e-6 });
    expect(job.cut).toEqual({ quality: undefined, voxel: 4 * 1e-6, seed: 9, replicates: 1 });
  });

  test('has its limits in metres, radians and seconds, and no others', () => {
    const { limits } = resolve({
      cavity: { ...short.cavity, limits: { entrySizeLowerMm: -0.01, taperDeg: 0.5, floorRaUm: 1.6, timeMin: 2 } },
    });
    expect(Object.keys(limits).toSorted()).toEqual(['entrySizeLower', 'floorRa', 'taper', 'time']);
    expect(limits.entrySizeLower).toBeCloseTo(-1e-5, 15);
    expect(limits.taper).toBeCloseTo((0.5 * Math.PI) / 180, 12);
    expect(limits.floorRa).toBeCloseTo(1.6e-6, 15);
    expect(limits.time).toBe(2 * 60);
  });

  test('of its own material counts before the library, and alone makes a whole material', () => {
    expect(resolve({ workpiece: { material: 'soda_lime', hardnessGPa: 6 } }).conditions.work).toMatchObject({
      hardness: 6e9,
      youngsModulus: 70e9,
    });
    const own = {
      youngsModulusGPa: { nominal: 64, min: 60, max: 68 },
      poisson: 0.2,
      hardnessGPa: 6,
      toughnessMPaSqrtM: 0.8,
      smallCrackToughnessMPaSqrtM: 0.75,
      densityKgM3: 2230,
    };
    expect(resolve({ workpiece: own }).conditions.work).toEqual({
      youngsModulus: 64e9,
      poisson: 0.2,
      hardness: 6e9,
      toughness: 0.8 * 1e6,
      smallCrackToughness: 0.75 * 1e6,
      density: 2230,
    });
  });

  // d3 = d50 exp(1.8808 s) of a log-normal; the largest grain is 1.3 d3 as for grades.
  test('of a grit of its own has 1.3 d3 as largest grain', () => {
    const { grit } = resolve({ slurry: { abrasive: 'b4c', d50Um: 30, spread: 0.25 } }).conditions;
    expect(grit.largest / (1.3 * 30e-6 * Math.exp(1.8808 * 0.25))).toBeCloseTo(1, 12);
  });

  test('by way of the tool outline is used as it is, and the gap is what it leaves', () => {
    const job = resolve({ tool: { outline: { kind: 'circle', diameterMm: 2.9 } } });
    expect(job.tool).toEqual({ kind: 'circle', diameter: 2.9 * 1e-3 });
    expect(job.sideGap).toBeCloseTo(0.05e-3, 12);
    expect(job.defaultsUsed).not.toContain('tool.outline');
  });
});

describe('a prediction of the overcut', () => {
  test('that is handed in sizes the tool', () => {
    const job = resolveJob(short, stockLibrary, { predictOvercut: (_, depth, runout) => depth / 20 + runout });
    expect(job.predictedOvercut).toBeCloseTo(50e-6 + 2e-6, 12);
    expect(overallWidth(job.tool)).toBeCloseTo(3e-3 - 2 * 52e-6, 12);
  });

  test('by rule of thumb never exceeds the largest grain plus the run-out', () => {
    const { conditions } = resolve({ slurry: { abrasive: 'b4c', d50Um: 30, spread: 0.05, largestUm: 40 } });
    expect(ruleOfThumbOvercut(conditions, 1e-3, 2e-6)).toBeCloseTo(42e-6, 12);
  });
});

test('a job that is refused throws with all its problems when it is resolved all the same', () => {
  const bad = { ...short, machine: { amplitudeUm: 62 }, workpiece: { material: 'granite' } };
  expect(() => resolveJob(bad, stockLibrary)).toThrow(RefusedError);
  try {
    resolveJob(bad, stockLibrary);
  } catch (error) {
    expect((error as RefusedError).problems).toHaveLength(2);
  }
});

describe('outlines', () => {
  const size = fc.integer({ min: 50, max: 20000 }).map((um) => um / 1000);
  const arbitrary = fc.oneof(
    fc.record({ kind: fc.constant('circle' as const), diameterMm: size }),
    fc.record({
      kind: fc.constant('rectangle' as const),
      lengthMm: size,
      widthMm: size,
      cornerRadiusMm: fc.constant(0.02),
    }),
    fc
      .tuple(size, size)
      .map(([a, b]) => ({ kind: 'slot' as const, lengthMm: Math.max(a, b), widthMm: Math.min(a, b) })),
    fc.record({
      kind: fc.constant('regularPolygon' as const),
      sides: fc.integer({ min: 3, max: 12 }),
      acrossFlatsMm: size,
      cornerRadiusMm: fc.constant(0),
    }),
    fc.tuple(size, size).map(([a, b]) => ({
      kind: 'ring' as const,
      outerDiameterMm: Math.round(1000 * (a + b)) / 1000,
      innerDiameterMm: a,
    })),
  );

  test('go to SI and back unchanged', () => {
    fc.assert(
      fc.property(arbitrary, (file) => {
        expect(outlineFileOf(outlineSpecOf(file))).toEqual(file);
      }),
      { seed: 2, numRuns: 300 },
    );
  });

  test('of one kind, moved inward by a distance, leave that distance as the gap', () => {
    const specs: OutlineSpec[] = [
      { kind: 'circle', diameter: 3e-3 },
      { kind: 'rectangle', length: 4e-3, width: 2.5e-3, cornerRadius: 0.3e-3 },
      { kind: 'slot', length: 5e-3, width: 1e-3 },
      { kind: 'regularPolygon', sides: 6, acrossFlats: 3e-3, cornerRadius: 0.2e-3 },
      { kind: 'ring', outerDiameter: 6e-3, innerDiameter: 3.6e-3 },
    ];
    for (const file of specs.map(outlineFileOf)) {
      const job = resolveJob({ ...short, cavity: { outline: file, depthMm: 1 } }, stockLibrary);
      const gap = sideGap(makeOutline(job.cavity), makeOutline(job.tool));
      // sizes of millimetres, a few units in the last place
      expect(Math.abs(gap - job.predictedOvercut), file.kind).toBeLessThan(1e-15);
    }
  });

  // Corner of the square at half a diagonal, sqrt(2) x 1 mm; the circle's radius 1.5 mm.
  test('of two kinds have the gap at the corner that comes nearest', () => {
    const cavity = makeOutline({ kind: 'circle', diameter: 3e-3 });
    const tool = makeOutline({ kind: 'rectangle', length: 2e-3, width: 2e-3, cornerRadius: 0 });
    expect(sideGap(cavity, tool)).toBeCloseTo(1.5e-3 - Math.sqrt(2) * 1e-3, 12);
  });

  test('overlap by as much as the gap is negative', () => {
    const cavity = makeOutline({ kind: 'circle', diameter: 3e-3 });
    const tool = makeOutline({ kind: 'circle', diameter: 3.2e-3 });
    expect(sideGap(cavity, tool)).toBeCloseTo(-0.1e-3, 12);
  });
});

test('whatever is accepted by the reader can be resolved', () => {
  const amount = (min: number, max: number) => fc.double({ min, max, noNaN: true });
  const jobs = fc.record({
    spallwright: fc.constant(1),
    workpiece: fc.record({ material: fc.constantFrom(...stockLibrary.materials.map((record) => record.id)) }),
    cavity: fc.record({
      outline: fc.record({ kind: fc.constant('circle'), diameterMm: amount(0.05, 40) }),
      depthMm: amount(0.005, 60),
    }),
    tool: fc.record({ material: fc.constantFrom(...stockLibrary.tools.map((record) => record.id)) }),
    machine: fc.record({ amplitudeUm: amount(0.1, 60), staticLoadN: amount(0.001, 100) }),
    slurry: fc.record({
      abrasive: fc.constantFrom(...stockLibrary.abrasives.map((record) => record.id)),
      grit: fc.constantFrom(...stockLibrary.grits.map((record) => record.grade)),
    }),
  });
  let accepted = 0;
  fc.assert(
    fc.property(jobs, (value) => {
      const { job } = readJob(JSON.stringify(value));
      if (!job) return;
      accepted++;
      const resolved = resolveJob(job, stockLibrary);
      for (const number of [
        resolved.pressure,
        resolved.toolArea,
        resolved.sideGap,
        resolved.conditions.grit.numberMedian,
      ]) {
        expect(number).toBeGreaterThan(0);
      }
    }),
    { seed: 3, numRuns: 150 },
  );
  expect(accepted).toBeGreaterThan(30);
});
