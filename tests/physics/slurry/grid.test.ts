import { describe, expect, it } from 'vitest';
import { makeOutline, nearest } from '#src/base/outline.ts';
import { cellsFor, cutPoint, faceArea, faceGrid, faceMean } from '#src/physics/slurry/grid.ts';
import { CENTRE_BORE, DISC, fieldOf, gridOf, HEXAGON, RECTANGLE, RING, SIDE_BORE, SLOT } from './faces.ts';

const CELLS = [32, 64, 128];

describe('face grid', () => {
  it('has the area of the face to second order in the pitch for every kind of outline', () => {
    for (const spec of [DISC, RING, RECTANGLE, SLOT, HEXAGON]) {
      const { area } = makeOutline(spec);
      const errors = CELLS.map((cells) => faceArea(gridOf(spec, cells)) / area - 1);
      // chords for arcs: a sixth of (pitch / radius)^2 for the disc, some ten times that with small or inner arcs
      for (const [k, error] of errors.entries()) expect(Math.abs(error)).toBeLessThan(4 / (CELLS[k] * CELLS[k]));
    }
  });

  it('takes the bores off the area', () => {
    const wanted = Math.PI * (1 - 0.3 ** 2);
    for (const cells of CELLS) {
      const area = faceArea(gridOf(DISC, cells, { bores: [CENTRE_BORE] }));
      expect(Math.abs(area / wanted - 1)).toBeLessThan(2 / (cells * cells));
    }
  });

  it('sees a ring as a disc with a bore in the middle', () => {
    const ring = gridOf(RING, 48);
    const bored = gridOf(DISC, 48, { bores: [CENTRE_BORE] });
    expect(ring.active).toEqual(bored.active);
    expect(ring.cuts.count).toBe(bored.cuts.count);
    expect(ring.boundaries.map(({ kind }) => kind)).toEqual(['edge', 'hole']);
    expect(bored.boundaries.map(({ kind }) => kind)).toEqual(['edge', 'bore']);
    for (let k = 0; k < ring.cuts.count; k++) {
      // the bounds of an outline are sampled, so the two pitches differ a little
      expect(ring.cuts.theta[k]).toBeCloseTo(bored.cuts.theta[k], 2);
      expect(ring.cuts.boundary[k]).toBe(bored.cuts.boundary[k]);
    }
  });

  it('ends every cut leg on the boundary it names, at the place it names', () => {
    const outline = makeOutline(DISC);
    const grid = faceGrid(outline, [SIDE_BORE], 40);
    let onBore = 0;
    for (let k = 0; k < grid.cuts.count; k++) {
      const { x, y } = cutPoint(grid, k);
      if (grid.cuts.boundary[k] === 1) {
        onBore += 1;
        const angle = grid.cuts.s[k] / SIDE_BORE.radius;
        expect(x).toBeCloseTo(SIDE_BORE.x + SIDE_BORE.radius * Math.cos(angle), 9);
        expect(y).toBeCloseTo(SIDE_BORE.y + SIDE_BORE.radius * Math.sin(angle), 9);
        continue;
      }
      // legs under 1e-4 of a pitch are lengthened to that
      expect(Math.abs(nearest(outline, x, y).distance)).toBeLessThan(1e-4 * grid.pitch);
      expect(x).toBeCloseTo(Math.cos(grid.cuts.s[k]), 5);
      expect(y).toBeCloseTo(Math.sin(grid.cuts.s[k]), 5);
    }
    expect(onBore).toBeGreaterThan(12);
  });

  it('gives every active cell four neighbours, each active or met by a cut leg', () => {
    const grid = gridOf(HEXAGON, 37, { bores: [SIDE_BORE] });
    const legs = new Uint8Array(grid.active.length);
    for (const cell of grid.cuts.cell) legs[cell] += 1;
    for (let c = 0; c < legs.length; c++) {
      if (grid.active[c] === 0) {
        expect(grid.area[c]).toBe(0);
        continue;
      }
      const around = grid.active[c - 1] + grid.active[c + 1] + grid.active[c - grid.nx] + grid.active[c + grid.nx];
      expect(around + legs[c]).toBe(4);
      expect(grid.distance[c]).toBeLessThan(0);
    }
  });

  it('keeps signed distances right next to the boundary, and to half a pitch elsewhere', () => {
    const outline = makeOutline(RECTANGLE);
    const grid = faceGrid(outline, [], 60);
    const exact = fieldOf(grid, (x, y) => nearest(outline, x, y).distance);
    for (let c = 0; c < exact.length; c++) {
      if (grid.active[c] === 0) continue;
      const bound = exact[c] > -0.7 * grid.pitch ? 1e-12 : 0.5 * Math.max(grid.pitch, -exact[c]);
      expect(Math.abs(grid.distance[c] - exact[c])).toBeLessThanOrEqual(bound);
    }
  });

  it('averages x^2 + y^2 over a disc to R^2 / 2', () => {
    const grid = gridOf(DISC, 64);
    const mean = faceMean(
      grid,
      fieldOf(grid, (x, y) => x * x + y * y),
    );
    // slivers are counted at their neighbours' centres: a share of order pitch^2
    expect(Math.abs(mean - 0.5)).toBeLessThan(5 / (64 * 64));
  });

  it('refuses bores outside the outline, into each other, or too small for the cells', () => {
    const disc = makeOutline(DISC);
    expect(() => faceGrid(disc, [{ x: 0.9, y: 0, radius: 0.2 }], 64)).toThrow(/does not lie inside/);
    expect(() => faceGrid(disc, [CENTRE_BORE, SIDE_BORE], 64)).toThrow(/run into each other/);
    expect(() => faceGrid(disc, [{ x: 0, y: 0, radius: 0.03 }], 64)).toThrow(/cells wide/);
    expect(() => faceGrid(disc, [{ x: 0, y: 0, radius: 0 }], 64)).toThrow(/radius/);
  });

  it('finds the cells that put six over the smallest feature', () => {
    const disc = makeOutline(DISC);
    const range = { across: 6, least: 32, most: 400 };
    expect(cellsFor(disc, [], range)).toBe(32);
    expect(cellsFor(disc, [{ x: 0, y: 0, radius: 0.05 }], range)).toBe((6 * 2) / 0.1);
    expect(cellsFor(disc, [{ x: 0, y: 0, radius: 0.001 }], range)).toBe(400);
  });
});
