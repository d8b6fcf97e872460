import { beforeAll, expect, test } from 'vitest';
import type { Rasteriser } from '#src/formats/raster.ts';
import { drawSection, type SectionDrawing } from '#src/picture/section.ts';
import { checkWellFormed, HOSTILE, labelClashes, testRasteriser } from '../support/drawing.ts';

/** A tapered pocket with a corner fillet of eight chords. */
function pocket(
  entry: number,
  floor: number,
  depth: number,
  corner: number,
): Pick<SectionDrawing, 'left' | 'right' | 'floor'> {
  const wall = (side: number): number[] => {
    const points = [side * entry, 0, (side * entry) / 2, 0];
    const half = floor / 2;
    for (let n = 0; n <= 8; n++) {
      const angle = (n * Math.PI) / 16;
      points.push(side * (half - corner * (1 - Math.cos(angle))), depth - corner * (1 - Math.sin(angle)));
    }
    return points;
  };
  return { left: wall(-1), right: wall(1), floor: [-(floor / 2 - corner), depth, floor / 2 - corner, depth] };
}

function drawing(entry: number, depth: number, more: Partial<SectionDrawing> = {}): SectionDrawing {
  const floor = entry * 0.997;
  return {
    title: 'Sensor pocket',
    caption: ['boron carbide F320, 3.0 N, 20 \u00b5m', 'seed 1, version 0.1.0'],
    round: true,
    centre: 0,
    ...pocket(entry, floor, depth, 0.1 * depth),
    depth,
    entrySize: entry,
    floorSize: floor,
    taper: 0.0072,
    cornerRadius: 0.1 * depth,
    chip: { width: 54e-6, depth: 18e-6, side: 'left' },
    tool: {
      width: 0.96 * entry,
      centre: 0,
      faceDepth: 0.97 * depth,
      edgeRadius: 0.06 * depth,
      worn: 7e-6,
      newEdgeRadius: 30e-6,
    },
    nominal: { entrySize: entry * 0.998, depth },
    thickness: 6e-3,
    limits: { entry: '3.000 +0.030 \u22120.010', taper: '\u2264 0.50\u00b0', chip: '\u2264 60 \u00b5m' },
    ...more,
  };
}

const CASES: readonly (readonly [string, SectionDrawing])[] = [
  ['as in the demo job', drawing(3e-3, 1e-3)],
  ['not yet at depth', drawing(3e-3, 0.64e-3, { nominal: { entrySize: 3e-3, depth: 1e-3 } })],
  ['very flat', drawing(3e-3, 0.05e-3)],
  ['very deep', drawing(0.8e-3, 5e-3)],
  ['nearly through', drawing(3e-3, 1e-3, { thickness: 1.05e-3 })],
  ['wide as a plate', drawing(40e-3, 8e-3, { thickness: 12e-3 })],
  ['without tool and chip', drawing(3e-3, 1e-3, { tool: undefined, chip: undefined } as Partial<SectionDrawing>)],
  ['chip at the right', drawing(3e-3, 1e-3, { chip: { width: 40e-6, depth: 12e-6, side: 'right' } })],
];

const OUT = { size: 2.99e-3, chip: { width: 200e-6, depth: 80e-6, side: 'right' }, backing: false } as const;
const WIDE = { from: -2.6e-3, to: 2.6e-3 };
const FORMS: readonly (readonly [string, SectionDrawing])[] = [
  ['through', drawing(3e-3, 2e-3, { thickness: 2e-3, exit: OUT })],
  ['through, backed', drawing(3e-3, 2e-3, { thickness: 2e-3, exit: { ...OUT, backing: true, into: 60e-6 } })],
  ['through a thin plate', drawing(3e-3, 0.2e-3, { thickness: 0.2e-3, exit: OUT })],
  [
    'through, chip at the left',
    drawing(3e-3, 2e-3, { thickness: 2e-3, exit: { ...OUT, chip: { ...OUT.chip, side: 'left' } } }),
  ],
  ['deep and through', drawing(0.6e-3, 4e-3, { thickness: 4e-3, exit: { ...OUT, size: 0.59e-3, backing: true } })],
  ['no plane floor', drawing(3e-3, 1e-3, { shaped: true, floorSize: Number.NaN, taper: Number.NaN })],
  ['stepped', drawing(3e-3, 1.4e-3, { shoulder: { depth: 0.5e-3 }, floorSize: 1.6e-3 })],
  [
    'three islands',
    drawing(1.2e-3, 0.8e-3, {
      centre: -2e-3,
      centres: [-2e-3, 0, 2e-3],
      extent: WIDE,
      ...pocket(5.2e-3, 5.1e-3, 0.8e-3, 0.1e-3),
    }),
  ],
  [
    'two passes',
    drawing(3e-3, 1e-3, {
      caption: Array.from({ length: 4 }, (_, n) => `Pass ${n + 1}: as before`),
      earlier: [{ width: 2.7e-3, centre: 0, faceDepth: 0.9e-3, edgeRadius: 1e-5, worn: 0, newEdgeRadius: 1e-5 }],
    }),
  ],
  ['off the middle', drawing(3e-3, 1e-3, { plane: -0.8e-3 })],
  ['no corner measured', drawing(3e-3, 1e-3, { cornerRadius: Number.NaN })],
];

