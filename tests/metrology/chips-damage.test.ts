import { describe, expect, it } from 'vitest';
import { edgeChips } from '#src/metrology/chips.ts';
import { damageDepth, histogramPercentile } from '#src/metrology/damage.ts';
import { uniformSource } from './random.ts';

const UM = 1e-6;

describe('edge chips of a rim', () => {
  const n = 100;
  const s = Float64Array.from({ length: n }, (_, i) => i * 1e-4);
  const perimeter = n * 1e-4;

  it('have their largest where it lies, and width and depth each their own', () => {
    const width = new Float64Array(n).fill(2 * UM).with(40, 90 * UM);
    const depth = new Float64Array(n).with(7, 25 * UM);
    const found = edgeChips({ s, perimeter, width, depth });
    expect([found.width.largest, found.width.at]).toEqual([90 * UM, s[40]]);
    expect([found.depth.largest, found.depth.at]).toEqual([25 * UM, s[7]]);
    expect(found.width.p50).toBe(2 * UM);
    expect(found.depth.chipped).toBeCloseTo(0.01, 12);
    expect(found.width.chipped).toBeCloseTo(1, 12);
    expect(found.width.mean).toBeCloseTo((99 * 2 + 90) * 1e-2 * UM, 15);
  });

  it('of a ramp have the percentiles of a ramp', () => {
    const width = Float64Array.from({ length: n }, (_, i) => (i + 1) * UM);
    const found = edgeChips({ s, perimeter, width, depth: width }).width;
    expect([found.p50, found.p95, found.largest]).toEqual([50 * UM, 95 * UM, 100 * UM]);
    for (const share of found.distribution.share) expect(Math.abs(share - 1 / 20)).toBeLessThan(0.0101);
  });

  it('are weighed by length of rim: doubling the samples of one half changes nothing', () => {
    const uniform = uniformSource(50);
    const places: number[] = [];
    for (let i = 0; i < 400; i++) places.push(i < 200 ? i * 0.5e-4 : 1e-2 + (i - 200) * 1e-4);
    const total = 3e-2;
    const width = Float64Array.from(places, (place) => (place < 1e-2 ? 10 * UM : 30 * UM * (0.9 + 0.1 * uniform())));
    const found = edgeChips({ s: Float64Array.from(places), perimeter: total, width, depth: width }).width;
    // one third of the rim at 10 um, so the 30 % point is 10 um and the median above it
    expect(found.p50).toBeGreaterThan(26 * UM);
    expect(found.mean).toBeGreaterThan(22 * UM);
    expect(found.distribution.share.reduce((sum, share) => sum + share, 0)).toBeCloseTo(1, 12);
  });

  it('leave out what was not measured and say how much was', () => {
    const width = new Float64Array(n).fill(5 * UM).fill(Number.NaN, 0, 25);
    const found = edgeChips({ s, perimeter, width, depth: new Float64Array(n).fill(Number.NaN) });
    expect(found.width.measured).toBeCloseTo(0.75, 12);
    expect(found.width.p95).toBe(5 * UM);
    expect(found.depth.measured).toBe(0);
    expect([found.depth.largest, found.depth.p50, found.depth.at].every(Number.isNaN)).toBe(true);
  });

  it('of an unchipped rim are zero', () => {
    const found = edgeChips({ s, perimeter, width: new Float64Array(n), depth: new Float64Array(n) }).width;
    expect([found.largest, found.p95, found.chipped]).toEqual([0, 0, 0]);
    expect(found.distribution.share[0]).toBeCloseTo(1, 12);
  });

  it('are refused when the arrays do not belong together', () => {
    const one = Float64Array.of(0);
    expect(() => edgeChips({ s, perimeter, width: one, depth: one })).toThrow(RangeError);
    expect(() => edgeChips({ s: one, perimeter: 0, width: one, depth: one })).toThrow(RangeError);
    const back = Float64Array.of(1, 0);
    expect(() => edgeChips({ s: back, perimeter: 2, width: back, depth: back })).toThrow(RangeError);
  });
});

describe('damage depth', () => {
  it('of evenly spread depths is the 99 % point of the spread', () => {
    const edges = Float64Array.from({ length: 51 }, (_, k) => k * UM);
    const counts = new Uint32Array(50).fill(1000);
    const found = damageDepth({ edges, counts });
    expect(found.p99).toBeCloseTo(0.99 * 50 * UM, 15);
    expect(found.largest).toBe(50 * UM);
    expect(found.hits).toBe(50_000);
  });

  it('of exponential depths is ln 100 means, to the width of a bin', () => {
    const mean = 4 * UM;
    const edges = Float64Array.from({ length: 201 }, (_, k) => k * 0.25 * UM);
    const counts = new Float64Array(200).map(
      (_, k) => 1e6 * (Math.exp(-edges[k] / mean) - Math.exp(-edges[k + 1] / mean)),
    );
    // linear within a bin of 1/16 mean: off by (1/16)^2/8 of a mean
    expect(Math.abs(histogramPercentile({ edges, counts }, 0.99) - mean * Math.log(100))).toBeLessThan(0.002 * mean);
  });

  it('takes the deepest hit as recorded, and never puts the percentile below it', () => {
    const edges = Float64Array.of(0, 10 * UM, 20 * UM);
    const found = damageDepth({ edges, counts: Uint32Array.of(0, 5) }, 12 * UM);
    expect(found.largest).toBe(12 * UM);
    expect(found.p99).toBeLessThanOrEqual(12 * UM);
  });

  it('rises with the share, from the first filled bin to the last', () => {
    const histogram = { edges: Float64Array.of(0, 1, 2, 3, 4), counts: Uint32Array.of(0, 3, 1, 0) };
    const found = [0, 0.25, 0.75, 0.9, 1].map((share) => histogramPercentile(histogram, share));
    expect(found).toEqual([1, 1 + 1 / 3, 2, expect.closeTo(2.6, 12), 3]);
  });

  it('is NaN without hits, and a histogram that is none is refused', () => {
    const edges = Float64Array.of(0, 1, 2);
    const none = damageDepth({ edges, counts: Uint32Array.of(0, 0) });
    expect([none.p99, none.largest].every(Number.isNaN)).toBe(true);
    expect(() => histogramPercentile({ edges, counts: Uint32Array.of(1) }, 0.5)).toThrow(RangeError);
    expect(() => histogramPercentile({ edges, counts: Float64Array.of(1, -1) }, 0.5)).toThrow(RangeError);
    expect(() => histogramPercentile({ edges: edges.toReversed(), counts: Uint32Array.of(1, 1) }, 0.5)).toThrow(
      RangeError,
    );
    expect(() => histogramPercentile({ edges, counts: Uint32Array.of(1, 1) }, 1.5)).toThrow(RangeError);
  });
});
