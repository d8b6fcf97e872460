import { describe, expect, test } from 'vitest';
import { encodePng } from '#src/formats/png.ts';
import { riseOf } from '#src/physics/tool-face.ts';
import { type Base, only, problemsWith, resolvedWith } from './short-job.ts';

const on = (section: 'tool' | 'machine' | 'slurry' | 'workpiece' | 'cavity', fields: unknown) => (job: Base) =>
  Object.assign(job[section], fields);
const all =
  (...changes: ((job: Base) => unknown)[]) =>
  (job: Base) => {
    for (const change of changes) change(job);
  };

/** A grey picture as PNG: `grey` of column and row, from the top left. */
function picture(width: number, height: number, grey: (i: number, j: number) => number): Uint8Array {
  const data = new Uint8Array(4 * width * height);
  for (let n = 0; n < width * height; n++)
    data.set([...Array(3).fill(grey(n % width, Math.floor(n / width))), 255], 4 * n);
  return encodePng({ width, height, data });
}

describe('the slurry of a job', () => {
  test('is water at 1 mPa s that floods the tool and is always fresh, unless said otherwise', () => {
    const [pass] = resolvedWith(() => undefined).passes;
    expect(pass?.supply).toEqual({ carrier: { viscosity: 1e-3, density: 998 }, delivery: { kind: 'flooded' } });
  });

  test('in oil, drawn through bores, going round, is all that in SI', () => {
    const [pass] = resolvedWith(
      all(
        on('tool', { bores: [{ xMm: 0, yMm: 0, diameterMm: 0.5 }] }),
        on('slurry', { carrier: 'oil', carrierViscosityMPaS: 8, delivery: 'suction', deliveryPressureKPa: 40 }),
        on('slurry', { renewal: 'recirculated', sumpLitres: 2, usedMin: 30 }),
      ),
    ).passes;
    expect(pass?.supply).toEqual({
      carrier: { viscosity: 8e-3, density: 860 },
      delivery: { kind: 'suction', pressure: 40e3 },
      charge: { volume: 2e-3, used: 30 * 60 },
    });
    expect(pass?.bores).toEqual([{ x: 0, y: 0, radius: 0.25e-3 }]);
  });

  test.each<[string, (job: Base) => unknown, string, RegExp]>([
    [
      'drawn off a tool without bores',
      on('slurry', { delivery: 'suction' }),
      'slurry.delivery',
      /drawn off.*needs a way through/,
    ],
    [
      'pumped into a tool without bores',
      on('slurry', { delivery: 'throughTool' }),
      'slurry.delivery',
      /pumped in.*needs a way through/,
    ],
    [
      'that floods under pressure',
      on('slurry', { deliveryPressureKPa: 50 }),
      'slurry.deliveryPressureKPa',
      /under no pressure/,
    ],
    [
      'drawn by more than the air presses',
      all(
        on('tool', { bores: [{ xMm: 0, yMm: 0, diameterMm: 0.5 }] }),
        on('slurry', { delivery: 'suction', deliveryPressureKPa: 120 }),
      ),
      'slurry.deliveryPressureKPa',
      /would boil/,
    ],
    ['fresh, and used before', on('slurry', { usedMin: 10 }), 'slurry.usedMin', /used once/],
    ['of treacle', on('slurry', { carrier: 'treacle' }), 'slurry.carrier', /allowed words/],
  ])('%s is refused', (_, spoil, path, message) => {
    expect(only(problemsWith(spoil), path)).toMatchObject({
      severity: 'refuse',
      message: expect.stringMatching(message),
    });
  });
});

test('slurry drawn through a hollow tool needs no bores', () => {
  const ring = { kind: 'ring', outerDiameterMm: 6, innerDiameterMm: 3.6 };
  const job = resolvedWith(all(on('cavity', { outline: ring }), on('slurry', { delivery: 'suction' })));
  expect(job.passes[0]?.supply.delivery).toEqual({ kind: 'suction', pressure: 50e3 });
});

