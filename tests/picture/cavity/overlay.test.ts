import { beforeAll, expect, test } from 'vitest';
import type { Rasteriser } from '#src/formats/raster.ts';
import { type CavityLabels, cavityOverlay, overlayMargins } from '#src/picture/cavity/overlay.ts';
import { fitView, naturalHeight, type SectionView, toPicture } from '#src/picture/cavity/view.ts';
import { LIGHT, rgbOf } from '#src/picture/palette.ts';
import { checkWellFormed, HOSTILE, labelClashes, testRasteriser } from '../../support/drawing.ts';

const LABELS: CavityLabels = {
  round: true,
  centre: 0,
  behind: 1.503e-3,
  entrySize: 3.006e-3,
  floorSize: 2.997e-3,
  depth: 0.642e-3,
  wantedDepth: 1e-3,
  chip: { width: 54e-6, x: -0.66e-3, y: 1.36e-3 },
  tool: { width: 2.9e-3, centre: 0, faceDepth: 0.62e-3, edgeRadius: 37e-6, worn: 7e-6, newEdgeRadius: 30e-6 },
  caption: { title: 'Sensor pocket', grit: 'boron carbide F320', time: 17.1, seed: 1, version: '0.1.0' },
};

const OUT = { size: 2.99e-3, chip: { width: 200e-6, depth: 80e-6, side: 'right' }, backing: false } as const;

function viewFor(width: number, labels: CavityLabels): SectionView {
  const half = labels.entrySize / 2;
  const { from, to } = labels.extent ?? { from: -half, to: half };
  const bounds = { xMin: from, xMax: to, yMin: -half, yMax: half, depth: labels.wantedDepth };
  const what = { backing: labels.exit?.backing ?? false, gang: labels.centres !== undefined };
  const margins = overlayMargins(width / 1060, what);
  return fitView({ width, height: naturalHeight(width, bounds, margins) }, bounds, margins, 0);
}

let rasteriser: Rasteriser;
beforeAll(async () => {
  rasteriser = await testRasteriser();
});

test('the scale bar is as long as it says, on paper and in pixels', () => {
  const view = viewFor(1200, LABELS);
  const { svg, scaleBar } = cavityOverlay(view, LABELS, { unit: 1200 / 1060 });
  expect(scaleBar.length).toBe(0.5e-3);
  const wanted = toPicture(view, scaleBar.length, 0, 0).px - toPicture(view, 0, 0, 0).px;
  expect(scaleBar.x1 - scaleBar.x0).toBeCloseTo(wanted, 9);
  // the longest unbroken run of full ink below the cavity is the bar: its ends are strokes 1.4 px wide
  const image = rasteriser.rasterise(svg, view.width);
  const [ink] = rgbOf(LIGHT.ink);
  let longest = 0;
  const first = Math.ceil(toPicture(view, 0, 0, 1.15e-3).py);
  for (let y = first; y < view.height - 45; y++) {
    for (let x = 0, run = 0; x < view.width; x++) {
      const at = 4 * (y * view.width + x);
      run = (image.data[at + 3] as number) > 200 && Math.abs((image.data[at] as number) - ink) < 12 ? run + 1 : 0;
      longest = Math.max(longest, run);
    }
  }
  expect(Math.abs(longest - wanted)).toBeLessThan(2);
});

