import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { makeOutline } from '#src/base/outline.ts';
import { attachmentNames } from '#src/formats/job/attachments.ts';
import { emptyDesk } from '#src/formats/job/desk.ts';
import { sideGap } from '#src/formats/job/fit.ts';
import { outlineFileOf } from '#src/formats/job/outline-file.ts';
import { readOutline } from '#src/formats/job/outline-input.ts';
import { type Base, only, problemsWith, resolvedWith } from './short-job.ts';

const corpus = new URL('../../corpus/outlines/', import.meta.url);
const drawing = (name: string) => new Uint8Array(readFileSync(new URL(name, corpus)));
const cavity = (outline: unknown) => (job: Base) => Object.assign(job.cavity, { outline });

const ell = [
  [10, 20],
  [14, 20],
  [14, 22],
  [12, 22],
  [12, 24],
  [10, 24],
];

describe('a drawn outline', () => {
  // An L of 4 x 4 mm with a notch of 2 x 2 mm: 12 mm2; the origin moves to the middle of its box.
  test('as points is the polygon, about the middle of its box', () => {
    const job = resolvedWith(cavity({ kind: 'polygon', pointsMm: ell }));
    const outline = makeOutline(job.cavity);
    expect(outline.area).toBeCloseTo(12e-6, 15);
    expect(outline.bounds.xMin).toBeCloseTo(-2e-3, 12);
    expect(outline.bounds.yMax).toBeCloseTo(2e-3, 12);
    expect(job.sizes.map((size) => Math.round(size * 1e9))).toEqual([4e6, 4e6]);
  });

  test('gets a tool that keeps the predicted overcut from it all along, the notch rounded', () => {
    const job = resolvedWith(cavity({ kind: 'polygon', pointsMm: ell }));
    const gap = sideGap(makeOutline(job.cavity), makeOutline(job.tool));
    // loops of millimetres, sampled: a few units in the last place and the joining of ends
    expect(Math.abs(gap - job.predictedOvercut)).toBeLessThan(1e-9);
    const d = job.predictedOvercut;
    // 16 mm of edge moved inward: minus d per length, plus d^2 per square corner, minus pi/4 d^2 at the notch, which is rounded
    const area = 12e-6 - 16e-3 * d + 5 * d * d - (Math.PI / 4) * d * d;
    expect(makeOutline(job.tool).area / area).toBeCloseTo(1, 9);
  });

  test('with the first point given again at the end is the same outline', () => {
    const again = resolvedWith(cavity({ kind: 'polygon', pointsMm: [...ell, ell[0]] }));
    const once = resolvedWith(cavity({ kind: 'polygon', pointsMm: ell }));
    expect(makeOutline(again.cavity).area).toBeCloseTo(makeOutline(once.cavity).area, 15);
  });

  test('with holes leaves posts standing in the cavity and bores in its tool', () => {
    const square = (c: number, half: number) => [
      [c - half, c - half],
      [c + half, c - half],
      [c + half, c + half],
      [c - half, c + half],
    ];
    const job = resolvedWith(cavity({ kind: 'polygon', pointsMm: square(0, 2.5), holesMm: [square(0, 0.5)] }));
    expect(makeOutline(job.cavity).area).toBeCloseTo(24e-6, 15);
    const tool = makeOutline(job.tool);
    expect(tool.loops.filter(({ hole }) => hole)).toHaveLength(1);
  });

  // A unit square: 3 mm a unit, so 9 mm2.
  test('as path data counts in its own unit', () => {
    const job = resolvedWith(cavity({ kind: 'path', svgPath: 'M0 0h1v1h-1z', unitMm: 3 }));
    expect(makeOutline(job.cavity).area).toBeCloseTo(9e-6, 15);
  });

  test('of a tool uses the coordinates of the cavity', () => {
    const tool = ell.map(([x = 0, y = 0]) => [
      x + (x > 12.5 ? -0.06 : 0.06) * (x === 12 ? -1 : 1),
      y === 20 ? 20.06 : y - 0.06,
    ]);
    const job = resolvedWith((j) => {
      cavity({ kind: 'polygon', pointsMm: ell })(j);
      Object.assign(j.tool, { outline: { kind: 'polygon', pointsMm: tool } });
    });
    expect(job.sideGap).toBeCloseTo(0.06e-3, 9);
  });

  test('goes to a job file as path data and comes back the same', () => {
    const job = resolvedWith(cavity({ kind: 'path', svgPath: 'M0 0H4V2A1 1 0 0 1 3 3H0ZM1 1v1h1v-1z' }));
    const back = readOutline(emptyDesk(), 'x', outlineFileOf(job.cavity));
    const [once, again] = [makeOutline(job.cavity), back?.outline];
    // nine digits of millimetres
    expect((again?.area ?? 0) / once.area).toBeCloseTo(1, 8);
    expect(again?.loops.map(({ hole }) => hole)).toEqual(once.loops.map(({ hole }) => hole));
  });

  test.each<[string, unknown, string, RegExp]>([
    [
      'crossing itself',
      {
        kind: 'polygon',
        pointsMm: [
          [0, 0],
          [4, 4],
          [4, 0],
          [0, 4],
        ],
      },
      'pointsMm',
      /At x 2, y 2 mm, loop 1.*Take out the knot/,
    ],
    ['open', { kind: 'path', svgPath: 'M0 0h4v4' }, 'svgPath', /Close it there/],
    ['of malformed data', { kind: 'path', svgPath: 'M0 0h4v4hz' }, 'svgPath', /Line 1, column 10/],
    ['of nothing', { kind: 'path', svgPath: '' }, 'svgPath', /empty/],
    ['huge', { kind: 'path', svgPath: 'M0 0h5000v4h-5000z' }, 'svgPath', /reaches 5000 mm/],
    [
      'thinner than can be',
      {
        kind: 'polygon',
        pointsMm: [
          [0, 0],
          [4, 0],
          [4, 0.0000001],
        ],
      },
      'pointsMm',
      /./,
    ],
  ])('%s is refused with its place', (_, outline, field, message) => {
    const problem = problemsWith(cavity(outline)).find(({ path }) => path === `cavity.outline.${field}`);
    expect(problem?.severity).toBe('refuse');
    expect(problem?.message).toMatch(message);
  });

  test('too narrow for its grit is refused with what helps', () => {
    const problem = only(problemsWith(cavity({ kind: 'path', svgPath: 'M0 0h4v.1h-4z' })), 'cavity.outline');
    expect(problem.message).toMatch(/Nothing is left of the tool.*or give tool\.outline/);
  });

  // Two squares of 2 mm joined by a neck of 0.06 mm, narrower than twice the overcut.
  test('whose neck is too narrow makes a tool in two parts, and says so', () => {
    const neck = 'M0 0h2v.97h1v-.97h2v2h-2v-.97h-1v.97h-2z';
    const problems = problemsWith((j) => {
      cavity({ kind: 'path', svgPath: neck })(j);
      Object.assign(j.slurry, { grit: 'F400' });
    });
    expect(problems.find(({ path }) => path === 'tool.outline')?.message).toMatch(
      /falls into 2 loops where the drawing has 1/,
    );
  });
});