describe('the bores of a tool', () => {
  const bores = (...list: [number, number, number][]) =>
    on('tool', { bores: list.map(([xMm, yMm, diameterMm]) => ({ xMm, yMm, diameterMm })) });

  test('take their area off the face and nothing else', () => {
    const solid = resolvedWith(() => undefined);
    const bored = resolvedWith(bores([0.5, 0, 0.4], [-0.5, 0, 0.4]));
    expect(solid.toolArea - bored.toolArea).toBeCloseTo(2 * Math.PI * 0.2e-3 ** 2, 15);
    expect(bored.pressure).toBeCloseTo(solid.pressure, 6);
  });

  test.each<[string, [number, number, number][], string, RegExp]>([
    ['over the edge', [[1.4, 0, 0.4]], 'tool.bores[0]', /reaches over the edge of the tool by 0\.15/],
    ['outside', [[5, 0, 0.4]], 'tool.bores[0]', /over the edge/],
    [
      'in each other',
      [
        [0, 0, 0.6],
        [0.5, 0, 0.6],
      ],
      'tool.bores[1]',
      /runs into bore 1/,
    ],
  ])('%s are refused at the bore', (_, list, path, message) => {
    expect(only(problemsWith(bores(...list)), path)).toMatchObject({
      severity: 'refuse',
      message: expect.stringMatching(message),
    });
  });

  test('that grains clog are warned about', () => {
    expect(only(problemsWith(bores([0, 0, 0.15])), 'tool.bores[0]')).toMatchObject({ severity: 'warn' });
  });
});

describe('the face of a tool', () => {
  test('is flat unless said otherwise', () => {
    expect(resolvedWith(() => undefined).passes[0]?.face).toEqual({ kind: 'flat' });
  });

  test('as a cone, ball or step is that in SI', () => {
    const face = (given: unknown) => resolvedWith(on('tool', { face: given })).passes[0]?.face;
    expect(face({ kind: 'cone', angleDeg: 120 })).toEqual({
      kind: 'cone',
      angle: expect.closeTo((120 * Math.PI) / 180, 12),
    });
    expect(face({ kind: 'sphere', radiusMm: 2 })).toEqual({ kind: 'sphere', radius: 2e-3 });
    const stepped = face({ kind: 'stepped', pilot: { kind: 'circle', diameterMm: 1 }, stepMm: 0.4 });
    expect(stepped).toMatchObject({ kind: 'stepped', step: expect.closeTo(0.4e-3, 12), pilot: { kind: 'circle' } });
  });

  // White is the tip; the top row of the picture is at the largest y. Grey 128 of 255 over 0.2 mm.
  test('as a relief stands back where the picture is dark, upright as it is seen', () => {
    const attachments = { 'r.png': picture(8, 6, (_, j) => (j < 3 ? 255 : 128)) };
    const relief = { kind: 'relief', file: 'r.png', lengthMm: 4, widthMm: 3, heightMm: 0.2 };
    const face = resolvedWith(on('tool', { face: relief }), { attachments }).passes[0]?.face;
    if (face?.kind !== 'relief') throw new Error('no relief');
    const rise = riseOf(face);
    // heights are kept in single precision
    expect(rise(0, 1.2e-3)).toBeCloseTo(0, 9);
    expect(rise(0, -1.2e-3)).toBeCloseTo((0.2e-3 * 127) / 255, 9);
  });

  test.each<[string, Uint8Array | undefined, RegExp]>([
    ['is missing', undefined, /Put it beside the job/],
    ['is no picture', new TextEncoder().encode('hello'), /not a PNG/],
    ['is damaged', picture(8, 8, () => 9).map((byte, k) => (k > 40 ? byte ^ 0x55 : byte)), /damaged/],
    ['claims to be enormous', picture(8, 8, () => 9).map((byte, k) => (k === 16 ? 0x7f : byte)), /pixels\. Scale it/],
    [
      'has colours',
      encodePng({ width: 2, height: 2, data: Uint8Array.from(Array(4).fill([200, 10, 10, 255]).flat()) }),
      /has colours/,
    ],
    [
      'is see-through',
      encodePng({ width: 2, height: 2, data: Uint8Array.from(Array(4).fill([9, 9, 9, 100]).flat()) }),
      /see-through/,
    ],
  ])('whose relief %s is refused', (_, png, message) => {
    const face = { kind: 'relief', file: 'r.png', lengthMm: 4, widthMm: 3, heightMm: 0.2 };
    const problem = only(
      problemsWith(on('tool', { face }), { attachments: png ? { 'r.png': png } : {} }),
      'tool.face.file',
    );
    expect(problem).toMatchObject({ severity: 'refuse', value: 'r.png', message: expect.stringMatching(message) });
  });

  test.each<[string, unknown, string, RegExp]>([
    [
      'higher than the pass is deep',
      { kind: 'cone', angleDeg: 60 },
      'tool.face',
      /stands back 2\.\d* mm and the pass is 1 mm deep/,
    ],
    [
      'steeper than a flank can be',
      { kind: 'relief', file: 'r.png', lengthMm: 4, widthMm: 4, heightMm: 0.9 },
      'tool.face',
      /as steep as/,
    ],
    [
      'smaller than the tool',
      { kind: 'relief', file: 'soft.png', lengthMm: 2, widthMm: 2, heightMm: 0.1 },
      'tool.face',
      /smaller than the tool/,
    ],
  ])('%s is warned about', (_, face, path, message) => {
    const attachments = {
      'r.png': picture(32, 32, (i) => (i < 16 ? 0 : 255)),
      'soft.png': picture(32, 32, (i) => 4 * i),
    };
    const problems = problemsWith(on('tool', { face }), { attachments });
    expect(problems.some((one) => one.path === path && one.severity === 'warn' && message.test(one.message))).toBe(
      true,
    );
  });

  test('whose pilot is larger than the tool is refused', () => {
    const face = { kind: 'stepped', pilot: { kind: 'circle', diameterMm: 2.95 }, stepMm: 0.4 };
    expect(only(problemsWith(on('tool', { face })), 'tool.face.pilot')).toMatchObject({ severity: 'refuse' });
  });
});

