import { describe, expect, test } from 'vitest';
import { readJob } from '#src/formats/job/read.ts';
import { type Base, base, only, problemsWith } from './short-job.ts';

describe('settings together', () => {
  test.each<[string, (job: Base) => void, { path: string; allowed: RegExp; message: RegExp }]>([
    [
      'a tool larger than the cavity',
      (j) => Object.assign(j.tool, { outline: { kind: 'circle', diameterMm: 3.2 } }),
      { path: 'tool.outline', allowed: /circle 2\.889 mm/, message: /larger than the cavity.*0\.1 mm.*smaller/ },
    ],
    [
      'a solid tool for a ring',
      (j) => {
        Object.assign(j.cavity, { outline: { kind: 'ring', outerDiameterMm: 6, innerDiameterMm: 3.6 } });
        Object.assign(j.tool, { outline: { kind: 'circle', diameterMm: 5.8 } });
      },
      { path: 'tool.outline', allowed: /ring/, message: /larger than the cavity/ },
    ],
    [
      'a square tool in a round cavity',
      (j) => Object.assign(j.tool, { outline: { kind: 'rectangle', lengthMm: 2.5, widthMm: 2.5 } }),
      { path: 'tool.outline', allowed: /circle/, message: /larger than the cavity/ },
    ],
    [
      'a cavity deeper than the workpiece',
      (j) => Object.assign(j.cavity, { depthMm: 6.2 }),
      { path: 'workpiece.thicknessMm', allowed: /more than 6\.2 mm/, message: /6\.2 mm into 6 mm.*thicker/ },
    ],
    [
      'a cavity larger than the workpiece',
      (j) => Object.assign(j.workpiece, { lengthMm: 2 }),
      { path: 'workpiece.lengthMm', allowed: /more than 3 mm/, message: /larger than the workpiece/ },
    ],
    [
      'a cavity over the side',
      (j) => Object.assign(j.workpiece, { lengthMm: 10, cavityXMm: 4 }),
      { path: 'workpiece.cavityXMm', allowed: /3\.5 mm/, message: /over the side.*0\.5 mm/ },
    ],
    [
      'an unknown workpiece material',
      (j) => Object.assign(j.workpiece, { material: 'borosilicate33' }),
      { path: 'workpiece.material', allowed: /soda_lime/, message: /Did you mean borosilicate_33/ },
    ],
    [
      'an unknown tool material',
      (j) => Object.assign(j.tool, { material: 'stainless' }),
      { path: 'tool.material', allowed: /copper/, message: /Did you mean stainless_304/ },
    ],
    [
      'an unknown abrasive',
      (j) => Object.assign(j.slurry, { abrasive: 'boron carbide' }),
      { path: 'slurry.abrasive', allowed: /diamond/, message: /Did you mean b4c/ },
    ],
    [
      'an unknown grade',
      (j) => Object.assign(j.slurry, { grit: 'F330' }),
      { path: 'slurry.grit', allowed: /F4 to F2000/, message: /Did you mean F320/ },
    ],
    [
      'a grade of coated abrasives',
      (j) => Object.assign(j.slurry, { grit: 'P400' }),
      { path: 'slurry.grit', allowed: /F4/, message: /coated abrasives/ },
    ],
    [
      'a grade and a median',
      (j) => Object.assign(j.slurry, { d50Um: 30 }),
      { path: 'slurry.d50Um', allowed: /nothing beside/, message: /Keep the grade/ },
    ],
    [
      'a median without a spread',
      (j) => Object.assign(j, { slurry: { abrasive: 'b4c', d50Um: 30 } }),
      { path: 'slurry.spread', allowed: /0\.02 to 1\.5/, message: /needs d50Um and spread/ },
    ],
    [
      'no grit at all',
      (j) => Object.assign(j, { slurry: { abrasive: 'b4c' } }),
      { path: 'slurry.grit', allowed: /grade/, message: /missing/ },
    ],
    [
      'an amplitude past fatigue',
      (j) => Object.assign(j.machine, { amplitudeUm: 62 }),
      { path: 'machine.amplitudeUm', allowed: /up to 39\.6 um/, message: /62 um would crack the tool.*Enter less/ },
    ],
    [
      'an amplitude past the horn',
      (j) => {
        Object.assign(j.machine, { amplitudeUm: 110 });
        Object.assign(j.tool, { material: 'tool_steel' });
      },
      { path: 'machine.amplitudeUm', allowed: /up to 101 um/, message: /crack the titanium horn/ },
    ],
    [
      'a load that squashes the tool',
      (j) => Object.assign(j.machine, { staticLoadN: 10000 }),
      { path: 'machine.staticLoadN', allowed: /up to 3\.93 N/, message: /squashes the tool/ },
    ],
    [
      'grit too coarse for the gap',
      (j) => {
        Object.assign(j.tool, { outline: { kind: 'circle', diameterMm: 2.95 } });
      },
      { path: 'tool.outline', allowed: /2\.889/, message: /too coarse for the gap.*25 um a side/ },
    ],
    [
      'grit coarser than the cavity',
      (j) => {
        Object.assign(j.cavity, { outline: { kind: 'circle', diameterMm: 0.2 } });
        Object.assign(j.slurry, { grit: 'F80' });
      },
      { path: 'cavity.outline', allowed: /wider/, message: /Nothing is left of the tool/ },
    ],
    [
      'a voxel that needs too much memory',
      (j) => Object.assign(j.cut, { voxelUm: 0.1 }),
      { path: 'cut.voxelUm', allowed: /^0\.8 to 375 um$/, message: /GB of memory.*Enter 0\.8 or more/ },
    ],
    [
      'a voxel too coarse for the cavity',
      (j) => Object.assign(j.cut, { voxelUm: 400 }),
      { path: 'cut.voxelUm', allowed: /375 um/, message: /too coarse/ },
    ],
    [
      'a voxel and a quality',
      (j) => Object.assign(j.cut, { voxelUm: 4, quality: 'fine' }),
      { path: 'cut.quality', allowed: /nothing beside/, message: /Keep/ },
    ],
    [
      'deviations the wrong way round',
      (j) => Object.assign(j.cavity.limits, { entrySizeLowerMm: 0.1, entrySizeUpperMm: 0 }),
      { path: 'cavity.limits.entrySizeLowerMm', allowed: /less than/, message: /Swap/ },
    ],
    [
      'a ring without a wall',
      (j) => Object.assign(j.cavity, { outline: { kind: 'ring', outerDiameterMm: 3, innerDiameterMm: 4 } }),
      { path: 'cavity.outline.innerDiameterMm', allowed: /less than/, message: /core/ },
    ],
    [
      'corners rounder than the side',
      (j) => Object.assign(j.cavity, { outline: { kind: 'rectangle', lengthMm: 3, widthMm: 2, cornerRadiusMm: 1.5 } }),
      { path: 'cavity.outline.cornerRadiusMm', allowed: /0 to 1 mm/, message: /corner radius/ },
    ],
    [
      'an edge radius without a face',
      (j) => Object.assign(j.tool, { edgeRadiusMm: 2 }),
      { path: 'tool.edgeRadiusMm', allowed: /less than 1\.4/, message: /no flat face/ },
    ],
    [
      'a nominal value outside its own range',
      (j) => Object.assign(j.workpiece, { hardnessGPa: { nominal: 6, min: 7 } }),
      { path: 'workpiece.hardnessGPa', allowed: /nominal/, message: /outside its own range/ },
    ],
    [
      'an own material that misses a property',
      (j) =>
        Object.assign(j, {
          workpiece: { youngsModulusGPa: 64, poisson: 0.2, hardnessGPa: 6, toughnessMPaSqrtM: 0.8, densityKgM3: 2230 },
        }),
      { path: 'workpiece.smallCrackToughnessMPaSqrtM', allowed: /number/, message: /every property/ },
    ],
  ])('%s is refused with path, allowed range and what to do', (_, spoil, expected) => {
    const problem = only(problemsWith(spoil), expected.path);
    expect(problem.severity).toBe('refuse');
    expect(problem.allowed).toMatch(expected.allowed);
    expect(problem.message).toMatch(expected.message);
  });

  test.each<[string, (job: Base) => void, string, RegExp]>([
    [
      'an amplitude above half of the fatigue limit',
      (j) => Object.assign(j.machine, { amplitudeUm: 25 }),
      'machine.amplitudeUm',
      /63\.1 % of what the tool bears/,
    ],
    [
      'a face pressure above 0.6 MPa on a tool under 3 mm',
      (j) => Object.assign(j.machine, { staticLoadN: 5 }),
      'machine.staticLoadN',
      /outside any data/,
    ],
    [
      'a depth over three diameters',
      (j) => Object.assign(j, { workpiece: { material: 'soda_lime' }, cavity: { ...j.cavity, depthMm: 9.5 } }),
      'cavity.depthMm',
      /three diameters/,
    ],
    [
      'grit of more than a third of the smallest feature',
      (j) => Object.assign(j.cavity, { outline: { kind: 'slot', lengthMm: 3, widthMm: 0.25 }, depthMm: 0.2 }),
      'slurry.grit',
      /less than three grains/,
    ],
    [
      'a gap that the grit will open further',
      (j) => Object.assign(j.tool, { outline: { kind: 'circle', diameterMm: 2.92 } }),
      'tool.outline',
      /larger than drawn/,
    ],
    [
      'a gap that the grit will not fill',
      (j) => Object.assign(j.tool, { outline: { kind: 'circle', diameterMm: 2.5 } }),
      'tool.outline',
      /smaller than drawn/,
    ],
    [
      "a property outside the library's range",
      (j) => Object.assign(j.workpiece, { hardnessGPa: 9 }),
      'workpiece.hardnessGPa',
      /outside what the library knows of borosilicate_33/,
    ],
    [
      'a cavity near the side',
      (j) => Object.assign(j.workpiece, { widthMm: 3.5 }),
      'workpiece.widthMm',
      /0\.25 mm is left/,
    ],
    [
      'a thin floor',
      (j) => Object.assign(j.workpiece, { thicknessMm: 1.2 }),
      'workpiece.thicknessMm',
      /0\.2 mm is left under the floor/,
    ],
  ])('%s is warned about and accepted', (_, spoil, path, message) => {
    const job = base();
    spoil(job);
    const read = readJob(JSON.stringify(job));
    expect(read.problems).toBeUndefined();
    expect(only(read.warnings ?? [], path)).toMatchObject({
      severity: 'warn',
      message: expect.stringMatching(message),
    });
  });

  test('all come in one go, beside those of single fields', () => {
    const paths = problemsWith((j) => {
      Object.assign(j, { titel: 'x' });
      Object.assign(j.workpiece, { material: 'granite', thicknessMm: 0.5 });
      Object.assign(j.tool, { outline: { kind: 'circle', diameterMm: 9 } });
      Object.assign(j.machine, { amplitudeUm: 62, frequencyKHz: 'fast', lateralRunoutUm: -1 });
      Object.assign(j.slurry, { grit: 'F330' });
      Object.assign(j.cut, { voxelUm: 0.06 });
    }).map((problem) => problem.path);
    expect(paths.toSorted()).toEqual([
      'cut.voxelUm',
      'machine.amplitudeUm',
      'machine.frequencyKHz',
      'machine.lateralRunoutUm',
      'slurry.grit',
      'titel',
      'tool.outline',
      'workpiece.material',
      'workpiece.thicknessMm',
    ]);
  });

  // A tenth of the pitch needs a hundred times the columns.
  test('the smallest voxel allowed is one that is then accepted', () => {
    const [problem] = problemsWith((j) => Object.assign(j.cut, { voxelUm: 0.06 }));
    const least = Number(/^([\d.]+) to/.exec(problem?.allowed ?? '')?.[1]);
    expect(problemsWith((j) => Object.assign(j.cut, { voxelUm: least }))).toEqual([]);
    expect(problemsWith((j) => Object.assign(j.cut, { voxelUm: 0.97 * least }))).toHaveLength(1);
  });
});
