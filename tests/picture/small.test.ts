import fc from 'fast-check';
import { expect, test } from 'vitest';
import { cividis, cividisTable } from '#src/picture/cividis.ts';
import { duration, figure, inUm, shortLength } from '#src/picture/figures.ts';
import { DARK, hexOf, LIGHT, rgbOf } from '#src/picture/palette.ts';
import { type Stroke, strokeTouchesBox } from '#src/picture/sheet.ts';
import { coordinate, element, escapeText, plainText } from '#src/picture/svg.ts';
import { oneTwoFive, ticks } from '#src/picture/ticks.ts';
import { fitText, textWidth, wrapText } from '#src/picture/type.ts';
import { checkWellFormed } from '../support/drawing.ts';

const SEED = { seed: 20, numRuns: 300 };

/** Relative luminance of sRGB (IEC 61966-2-1) and CIE 1976 lightness of it. */
function lightness(rgb: readonly [number, number, number]): number {
  const [r, g, b] = rgb.map((value) => {
    const share = value / 255;
    return share <= 0.04045 ? share / 12.92 : ((share + 0.055) / 1.055) ** 2.4;
  }) as [number, number, number];
  const y = 0.2126 * r + 0.7152 * g + 0.0722 * b;
  return y > 0.008856 ? 116 * Math.cbrt(y) - 16 : 903.3 * y;
}

// Published table: Nunez, Anderton and Renslow 2018, entries 0, 1, 19, 30, 36, 63, 122, 191, 244, 250, 255.
test.each([
  [0, 0, 0.135112, 0.304751],
  [1, 0, 0.138068, 0.311105],
  [19, 0, 0.186915, 0.435532],
  [30, 0.087465, 0.214879, 0.437342],
  [36, 0.130669, 0.231458, 0.43284],
  [63, 0.25974, 0.30512, 0.42281],
  [122, 0.468254, 0.468083, 0.464908],
  [191, 0.732422, 0.677364, 0.425717],
  [244, 0.959284, 0.862365, 0.253563],
  [250, 0.987293, 0.884718, 0.213336],
  [255, 0.995737, 0.909344, 0.217772],
])('cividis entry %d is the published one within 1/255', (entry, red, green, blue) => {
  const colour = cividis(entry / 255);
  [red, green, blue].forEach((value, channel) => {
    expect(Math.abs((colour[channel] as number) - 255 * value)).toBeLessThan(1);
  });
});

test('cividis grows lighter from end to end, and evenly: the published property', () => {
  const table = cividisTable();
  const values = Array.from({ length: 256 }, (_, n) =>
    lightness([table[3 * n], table[3 * n + 1], table[3 * n + 2]] as [number, number, number]),
  );
  const whole = (values[255] as number) - (values[0] as number);
  for (let n = 1; n < 256; n++) expect((values[n] as number) - (values[n - 1] as number)).toBeGreaterThan(0);
  // straight in CAM02-UCS lightness, not quite in CIELAB: 6 of 77 units
  values.forEach((value, n) => {
    expect(Math.abs(value - (values[0] as number) - (whole * n) / 255)).toBeLessThan(6);
  });
});

test('shares outside 0 to 1, and none at all, take the end colours', () => {
  expect(cividis(-1)).toEqual(cividis(0));
  expect(cividis(2)).toEqual(cividis(1));
  expect(cividis(Number.NaN)).toEqual(cividis(0));
});

test('any text at all becomes well-formed content and attributes', () => {
  fc.assert(
    fc.property(fc.string({ unit: 'binary', maxLength: 500 }), (text) => {
      checkWellFormed(element('text', { title: text }, escapeText(text)));
      expect(plainText(text)).not.toMatch(/[\n\r\t\u202a-\u202e\u2066-\u2069]/);
    }),
    SEED,
  );
});

test('a coordinate that is not finite is refused, and zero has no sign', () => {
  expect(() => coordinate(Number.NaN)).toThrow(RangeError);
  expect(() => coordinate(Number.POSITIVE_INFINITY)).toThrow(RangeError);
  expect(coordinate(-0.001)).toBe('0');
});

test('the largest of the 1-2-5 series below a limit is within a factor 2.5 of it', () => {
  fc.assert(
    fc.property(fc.double({ min: 1e-9, max: 1e9, noNaN: true }), (limit) => {
      const length = oneTwoFive(limit);
      expect(length).toBeLessThanOrEqual(limit * (1 + 1e-11));
      expect(length * 2.5).toBeGreaterThanOrEqual(limit * (1 - 1e-11));
      expect([1, 2, 5]).toContain(Number(length.toExponential(9).split('e')[0]));
    }),
    SEED,
  );
  expect(oneTwoFive(1e-3)).toBe(1e-3);
  expect(oneTwoFive(0.999e-3)).toBe(5e-4);
  expect(() => oneTwoFive(0)).toThrow(RangeError);
});