describe('the machine of a job', () => {
  const horn = { shape: 'stepped', largeDiameterMm: 30, smallDiameterMm: 20, material: 'titanium' };

  // Stepped: gain (30 / 20)^2 = 2.25; 0.9 of it under load.
  test('with a horn vibrates by gain and loading of what the transducer does', () => {
    const job = resolvedWith((j) => {
      j.machine = { transducerAmplitudeUm: 8, horn };
    });
    expect(job.conditions.amplitude).toBeCloseTo(8e-6 * 2.25 * 0.9, 12);
    expect(job.notes.some((note) => /8 um at the transducer: gain 2\.25/.test(note))).toBe(true);
    expect(job.defaultsUsed).toContain('machine.horn.loadingFactor');
  });

  test.each<[string, unknown, string, 'refuse' | 'warn', RegExp]>([
    [
      'an amplitude twice',
      { amplitudeUm: 18, transducerAmplitudeUm: 8, horn },
      'machine.transducerAmplitudeUm',
      'refuse',
      /Take one of the two out/,
    ],
    ['a transducer without a horn', { transducerAmplitudeUm: 8 }, 'machine.horn', 'refuse', /give the horn/],
    [
      'a horn that widens',
      { transducerAmplitudeUm: 8, horn: { ...horn, smallDiameterMm: 40 } },
      'machine.horn.smallDiameterMm',
      'refuse',
      /Swap/,
    ],
    [
      'a uniform horn of two diameters',
      { transducerAmplitudeUm: 8, horn: { ...horn, shape: 'uniform' } },
      'machine.horn.smallDiameterMm',
      'refuse',
      /one diameter/,
    ],
    // practice: a transducer alone reaches about 25 um, so that a horn is needed. Common practice, no source.
    [
      'a transducer beyond what one reaches',
      { amplitudeUm: 19, horn: { ...horn, shape: 'uniform', smallDiameterMm: 30, loadingFactor: 0.6 } },
      'machine.amplitudeUm',
      'warn',
      /31\.7 um at the transducer, and about 25 um/,
    ],
    // practice: 20 to 40 kHz. Common practice, no source.
    [
      'a frequency out of the way',
      { amplitudeUm: 10, frequencyKHz: 15 },
      'machine.frequencyKHz',
      'warn',
      /20 to 40 kHz/,
    ],
  ])('with %s says so', (_, machine, path, severity, message) => {
    const problems = problemsWith((j) => Object.assign(j, { machine }));
    const found = problems.find((one) => one.path === path && one.severity === severity && message.test(one.message));
    expect(found, JSON.stringify(problems)).toBeDefined();
  });

  test('with a long tool is warned that it detunes, unless the horn was tuned with it', () => {
    const long = (tuned: boolean) =>
      problemsWith(
        all(on('tool', { lengthMm: 60 }), (j) =>
          Object.assign(j, { machine: { amplitudeUm: 15, horn: { ...horn, tuned } } }),
        ),
      );
    expect(long(false).map(({ path }) => path)).toContain('tool.lengthMm');
    expect(long(true).map(({ path }) => path)).not.toContain('tool.lengthMm');
  });

  test('whose horn would crack is refused', () => {
    const problems = problemsWith((j) =>
      Object.assign(j, {
        tool: { material: 'tool_steel' },
        machine: { amplitudeUm: 50, horn: { ...horn, material: 'aluminium7075' } },
      }),
    );
    expect(
      problems.some(({ severity, message }) => severity === 'refuse' && /The horn would crack/.test(message)),
    ).toBe(true);
  });
});

