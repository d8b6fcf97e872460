import fc from 'fast-check';
import Papa from 'papaparse';
import { describe, expect, test } from 'vitest';
import { type HistoryMoment, writeCsv, writeHistory, writeTrace } from '#src/formats/csv.ts';
import { formatNumber, roundSignificant } from '#src/formats/numbers.ts';

const moment: HistoryMoment = {
  pass: 1,
  time: 90,
  depth: 0.25e-3,
  rate: 2e-3 / 60,
  loadSet: 1,
  loadSampled: 1.01,
  engagedGrits: 812,
  gritLoadMean: 0.0123456789,
  gritLoadLargest: 0.4,
  freshFraction: 1,
  stallMargin: NaN,
  toolLengthLost: 2.5e-6,
  toolEdgeRadius: 31e-6,
  floorRa: 1.2e-6,
  edgeChipLargest: 0,
  damageDepth: 17e-6,
};

describe('history.csv', () => {
  test('has a header with units, then one line a moment in those units, empty where not known', () => {
    expect(writeHistory([moment])).toBe(
      [
        'pass,timeMin,depthMm,rateMmPerMin,loadSetN,loadSampledN,engagedGrits,gritLoadMeanN,gritLoadLargestN,freshFraction,stallMargin,toolLengthLostMm,toolEdgeRadiusUm,floorRaUm,edgeChipLargestUm,damageDepthUm',
        '1,1.5,0.25,2,1,1.01,812,0.0123457,0.4,1,,0.0025,31,1.2,0,17',
        '',
      ].join('\r\n'),
    );
  });

  test('without moments is its header alone', () => {
    expect(writeHistory([]).split('\r\n')).toHaveLength(2);
  });
});

test('trace.csv gives position and height in um', () => {
  const text = writeTrace({ spacing: 0.5e-6, z: Float64Array.of(0, -1.25e-6, NaN) });
  expect(text).toBe('positionUm,heightUm\r\n0,0\r\n0.5,-1.25\r\n1,\r\n');
});

test('a CSV read by another reader gives back its numbers, whatever its headers', () => {
  fc.assert(
    fc.property(
      fc.string(),
      fc.array(fc.double({ noNaN: true, noDefaultInfinity: true }), { minLength: 1 }),
      (header, values) => {
        const text = writeCsv([{ header: `h${header}`, digits: 17, of: (value: number) => value }], values);
        const read = Papa.parse<string[]>(text, { newline: '\r\n', delimiter: ',' }).data;
        expect(read[0]).toEqual([`h${header}`]);
        // -0 is written 0
        expect(read.slice(1, -1).map(([field]) => Number(field))).toEqual(values.map((value) => value + 0));
      },
    ),
    { seed: 41 },
  );
});

describe('a number', () => {
  test('is rounded to its significant digits and printed short, with a point and no -0', () => {
    expect(formatNumber(0.1 + 0.2, 6)).toBe('0.3');
    expect(formatNumber(123456.789, 4)).toBe('123500');
    expect(formatNumber(-0, 4)).toBe('0');
    expect(formatNumber(1.25e-9, 2)).toBe('1.3e-9');
  });

  test('rounded to n digits differs by at most half a unit of the last one, and rounding again changes nothing', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 1e-12, max: 1e12, noNaN: true }),
        fc.integer({ min: 1, max: 15 }),
        (value, digits) => {
          const rounded = roundSignificant(value, digits);
          expect(roundSignificant(rounded, digits)).toBe(rounded);
          const unit = 10 ** (Math.floor(Math.log10(value)) - digits + 1);
          // the power of ten is itself good to a few units in the last place
          expect(Math.abs(rounded - value)).toBeLessThanOrEqual(0.5 * unit * (1 + 1e-9) + 2 ** -52 * value);
        },
      ),
      { seed: 42, numRuns: 500 },
    );
  });
});
