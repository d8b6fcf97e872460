import { describe, expect, test } from 'vitest';
import { judgeDrawing, limitRows, verdictHeadline, verdictSummary } from '#src/formats/drawing.ts';
import type { JobFile, LimitsFile, OutlineFile } from '#src/formats/job/schema.ts';
import { FIGURE_NAMES, type Figures, plainFigure } from '#src/planning/figures.ts';

const job = (limits: LimitsFile, outline: OutlineFile = { kind: 'circle', diameterMm: 3 }): JobFile => ({
  spallwright: 1,
  workpiece: { material: 'quartz' },
  cavity: { outline, depthMm: 1, limits },
  slurry: { abrasive: 'b4c', grit: 'F320' },
});

const figures = (change: Partial<Figures>): Figures => ({
  ...(Object.fromEntries(FIGURE_NAMES.map((name) => [name, plainFigure(0)])) as unknown as Figures),
  stallMargin: plainFigure(null, 'not known'),
  entrySizeMm: plainFigure([3]),
  ...change,
});

const all: LimitsFile = {
  entrySizeUpperMm: 0.03,
  entrySizeLowerMm: -0.01,
  taperDeg: 0.5,
  floorFlatnessUm: 20,
  cornerRadiusMm: 0.08,
  floorRaUm: 1.6,
  edgeChipUm: 60,
  damageDepthUm: 40,
  timeMin: 1.5,
};

describe('the limits of a drawing', () => {
  test('are eight: the two deviations of the entry size make one', () => {
    const verdict = judgeDrawing(job(all), figures({}));
    expect(verdict.limits).toHaveLength(8);
    expect(verdictHeadline(verdict)).toBe('Meets the drawing: all eight limits.');
  });

  test('that are not stated are not judged', () => {
    const verdict = judgeDrawing(job({}), figures({}));
    expect(verdict).toEqual({ overall: 'not judged', limits: [] });
    expect(verdictHeadline(verdict)).toBe('The drawing sets no limits.');
  });

  test('name what is at risk, the least margin first', () => {
    const verdict = judgeDrawing(
      job(all),
      figures({
        edgeChipMaxUm: { value: 54, low: 44, high: 68, covers: 'all' },
        taperDeg: { value: 0.42, low: 0.33, high: 0.52, covers: 'all' },
      }),
    );
    expect(verdictHeadline(verdict)).toBe('At risk: edge chip, taper');
    expect(verdictSummary(verdict)).toBe('Six of eight limits are met.');
  });

  test('hold the corner radius in millimetres against its figure in micrometres', () => {
    const [row] = limitRows(job({ cornerRadiusMm: 0.08 }), figures({ cornerRadiusUm: plainFigure(79) }));
    expect(row).toMatchObject({ id: 'cornerRadiusUm', upper: 80, lower: null });
  });

  test('hold each entry size of a pocket against its own nominal size', () => {
    const pocket = job(
      { entrySizeUpperMm: 0.05, entrySizeLowerMm: -0.02 },
      { kind: 'rectangle', lengthMm: 4, widthMm: 2.5 },
    );
    const state = (sizes: number[]) => judgeDrawing(pocket, figures({ entrySizeMm: plainFigure(sizes) })).overall;
    expect(state([4.04, 2.54])).toBe('meets');
    expect(state([4.04, 2.56])).toBe('misses');
    expect(state([3.97, 2.54])).toBe('misses');
  });

  test('mirror the deviations for the core of a ring, where a larger cavity is a smaller core', () => {
    const ring = job(
      { entrySizeUpperMm: 0.05, entrySizeLowerMm: 0 },
      { kind: 'ring', outerDiameterMm: 6, innerDiameterMm: 3.6 },
    );
    const state = (sizes: number[]) => judgeDrawing(ring, figures({ entrySizeMm: plainFigure(sizes) })).overall;
    expect(state([6.03, 3.57])).toBe('meets');
    expect(state([6.03, 3.62])).toBe('misses');
    expect(state([6.03, 3.54])).toBe('misses');
  });

  test('with one deviation alone leave the other side open', () => {
    const state = (size: number) =>
      judgeDrawing(job({ entrySizeUpperMm: 0.03 }), figures({ entrySizeMm: plainFigure([size]) })).overall;
    expect(state(1)).toBe('meets');
    expect(state(3.04)).toBe('misses');
  });

  test('are joined by the stall margin once it is known, which is not counted among them', () => {
    const near = { value: 0.1, low: -0.1, high: 0.3, covers: 'all' };
    const verdict = judgeDrawing(job({ taperDeg: 1 }), figures({ stallMargin: near }));
    expect(verdictHeadline(verdict)).toBe('At risk: stall margin');
    expect(verdictSummary(verdict)).toBe('One of one limit is met.');
    const clear = judgeDrawing(job({ taperDeg: 1 }), figures({ stallMargin: plainFigure(0.5) }));
    expect(verdictHeadline(clear)).toBe('Meets the drawing: its one limit.');
  });
});