describe('tool wear', () => {
  test('is compensated unless the job says otherwise, and has no end unless it has a length', () => {
    expect(resolvedWith(() => undefined).passes[0]?.toolLife).toEqual({ compensated: true });
    const worn = resolvedWith(on('tool', { wearLengthMm: 2, wearCompensated: false }));
    expect(worn.passes[0]?.toolLife).toEqual({ compensated: false, length: 2e-3 });
  });
});

describe('a cavity that goes through', () => {
  const through = all(on('cavity', { through: true, depthMm: undefined }), on('workpiece', { thicknessMm: 2 }));

  test('is as deep as the workpiece is thick, and takes the load back in time', () => {
    const job = resolvedWith(
      all(through, on('machine', { exitLoadShare: 0.4 }), on('workpiece', { backing: 'bonded' })),
    );
    expect(job).toMatchObject({ through: true, depth: 2e-3 });
    expect(job.passes[0]?.exit).toMatchObject({ backing: true, loadShare: 0.4, thickness: 2e-3 });
    const from = job.passes[0]?.exit?.from ?? 0;
    // above two of the largest grains, 63.7 um, and at most half the thickness
    expect(from).toBeGreaterThanOrEqual(2 * 63.7e-6 * (1 - 1e-9));
    expect(from).toBeLessThanOrEqual(1e-3);
    expect(resolvedWith(all(through, on('machine', { exitFromMm: 0.7 }))).passes[0]?.exit?.from).toBeCloseTo(
      0.7e-3,
      12,
    );
  });

  test('may say its depth when that is the thickness, and no other', () => {
    expect(resolvedWith(all(through, on('cavity', { depthMm: 2 }))).depth).toBe(2e-3);
    expect(only(problemsWith(all(through, on('cavity', { depthMm: 1.5 }))), 'cavity.depthMm').severity).toBe('refuse');
  });

  test('without a thickness is refused', () => {
    const problems = problemsWith(all(through, on('workpiece', { thicknessMm: undefined })));
    expect(only(problems, 'workpiece.thicknessMm')).toMatchObject({
      severity: 'refuse',
      message: expect.stringMatching(/Add it/),
    });
  });

  test('comes out in the pass that gets there, and not before', () => {
    const job = resolvedWith(all(through, (j) => Object.assign(j, { passes: [{ stockUm: 200 }, {}] })));
    expect(job.passes[0]?.exit).toBeUndefined();
    expect(job.passes[1]?.exit).toBeDefined();
  });

  test('alone has an exit: what is said of it elsewhere is warned about', () => {
    const problems = problemsWith(all(on('machine', { exitLoadShare: 0.5 }), on('workpiece', { backing: 'bonded' })));
    expect(problems.map(({ path, severity }) => `${severity} ${path}`).toSorted()).toEqual([
      'warn machine.exitLoadShare',
      'warn workpiece.backing',
    ]);
  });
});

describe('a neighbouring cavity', () => {
  const neighbour = (xMm: number) =>
    on('workpiece', { neighbours: [{ outline: { kind: 'circle', diameterMm: 2 }, xMm, yMm: 0, depthMm: 1 }] });

  // Radii 1.5 and 1 mm.
  test('far away is no matter, near is warned about, in the way is refused', () => {
    expect(problemsWith(neighbour(5))).toEqual([]);
    const near = only(problemsWith(neighbour(2.8)), 'workpiece.neighbours[0]');
    expect(near.severity).toBe('warn');
    expect(near.message).toMatch(/0\.3 mm is left between the cavity and this neighbour/);
    const over = only(problemsWith(neighbour(2)), 'workpiece.neighbours[0]');
    expect(over.severity).toBe('refuse');
    expect(over.message).toMatch(/runs into this neighbour by 0\.5/);
  });

  test('so near that chips reach through is told to break out', () => {
    expect(only(problemsWith(neighbour(2.505)), 'workpiece.neighbours[0]').message).toMatch(/it will break out/);
  });
});
