import fc from 'fast-check';
import { beforeAll, expect, test } from 'vitest';
import { crc32, decodePng, encodePng } from '#src/formats/png.ts';
import { laidOver, type Rasteriser } from '#src/formats/raster.ts';
import { testRasteriser } from '../support/drawing.ts';

function pattern(width: number, height: number, alpha: (n: number) => number): Uint8ClampedArray {
  const data = new Uint8ClampedArray(4 * width * height);
  for (let n = 0; n < width * height; n++) data.set([(7 * n) & 255, (13 * n) & 255, (29 * n) & 255, alpha(n)], 4 * n);
  return data;
}

// "123456789" is the customary check of CRC-32; IEND's sum is in every PNG file.
test('the checksum is CRC-32', () => {
  expect(crc32(new TextEncoder().encode('123456789'))).toBe(0xcbf43926);
  expect(crc32(new TextEncoder().encode('IEND'))).toBe(0xae426082);
});

test.each([
  ['opaque', () => 255],
  ['with alpha', (n: number) => n & 255],
] as const)('a picture comes back byte for byte: %s', (_name, alpha) => {
  const picture = { width: 37, height: 23, data: pattern(37, 23, alpha) };
  const back = decodePng(encodePng(picture));
  expect(back.width).toBe(37);
  expect(back.height).toBe(23);
  expect(Array.from(back.data)).toEqual(Array.from(picture.data));
  expect(back.pixel).toBeUndefined();
});

// pHYs holds whole pixels per metre, so a pixel of 2 um is exact and any other right to half a pixel in 1/size.
test('the physical size of a pixel comes back', () => {
  const picture = { width: 2, height: 2, data: pattern(2, 2, () => 255) };
  expect(decodePng(encodePng(picture, { pixel: 2e-6 })).pixel).toBe(1 / 500000);
  fc.assert(
    fc.property(fc.double({ min: 1e-8, max: 1e-2, noNaN: true }), (pixel) => {
      const back = decodePng(encodePng(picture, { pixel })).pixel as number;
      expect(Math.abs(1 / back - 1 / pixel)).toBeLessThanOrEqual(0.5 + 1e-6 / pixel);
    }),
    { seed: 3, numRuns: 50 },
  );
  expect(() => encodePng(picture, { pixel: 0 })).toThrow(RangeError);
  expect(() => encodePng(picture, { pixel: Number.NaN })).toThrow(RangeError);
});

test('captions come back, in Latin-1 or in any script', () => {
  const picture = { width: 1, height: 1, data: pattern(1, 1, () => 255) };
  const text = {
    Title: 'Taschen f\u00fcr Sensoren, 20 \u00b5m',
    Comment: '\u6df1\u3055 0.642 mm, \u03bbc',
    Note: '\u05e9\u05dc\u05d5\u05dd',
  };
  expect(decodePng(encodePng(picture, { text })).text).toEqual(text);
  expect(() => encodePng(picture, { text: { '': 'x' } })).toThrow(RangeError);
  expect(() => encodePng(picture, { text: { ['k'.repeat(80)]: 'x' } })).toThrow(RangeError);
});

test('pHYs and text stand before the image data, as the standard asks of pHYs', () => {
  const bytes = encodePng(
    { width: 1, height: 1, data: pattern(1, 1, () => 255) },
    { pixel: 1e-6, text: { Title: 'x' } },
  );
  const names = [...new TextDecoder('latin1').decode(bytes).matchAll(/IHDR|pHYs|tEXt|IDAT|IEND/g)].map(
    ([name]) => name,
  );
  expect(names).toEqual(['IHDR', 'pHYs', 'tEXt', 'IDAT', 'IEND']);
});

test('the same picture and notes give the same bytes, and a damaged file is refused', () => {
  const picture = { width: 16, height: 16, data: pattern(16, 16, () => 255) };
  const bytes = encodePng(picture, { pixel: 1e-6, text: { Title: 'x' } });
  expect(encodePng(picture, { pixel: 1e-6, text: { Title: 'x' } })).toEqual(bytes);
  for (const at of [45, 70, 100]) {
    const damaged = Uint8Array.from(bytes);
    damaged[at] = (damaged[at] as number) ^ 4;
    expect(() => decodePng(damaged)).toThrow();
  }
});

let rasteriser: Rasteriser;
beforeAll(async () => {
  rasteriser = await testRasteriser();
});

const square = (fill: string): string =>
  `<svg xmlns="http://www.w3.org/2000/svg" width="4" height="2"><rect width="2" height="2" fill="${fill}"/></svg>`;

test('a drawing lies over a picture: full colour hides, half mixes, nothing leaves it as it is', () => {
  const under = { width: 4, height: 2, data: pattern(4, 2, () => 255) };
  const opaque = laidOver(under, rasteriser.rasterise(square('#204060'), 4));
  expect(Array.from(opaque.data.slice(0, 4))).toEqual([0x20, 0x40, 0x60, 255]);
  expect(Array.from(opaque.data.slice(8, 16))).toEqual(Array.from(under.data.slice(8, 16)));
  const half = laidOver(under, rasteriser.rasterise(square('rgba(255,255,255,0.5)'), 4));
  // 0.5 is kept as 128/255 and colours are bytes: right to 2
  expect(Math.abs((half.data[4] as number) - (7 + 255) / 2)).toBeLessThanOrEqual(2);
  expect(() => laidOver(under, rasteriser.rasterise(square('#000000'), 8))).toThrow(RangeError);
});

// Without the fonts nothing would be drawn at all; the semi-bold cut covers more paper than the regular one.
test('text is drawn with the fonts given, in both weights, the same every time', () => {
  const word = (weight: string): string =>
    `<svg xmlns="http://www.w3.org/2000/svg" width="120" height="30"><text x="4" y="20" font-family="Inter" font-size="16" font-weight="${weight}">entry 3.006</text></svg>`;
  const ink = (svg: string): number =>
    rasteriser.rasterise(svg, 120).data.reduce((sum, value, n) => sum + (n % 4 === 3 ? value : 0), 0);
  expect(ink(word('400'))).toBeGreaterThan(255 * 80);
  expect(ink(word('600'))).toBeGreaterThan(1.15 * ink(word('400')));
  expect(rasteriser.rasterise(word('600'), 120).data).toEqual(rasteriser.rasterise(word('600'), 120).data);
});