let rasteriser: Rasteriser;
beforeAll(async () => {
  rasteriser = await testRasteriser();
});

test.each([...CASES, ...FORMS])('labels touch neither lines nor each other: %s', (_name, record) => {
  const drawn = drawSection(record);
  checkWellFormed(drawn.svg);
  expect(labelClashes(drawn.labels, drawn.strokes)).toEqual([]);
  for (const { box } of drawn.labels) {
    expect(box.x).toBeGreaterThanOrEqual(0);
    expect(box.x + box.width).toBeLessThanOrEqual(drawn.width);
    expect(box.y + box.height).toBeLessThanOrEqual(drawn.height);
  }
  expect(rasteriser.rasterise(drawn.svg, 680).height).toBeGreaterThan(200);
});

test('a cavity of usual form is drawn at true scale and says so; a flat one is stretched and says by how much', () => {
  const usual = drawSection(drawing(3e-3, 1e-3));
  expect(usual.exaggeration).toBe(1);
  expect(usual.labels.map(({ text }) => text)).toContain('True scale, across and down.');
  const flat = drawSection(drawing(3e-3, 0.05e-3));
  expect(flat.exaggeration).toBeGreaterThan(1);
  expect(flat.labels.map(({ text }) => text)).toContain(
    `Not to true scale: heights drawn \u00d7${flat.exaggeration} against widths.`,
  );
});

test('the entry size stands over a dimension line of its length at the scale of the drawing', () => {
  const record = drawing(3e-3, 1e-3);
  const drawn = drawSection(record);
  const lengths = drawn.strokes.filter(({ y0, y1 }) => y0 === y1).map(({ x0, x1 }) => x1 - x0);
  const wanted = record.entrySize * drawn.across;
  expect(lengths.some((length) => Math.abs(length - wanted) < 1e-9)).toBe(true);
  expect(drawn.labels.map(({ text }) => text)).toContain('entry \u00d8\u20093.000');
});

test('it is sized for print: 180 mm wide to 0.2 mm, with lettering of 2.9 mm (11 units) or more', () => {
  const { svg } = drawSection(drawing(3e-3, 1e-3));
  const width = Number(/width="([\d.]+)mm"/.exec(svg)?.[1]);
  expect(Math.abs(width - 180)).toBeLessThan(0.2);
  for (const match of svg.matchAll(/font-size="([\d.]+)"/g)) expect(Number(match[1])).toBeGreaterThanOrEqual(11);
});

const words = (record: SectionDrawing): string[] => drawSection(record).labels.map(({ text }) => text);
const form = (name: string): SectionDrawing =>
  (FORMS.find(([own]) => own === name) as readonly [string, SectionDrawing])[1];

test('a hole through the work has an exit and its chip, and neither floor nor corner', () => {
  const told = words(form('through'));
  expect(told).toEqual(expect.arrayContaining(['exit \u00d8\u20092.990', 'exit chip 200 \u00d7 80 \u00b5m', '2.000']));
  expect(told.filter((text) => /floor|corner|backing/i.test(text))).toEqual([]);
  expect(words(form('through, backed'))).toContain('backing');
});

test('a floor that is no plane has neither size nor corner', () => {
  const told = words(form('no plane floor'));
  expect(told.filter((text) => /floor|corner/i.test(text))).toEqual([]);
  expect(told).toContain('Depth, tip');
});

test('a stepped hole shows both depths and both sizes', () => {
  expect(words(form('stepped'))).toEqual(
    expect.arrayContaining(['0.500', '1.400', 'entry \u00d8\u20093.000', 'pilot \u00d8\u20091.600']),
  );
});

test('several islands show the size of one and the pitch to the next', () => {
  expect(words(form('three islands'))).toEqual(expect.arrayContaining(['entry \u00d8\u20091.200', 'pitch 2.000']));
});

test('hostile titles, captions and limits stay text on the sheet', () => {
  for (const text of HOSTILE) {
    const drawn = drawSection(
      drawing(3e-3, 1e-3, { title: text, caption: [text, text], limits: { entry: text, chip: text } }),
    );
    checkWellFormed(drawn.svg);
    expect(drawn.svg).not.toMatch(/<script|<image|[\u202a-\u202e]/);
    expect(labelClashes(drawn.labels, drawn.strokes)).toEqual([]);
    for (const { box } of drawn.labels) expect(box.x + box.width).toBeLessThanOrEqual(drawn.width);
  }
});