describe('a drawing beside the job', () => {
  const lever = { kind: 'drawing', file: 'slot.dxf' };
  const attachments = { 'slot.dxf': drawing('slot-mm.dxf') };

  test('is named by the job', () => {
    const text = JSON.stringify({ cavity: { outline: lever }, tool: { face: { kind: 'relief', file: 'a.png' } } });
    expect(attachmentNames(text)).toEqual(['slot.dxf', 'a.png']);
    expect(attachmentNames('{')).toEqual([]);
  });

  test('is read in its own unit', () => {
    expect(resolvedWith(cavity(lever), { attachments }).cavity.kind).toBe('path');
  });

  test('that is missing is refused once, and says where it belongs', () => {
    const problems = problemsWith(cavity(lever));
    expect(problems).toHaveLength(1);
    expect(only(problems, 'cavity.outline.file')).toMatchObject({ value: 'slot.dxf', severity: 'refuse' });
    expect(problems[0]?.message).toMatch(/Put it beside the job/);
  });

  test('with a folder in its name, or of the language itself, is refused', () => {
    for (const file of ['../slot.dxf', '/etc/passwd', 'a\\b.dxf', '.hidden', '']) {
      const [problem] = problemsWith(cavity({ kind: 'drawing', file }), { attachments });
      expect(problem?.path, file).toBe('cavity.outline.file');
    }
    expect(problemsWith(cavity({ kind: 'drawing', file: '__proto__' }), { attachments })[0]?.message).toMatch(
      /not there/,
    );
  });

  test('without a unit is refused, and read with the unit the job states', () => {
    const gang = { 'gang.dxf': drawing('gang-unitless.dxf') };
    const outline = { kind: 'drawing', file: 'gang.dxf' };
    const refused = problemsWith(cavity(outline), { attachments: gang });
    expect(only(refused, 'cavity.outline.file').message).toMatch(/states no unit/);
    const read = readOutline({ ...emptyDesk(gang) }, 'x', { ...outline, unitMm: 1 });
    expect(read?.outline.area).toBeGreaterThan(0);
    const twice = readOutline({ ...emptyDesk(gang) }, 'x', { ...outline, unitMm: 2 });
    expect((twice?.outline.area ?? 0) / (read?.outline.area ?? 1)).toBeCloseTo(4, 9);
  });

  test('that states another unit than the job counts, and a warning says so', () => {
    const problems = problemsWith(cavity({ ...lever, unitMm: 25.4 }), { attachments });
    expect(only(problems, 'cavity.outline.unitMm')).toMatchObject({ severity: 'warn' });
  });

  test('without anything on the layer is refused', () => {
    const problems = problemsWith(cavity({ ...lever, layer: 'NO SUCH' }), { attachments });
    expect(
      problems.some(({ path, message }) => path === 'cavity.outline.file' && /on the layer "NO SUCH"/.test(message)),
    ).toBe(true);
  });

  test.each(['askew', 'branch', 'enormous', 'not-a-number', 'open', 'truncated'])(
    '%s.dxf is refused in the job, with the file and what to do',
    (name) => {
      const files = { 'x.dxf': drawing(`${name}.dxf`) };
      const problems = problemsWith(cavity({ kind: 'drawing', file: 'x.dxf', unitMm: 1 }), { attachments: files });
      const own = problems.filter(({ path }) => path === 'cavity.outline.file');
      expect(own.some(({ severity }) => severity === 'refuse')).toBe(true);
      for (const { value, message } of own) {
        expect(value).toBe('x.dxf');
        expect(message).toMatch(/\.$/);
      }
    },
  );
});

