import { expect, test } from 'vitest';
import { drawTrace, type TraceDrawing } from '#src/picture/trace.ts';
import { checkWellFormed, HOSTILE, labelClashes } from '../support/drawing.ts';

const LENGTH = 4801;
const SPACING = 1e-6;
const AMPLITUDE = 2e-6;

function sine(amplitude: number): TraceDrawing['profile'] {
  return {
    spacing: SPACING,
    z: Float64Array.from({ length: LENGTH }, (_, n) => amplitude * Math.sin((2 * Math.PI * n) / 200)),
  };
}

const DRAWING: TraceDrawing = {
  title: 'Floor trace, after 17.1 s',
  profile: sine(AMPLITUDE),
  mean: 0,
  figures: [
    { symbol: 'Ra', value: (2 * AMPLITUDE) / Math.PI, kind: 'length' },
    { symbol: 'Rz', value: 2 * AMPLITUDE, kind: 'length' },
    { symbol: 'Rsk', value: -0.62, kind: 'number' },
  ],
  lambdaC: 0.8e-3,
  lambdaS: 2.5e-6,
  evaluationLength: 4e-3,
  departures: ['The floor is 2.6 mm long; the standard asks for 4.0 mm.'],
  earlier: [
    { label: '4 s', profile: sine(0.5 * AMPLITUDE) },
    { label: '8 s', profile: sine(0.8 * AMPLITUDE) },
  ],
};

test('labels touch neither lines nor each other, and the text is well formed', () => {
  const drawn = drawTrace(DRAWING);
  checkWellFormed(drawn.svg);
  expect(labelClashes(drawn.labels, drawn.strokes)).toEqual([]);
});

test('thinning the points to the drawing keeps every peak and pit: the line spans twice the amplitude', () => {
  const drawn = drawTrace({ ...DRAWING, earlier: [] });
  const slanted = drawn.strokes
    .filter(({ x0, y0, x1, y1 }) => x0 !== x1 && y0 !== y1)
    .flatMap(({ y0, y1 }) => [y0, y1]);
  const span = Math.max(...slanted) - Math.min(...slanted);
  expect(span).toBeCloseTo(2 * AMPLITUDE * drawn.up, 6);
});

test('figures, nesting indices, evaluation length and departures stand on the sheet', () => {
  const words = drawTrace(DRAWING)
    .labels.map(({ text }) => text)
    .join('\n');
  expect(words).toContain('Ra 1.27 \u00b5m');
  expect(words).toContain('Rz 4.00 \u00b5m');
  expect(words).toContain('Rsk \u22120.62');
  expect(words).toContain('\u03bbc 0.80 mm');
  expect(words).toContain('\u03bbs 2.50 \u00b5m');
  expect(words).toContain('evaluation length 4.00 mm');
  expect(words).toContain('the standard asks for 4.0 mm');
  expect(words).toContain('earlier, raised: 4 s, 8 s');
});

test('a flat profile is drawn, and a single point is refused', () => {
  const flat = { spacing: SPACING, z: new Float64Array(100) };
  checkWellFormed(drawTrace({ ...DRAWING, profile: flat, earlier: [] }).svg);
  expect(() => drawTrace({ ...DRAWING, profile: { spacing: SPACING, z: Float64Array.of(0) } })).toThrow(RangeError);
});

test('hostile titles, symbols and labels stay text on the sheet', () => {
  for (const text of HOSTILE) {
    const drawn = drawTrace({
      ...DRAWING,
      title: text,
      departures: [text],
      figures: [{ symbol: text, value: 1e-6, kind: 'length' }],
      earlier: [{ label: text, profile: sine(1e-6) }],
    });
    checkWellFormed(drawn.svg);
    expect(labelClashes(drawn.labels, drawn.strokes)).toEqual([]);
    for (const { box } of drawn.labels) expect(box.x + box.width).toBeLessThanOrEqual(drawn.width);
  }
});
