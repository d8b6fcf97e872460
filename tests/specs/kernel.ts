import { describe, expect, test } from 'vitest';
import { countHeights, emptyCounts, sumOver } from '#src/voxel/balance.ts';
import { fieldFrom, makeField, makeRim, rimFrom } from '#src/voxel/field.ts';
import {
  COEFFICIENT,
  type Field,
  type Kernel,
  LOAD_BINS,
  OUT_OF_REACH,
  STEP,
  STEPS,
  SUM,
  SUMS,
} from '#src/voxel/kernels/contract.ts';
import { buildTables, gapMeans } from '#src/voxel/tables.ts';
import { conditionsOf } from '../support/conditions.ts';
import { seededNormal } from '../support/random.ts';

const conditions = conditionsOf();
const tables = buildTables(conditions, { edgeRadius: 30e-6, runout: 2e-6 });
const means = gapMeans(conditions, tables, 17);
const kernelTables = tables.kernel;
const largest = kernelTables.coefficients[COEFFICIENT.largest] as number;
const PITCH = 5e-6;

/** A periodic floor of 2 x 2 tiles with heights from a function of the column. */
export function testFloor(precision: 32 | 64, height: (i: number, j: number) => number, edged = false): Field {
  const spec = {
    nx: 128,
    ny: 128,
    dx: PITCH,
    dy: PITCH,
    tile: 64,
    block: 4,
    periodicX: !edged,
    periodicY: !edged,
    edged,
    precision,
  };
  const field = fieldFrom(makeField(spec, 0, (bytes) => new ArrayBuffer(bytes)));
  for (let j = 0; j < 128; j++) {
    for (let i = 0; i < 128; i++) field.heights[j * 128 + i] = height(i, j);
  }
  field.cracks.set(Float32Array.from(field.heights));
  return field;
}

/** Step numbers: the face, candidates per block were every grain long enough, magnification 1, bounds renewed. */
export function testStep(face: number, lambda: number, step = 0): Float64Array {
  const row = new Float64Array(STEPS);
  row[STEP.face] = face;
  row[STEP.lambda] = lambda;
  row[STEP.magnification] = 1;
  row[STEP.time] = 1 + step;
  row[STEP.step] = step;
  row[STEP.key0] = 11;
  row[STEP.key1] = 22;
  row[STEP.renew] = 1;
  row[STEP.active] = 1;
  row[STEP.rows] = 128;
  return row;
}

const floors: Record<string, (i: number, j: number) => number> = {
  flat: () => 0,
  sine: (i, j) => 2e-6 * Math.sin(i / 6) * Math.cos(j / 9) - 3e-6,
  random: (() => {
    const normal = seededNormal(5);
    const heights = Float64Array.from({ length: 128 * 128 }, () => 1.5e-6 * normal() - 4e-6);
    return (i: number, j: number) => heights[j * 128 + i] as number;
  })(),
};

const total = (field: Field, sum: number) => {
  let value = 0;
  for (let tile = 0; tile < 4; tile++) value += field.sums[tile * SUMS + sum] as number;
  return value;
};