describe('a gang of islands', () => {
  const gang = {
    kind: 'gang',
    outline: { kind: 'rectangle', lengthMm: 6, widthMm: 0.8 },
    columns: 1,
    rows: 5,
    pitchXMm: 0,
    pitchYMm: 2.8,
  };

  test('is as many equal cavities, and its tool as many equal tools', () => {
    const job = resolvedWith((j) => {
      cavity(gang)(j);
      Object.assign(j.cavity, { depthMm: 0.5 });
    });
    expect(makeOutline(job.cavity).area).toBeCloseTo(5 * 6e-3 * 0.8e-3, 15);
    const d = job.predictedOvercut;
    expect(makeOutline(job.tool).area).toBeCloseTo(5 * (6e-3 - 2 * d) * (0.8e-3 - 2 * d), 15);
    expect(job.sideGap).toBeCloseTo(d, 12);
  });

  test('whose islands run into each other is refused', () => {
    const problem = only(problemsWith(cavity({ ...gang, pitchYMm: 0.8 })), 'cavity.outline.pitchYMm');
    expect(problem).toMatchObject({ severity: 'refuse', allowed: 'more than 0.8 mm' });
  });

  test('whose walls are thin is warned about', () => {
    const problem = only(problemsWith(cavity({ ...gang, pitchYMm: 1 })), 'cavity.outline');
    expect(problem.severity).toBe('warn');
    expect(problem.message).toMatch(/0\.2 mm is left between the cavities of the gang/);
  });
});