test('ticks are multiples of a 1-2-5 step inside the range, no more than asked for and one', () => {
  fc.assert(
    fc.property(
      fc.double({ min: -1e3, max: 1e3, noNaN: true }),
      fc.double({ min: 1e-3, max: 1e3, noNaN: true }),
      (low, span) => {
        const { values, step } = ticks(low, low + span, 6);
        expect(values.length).toBeLessThanOrEqual(7);
        expect(span / step).toBeGreaterThan(6 / 2.5 - 1e-6);
        for (const value of values) {
          expect(value).toBeGreaterThanOrEqual(low - 1e-6 * step);
          expect(value).toBeLessThanOrEqual(low + span + 1e-6 * step);
          expect(Math.abs(value / step - Math.round(value / step))).toBeLessThan(1e-6);
        }
      },
    ),
    SEED,
  );
});

test('figures carry the minus sign of print, fixed decimals and a word where there is none', () => {
  expect(figure(-1.25, 1)).toBe('\u22121.3');
  expect(figure(-0.0001, 2)).toBe('0.00');
  expect(figure(Number.NaN, 2)).toBe('no value');
  expect(inUm(54e-6)).toBe('54');
  expect(inUm(1.12e-6)).toBe('1.12');
  expect(duration(17.1)).toBe('17.1 s');
  expect(duration(150)).toBe('2.50 min');
  expect(shortLength(0.5e-3)).toBe('0.5 mm');
  expect(shortLength(50e-6)).toBe('50 \u00b5m');
  expect(shortLength(0.1e-3)).toBe('0.1 mm');
});

test('fitted and wrapped text is never wider than its room', () => {
  fc.assert(
    fc.property(fc.string({ maxLength: 500 }), fc.integer({ min: 20, max: 400 }), (text, room) => {
      expect(textWidth(fitText(text, room, 12), 12)).toBeLessThanOrEqual(room);
      const lines = wrapText(text, room, 11, 3);
      expect(lines.length).toBeLessThanOrEqual(3);
      for (const line of lines) expect(textWidth(line, 11)).toBeLessThanOrEqual(room);
    }),
    SEED,
  );
});

// Reference: 2000 points along the stroke, none of them in the grown box.
test('a stroke touches a box exactly when a point of it does', () => {
  const number = fc.double({ min: -10, max: 10, noNaN: true });
  fc.assert(
    fc.property(fc.tuple(number, number, number, number), fc.tuple(number, number), ([x0, y0, x1, y1], [x, y]) => {
      const stroke: Stroke = { x0, y0, x1, y1 };
      const box = { x, y, width: 4, height: 2 };
      let inside = false;
      for (let n = 0; n <= 2000; n++) {
        const px = x0 + ((x1 - x0) * n) / 2000;
        const py = y0 + ((y1 - y0) * n) / 2000;
        inside ||= px >= x && px <= x + 4 && py >= y && py <= y + 2;
      }
      if (inside) expect(strokeTouchesBox(stroke, box)).toBe(true);
      // a graze between two sample points is at most 0.01 deep
      else expect(strokeTouchesBox(stroke, { x: x + 0.02, y: y + 0.02, width: 3.96, height: 1.96 })).toBe(false);
    }),
    SEED,
  );
});

// WCAG 2 contrast (L1 + 0.05)/(L2 + 0.05): text needs 4.5.
test.each([
  ['light', LIGHT],
  ['dark', DARK],
] as const)('ink and second ink are legible on paper and glass: %s', (_name, palette) => {
  const luminance = (hex: string): number => {
    const l = lightness(rgbOf(hex) as [number, number, number]);
    return ((l + 16) / 116) ** 3;
  };
  const contrast = (a: string, b: string): number => {
    const [low, high] = [luminance(a), luminance(b)].sort((p, q) => p - q) as [number, number];
    return (high + 0.05) / (low + 0.05);
  };
  for (const ground of [palette.paper, palette.glass]) {
    expect(contrast(palette.ink, ground)).toBeGreaterThan(4.5);
    expect(contrast(palette.ink2, ground)).toBeGreaterThan(4.5);
  }
  expect(hexOf(...(rgbOf(palette.glass) as [number, number, number]))).toBe(palette.glass);
});