/** The claims every kernel must meet. */
export function kernelSpec(create: () => Kernel, precision: 32 | 64): void {
  const kernel = create();
  const hitAll = (field: Field, step: Float64Array) => {
    for (let tile = 0; tile < 4; tile++) kernel.hitFloor(field, kernelTables, step, tile);
  };

  describe(`the ${kernel.name} kernel`, () => {
    for (const [name, height] of Object.entries(floors)) {
      test(`on a frozen ${name} floor, hits and impulse are those of the size law over the gaps`, () => {
        const face = 44e-6;
        const field = testFloor(precision, height);
        const start = field.heights.slice();
        const lambda = 4;
        let hits = 0;
        let impulse = 0;
        let squares = 0;
        const rounds = 80;
        for (let round = 0; round < rounds; round++) {
          field.heights.set(start);
          hitAll(field, testStep(face, lambda, round));
          hits += total(field, SUM.engaged);
          impulse += total(field, SUM.impulse);
          squares += total(field, SUM.impulse) ** 2;
        }
        const counted = countHeights(emptyCounts(means), field, kernelTables, means, { face, stride: 1 });
        field.heights.set(start);
        countHeights(counted, field, kernelTables, means, { face, stride: 1 });
        const perColumn = (lambda / 16) * rounds;
        const expectedHits = perColumn * sumOver(counted, means, means.engaged, face).all;
        const expectedImpulse = perColumn * sumOver(counted, means, means.impulse, face).all;
        expect(hits).toBeGreaterThan(1000);
        // Poisson: four standard errors; the floor changes by less than a thousandth of l within a round
        expect(Math.abs(hits - expectedHits)).toBeLessThan(4 * Math.sqrt(expectedHits) + 0.01 * expectedHits);
        const sd = Math.sqrt(squares / rounds - (impulse / rounds) ** 2) * Math.sqrt(rounds);
        expect(Math.abs(impulse - expectedImpulse)).toBeLessThan(4 * sd + 0.01 * expectedImpulse);
      });
    }

    test('heights never rise, and what the columns lost is what the sums say', () => {
      const field = testFloor(precision, floors.random as (i: number, j: number) => number);
      const step = testStep(50e-6, 400);
      step[STEP.even] = 2e-9;
      const before = Float64Array.from(field.heights);
      hitAll(field, step);
      let lost = 0;
      let risen = 0;
      before.forEach((h, k) => {
        if ((field.heights[k] as number) > h) risen++;
        lost += h - (field.heights[k] as number);
      });
      expect(risen).toBe(0);
      const booked = total(field, SUM.chipRemoved) + total(field, SUM.dentRemoved) + total(field, SUM.freeRemoved);
      // differences of stored heights are exact in double precision; only the order of summation differs
      expect(Math.abs(lost * PITCH * PITCH - booked)).toBeLessThan(1e-9 * booked);
      expect(total(field, SUM.freeRemoved)).toBeGreaterThan(0);
      const ledger = total(field, SUM.credited) - total(field, SUM.overlap) - total(field, SUM.chipRemoved);
      expect(Math.abs(ledger)).toBeLessThan(1e-9 * total(field, SUM.credited));
      expect(total(field, SUM.overlap)).toBeGreaterThan(0);
    });

    test('a tile changes no column further than half a tile beyond itself', () => {
      const field = testFloor(precision, () => 0);
      kernel.hitFloor(field, kernelTables, testStep(40e-6, 200), 0);
      let strayed = 0;
      for (let j = 0; j < 128; j++) {
        for (let i = 0; i < 128; i++) {
          // tile 0 spans 0..63; on a periodic field the far half of the other tiles is out of its reach
          const away = (n: number) => (n < 64 ? 0 : Math.min(n - 63, 128 - n));
          if (Math.max(away(i), away(j)) > 32 && field.heights[j * 128 + i] !== 0) strayed++;
        }
      }
      expect(strayed).toBe(0);
      expect(field.heights.some((h) => h < 0)).toBe(true);
    });

    test('the same arguments give the same bits, and another step, key or tile gives others', () => {
      const run = (change: (row: Float64Array) => void) => {
        const field = testFloor(precision, floors.sine as (i: number, j: number) => number);
        const row = testStep(51e-6, 50);
        change(row);
        hitAll(field, row);
        return field.heights;
      };
      const first = run(() => {});
      expect(run(() => {})).toEqual(first);
      for (const k of [STEP.step, STEP.key0, STEP.key1]) {
        expect(
          run((row) => {
            row[k] = 77;
          }),
        ).not.toEqual(first);
      }
    });

    test('no grain reaches a floor further below the face than the largest grain, nor a floor the face has passed', () => {
      for (const face of [largest * 1.0001, -1e-6]) {
        const field = testFloor(precision, () => 0);
        hitAll(field, testStep(face, 1e5));
        expect(total(field, SUM.engaged)).toBe(0);
        expect(field.heights.every((h) => h === 0)).toBe(true);
      }
    });

    test('thrown grains lower the floor evenly down to two of the largest grains below the face, and no further', () => {
      const field = testFloor(precision, (i) => (i < 64 ? -1.9 : -2.1) * largest);
      const step = testStep(0, 0);
      step[STEP.even] = 1e-8;
      const start = field.heights.slice();
      hitAll(field, step);
      for (const i of [3, 60, 70, 120]) {
        const lowered = (start[i] as number) - (field.heights[i] as number);
        // heights of 1e-4 m in single precision are 7e-12 m apart
        expect(Math.abs(lowered - (i < 64 ? 1e-8 : 0))).toBeLessThan(1e-11);
      }
    });

    test('columns out of reach are neither hit nor lowered, and columns under the curved edge are hit less', () => {
      const field = testFloor(precision, () => 0, true);
      const beyond = (i: number) => Math.max(0, (i - 64) * 1.5e-6);
      for (let j = 0; j < 128; j++) {
        for (let i = 0; i < 128; i++) {
          field.edges[j * 128 + i] = beyond(i);
          if (j > 100) field.heights[j * 128 + i] = OUT_OF_REACH;
        }
      }
      hitAll(field, testStep(50e-6, 300));
      const mean = (from: number, to: number) => {
        let sum = 0;
        for (let j = 20; j < 80; j++) for (let i = from; i < to; i++) sum += field.heights[j * 128 + i] as number;
        return sum / (60 * (to - from));
      };
      expect(mean(10, 60)).toBeLessThan(mean(72, 80));
      expect(mean(72, 80)).toBeLessThan(mean(88, 100));
      expect(field.heights.subarray(101 * 128).every((h) => h === OUT_OF_REACH)).toBe(true);
      expect(total(field, SUM.faceRemoved)).toBeLessThan(total(field, SUM.chipRemoved) + total(field, SUM.dentRemoved));
    });

    test('sums are of the step, load counts of the whole cut, and every hit is counted once', () => {
      const field = testFloor(precision, () => 0);
      hitAll(field, testStep(50e-6, 100, 0));
      const first = total(field, SUM.engaged);
      hitAll(field, testStep(50e-6, 100, 1));
      const second = total(field, SUM.engaged);
      const counted = field.loads.reduce((sum, n) => sum + n, 0);
      expect(counted).toBe(first + second);
      expect(field.loads.length).toBe(4 * LOAD_BINS);
    });

    test('cracks reach below the columns they are under, and ages are of the step that hit', () => {
      const field = testFloor(precision, () => 0);
      hitAll(field, testStep(50e-6, 100, 4));
      const hit = field.cracks.findIndex((c) => c < -1e-6);
      expect(hit).toBeGreaterThanOrEqual(0);
      expect(Math.max(...field.ages)).toBe(5);
    });

    test('magnified hits are fewer by M, each removes M times as much, and the rate is the same', () => {
      const removed = (m: number) => {
        let sum = 0;
        let engaged = 0;
        const rounds = 40;
        const field = testFloor(precision, () => 0);
        for (let round = 0; round < rounds; round++) {
          field.heights.fill(0);
          const row = testStep(52e-6, 12 / m, round);
          row[STEP.magnification] = m;
          hitAll(field, row);
          sum += total(field, SUM.credited) + total(field, SUM.dentRemoved);
          engaged += total(field, SUM.engaged);
        }
        return { sum, engaged };
      };
      const plain = removed(1);
      const magnified = removed(4);
      // hits are Poisson and a hit's volume varies by about its mean: relative error sqrt(2 / hits), four of them
      const spread = 4 * Math.sqrt(2 / magnified.engaged + 2 / plain.engaged);
      expect(Math.abs(magnified.sum / plain.sum - 1)).toBeLessThan(spread);
      expect(Math.abs((4 * magnified.engaged) / plain.engaged - 1)).toBeLessThan(spread);
    });

    test('a wall only opens, no grain wider than the gap lets in hits it, and the rim chips no deeper than the load allows', () => {
      const spec = {
        nx: 128,
        ny: 64,
        dx: PITCH,
        dy: PITCH,
        tile: 64,
        block: 4,
        periodicX: true,
        periodicY: false,
        edged: false,
        precision,
      };
      const wall = fieldFrom(makeField(spec, OUT_OF_REACH, (bytes) => new ArrayBuffer(bytes)));
      const rim = rimFrom(makeRim(256, PITCH / 2, 16, (bytes) => new ArrayBuffer(bytes)));
      rim.siteFactors.fill(1);
      // the upper 40 rows are open at 42 um
      for (let k = 0; k < 40 * 128; k++) wall.heights[k] = -42e-6;
      const row = testStep(1, 2e6);
      row[STEP.rows] = 40;
      for (let round = 0; round < 20; round++) {
        row[STEP.step] = round;
        const before = wall.heights.slice();
        for (let tile = 0; tile < 2; tile++) kernel.hitWall(wall, kernelTables, row, tile, rim);
        expect(wall.heights.every((h, k) => h <= (before[k] as number))).toBe(true);
      }
      const open = wall.heights.subarray(0, 40 * 128);
      expect(open.some((h) => h < -42e-6)).toBe(true);
      expect(wall.heights.subarray(40 * 128).every((h) => h === OUT_OF_REACH)).toBe(true);
      const furthest = kernelTables.coefficients[COEFFICIENT.runoutLargest] as number;
      const deepest = (kernelTables.coefficients[COEFFICIENT.depth] as number) * 3;
      expect(Math.max(...open.map((h) => -h))).toBeLessThan(largest + furthest + deepest);
      // the hardest hit a squeeze of twice the largest run-out can make
      const hardest = Math.max(wall.sums[SUM.largestLoad] as number, 4);
      const chipLoad = kernelTables.coefficients[COEFFICIENT.chipLoad] as number;
      const deepestChip = (hardest / chipLoad) ** (2 / 3);
      expect(Math.max(...rim.chips)).toBeGreaterThan(0);
      expect(Math.max(...rim.chips)).toBeLessThan(deepestChip);
    });
  });
}