test.each([
  ['as in the demo job', LABELS, 1600],
  ['at the smallest width', LABELS, 900],
  ['finished', { ...LABELS, depth: 1e-3 }, 1200],
  ['just begun', { ...LABELS, depth: 0.02e-3 }, 1200],
  ['with the chip at the right', { ...LABELS, chip: { width: 40e-6, x: 1.2e-3, y: 0.9e-3 } }, 1200],
  [
    'small and deep',
    {
      ...LABELS,
      entrySize: 1e-3,
      floorSize: 0.99e-3,
      behind: 0.5e-3,
      depth: 1.6e-3,
      wantedDepth: 2e-3,
      chip: { width: 40e-6, x: -0.3e-3, y: 0.4e-3 },
      tool: { ...LABELS.tool, width: 0.94e-3 },
    },
    1200,
  ],
  ['through', { ...LABELS, depth: 1e-3, exit: OUT }, 1600],
  ['through, backed', { ...LABELS, depth: 1e-3, exit: { ...OUT, backing: true } }, 1600],
  ['no plane floor', { ...LABELS, depth: 1e-3, shaped: true, floorSize: Number.NaN }, 1600],
  ['stepped', { ...LABELS, depth: 1e-3, shoulder: { depth: 0.4e-3 }, floorSize: 1.5e-3 }, 1600],
  [
    'three islands',
    {
      ...LABELS,
      depth: 1e-3,
      behind: 0.6e-3,
      entrySize: 1.2e-3,
      floorSize: 1.19e-3,
      centre: -2e-3,
      centres: [-2e-3, 0, 2e-3],
      extent: { from: -2.6e-3, to: 2.6e-3 },
      chip: { width: 50e-6, x: -1.7e-3, y: 0.5e-3 },
      tool: { ...LABELS.tool, width: 1.1e-3, centre: -2e-3 },
    },
    1600,
  ],
] as const)('labels touch neither lines nor each other: %s', (_name, labels, width) => {
  const view = viewFor(width, labels as CavityLabels);
  const shading = { kind: 'damage', high: 60e-6 } as const;
  const overlay = cavityOverlay(view, labels as CavityLabels, { unit: width / 1060, shading });
  expect(labelClashes(overlay.labels, overlay.strokes)).toEqual([]);
});

test('hostile titles, grits and versions stay text, inside the picture', () => {
  const view = viewFor(1060, LABELS);
  for (const text of HOSTILE) {
    const caption = { ...LABELS.caption, title: text, grit: text, version: text };
    const overlay = cavityOverlay(view, { ...LABELS, caption });
    checkWellFormed(overlay.svg);
    expect(overlay.svg).not.toMatch(/<script|<image|[\u202a-\u202e]/);
    expect(labelClashes(overlay.labels, overlay.strokes)).toEqual([]);
    for (const { box } of overlay.labels) expect(box.x + box.width).toBeLessThanOrEqual(view.width);
    expect(rasteriser.rasterise(overlay.svg, view.width).width).toBe(view.width);
  }
});

test('the same labels give the same text', () => {
  const view = viewFor(1060, LABELS);
  expect(cavityOverlay(view, LABELS).svg).toBe(cavityOverlay(view, LABELS).svg);
});

test('a coloured picture carries its legend with unit and both ends, a plain one none', () => {
  const view = viewFor(1060, LABELS);
  const words = (options: Parameters<typeof cavityOverlay>[2]): string[] =>
    cavityOverlay(view, LABELS, options).labels.map(({ text }) => text);
  expect(words({ shading: { kind: 'damage', high: 60e-6 } })).toEqual(
    expect.arrayContaining(['damage depth 0', '60 \u00b5m']),
  );
  expect(words({ shading: { kind: 'depth', high: 1e-3 } })).toEqual(expect.arrayContaining(['depth 0', '1.000 mm']));
  expect(words({ shading: { kind: 'age' }, recorded: 27.8 })).toEqual(
    expect.arrayContaining(['last hit at 0', '27.8 s']),
  );
  expect(words({})).not.toContain('depth 0');
});

test('a chip in the half cut away is named and not marked', () => {
  const view = viewFor(1060, LABELS);
  const { labels, svg } = cavityOverlay(view, { ...LABELS, chip: { width: 54e-6, x: 0, y: -1.5e-3 } });
  expect(labels.map(({ text }) => text)).toContain('largest chip 54 \u00b5m, in the half cut away');
  expect(svg).not.toContain('<circle');
});
