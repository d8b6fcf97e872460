import { describe, expect, it } from 'vitest';
import type { OutlineSpec } from '#src/base/outline.ts';
import {
  annulusAge,
  annulusEffectiveness,
  annulusShare,
  discAge,
  discEffectiveness,
  discShare,
  linearDiscAge,
  pumpedDiscAge,
  pumpedDiscEffectiveness,
  stripShare,
} from '#src/physics/slurry/closed-forms.ts';
import { cutPoint, edgeValues, type FaceGrid, faceMean } from '#src/physics/slurry/grid.ts';
import { solveTransport, type TransportProblem, transportSpace } from '#src/physics/slurry/transport.ts';
import {
  CENTRE_BORE,
  DISC,
  fieldOf,
  gridOf,
  HEXAGON,
  orderOf,
  RECTANGLE,
  RING,
  rangeOf,
  rmsError,
  SIDE_BORE,
  SLOT,
} from './faces.ts';

const CELLS = [32, 64, 128];
/** Observed orders scatter with where the boundary falls between the cells; a first-order scheme would show 1. */
const SECOND = 1.6;

const constant = (grid: FaceGrid, value: number) => new Float64Array(grid.active.length).fill(value);
const evenEdges = (grid: FaceGrid, value: number) =>
  edgeValues(
    grid,
    grid.boundaries.map(() => value),
  );

function solved(grid: FaceGrid, problem: TransportProblem) {
  const u = constant(grid, 0);
  const result = solveTransport(u, transportSpace(grid), problem);
  expect(result.converged).toBe(true);
  return { u, ...result };
}

/** Fresh slurry at every boundary, loss k on conductivity 1. */
function lossy(grid: FaceGrid, k: number) {
  return solved(grid, { conductivity: constant(grid, 1), loss: constant(grid, k), edge: evenEdges(grid, 1) });
}

/** Age of a film of 1 with a law of dispersion. */
function aged(grid: FaceGrid, dispersion: (r: number) => number) {
  return solved(grid, {
    conductivity: fieldOf(grid, (x, y) => dispersion(Math.hypot(x, y))),
    source: constant(grid, 1),
    edge: evenEdges(grid, 0),
  });
}

const radial = (f: (r: number) => number) => (x: number, y: number) => f(Math.hypot(x, y));

describe('disc', () => {
  it('has the fresh share I0(m r) / I0(m R) and the mean 2 I1 / (phi I0) to second order', () => {
    const field: number[] = [];
    const mean: number[] = [];
    for (const cells of CELLS) {
      const grid = gridOf(DISC, cells);
      const { u } = lossy(grid, 9);
      field.push(
        rmsError(
          grid,
          u,
          radial((r) => discShare(r, { radius: 1, modulus: 3 })),
        ),
      );
      mean.push(faceMean(grid, u) - discEffectiveness(3));
    }
    expect(orderOf(field)).toBeGreaterThan(SECOND);
    expect(orderOf(mean)).toBeGreaterThan(SECOND);
    expect(field[2]).toBeLessThan(2e-4);
    expect(Math.abs(mean[2])).toBeLessThan(3e-4);
  });

  it('has the age (R^2 - r^2) / 4D to second order', () => {
    const errors = CELLS.map((cells) => {
      const grid = gridOf(DISC, cells);
      return rmsError(
        grid,
        aged(grid, () => 1).u,
        radial((r) => discAge(r, 1, 1)),
      );
    });
    expect(orderOf(errors)).toBeGreaterThan(SECOND);
    // of an age of 1/4 in the middle
    expect(errors[2]).toBeLessThan(1e-4 / 4);
  });

  it('has the closed ages of dispersion that grows with r and with r^2, to second order', () => {
    const linear: number[] = [];
    const square: number[] = [];
    for (const cells of CELLS) {
      const grid = gridOf(DISC, cells);
      const byR = aged(grid, (r) => 0.1 + r).u;
      const byR2 = aged(grid, (r) => 0.1 + r * r).u;
      linear.push(
        rmsError(
          grid,
          byR,
          radial((r) => linearDiscAge(r, { radius: 1, d0: 0.1, b: 1 })),
        ),
      );
      square.push(
        rmsError(
          grid,
          byR2,
          radial((r) => pumpedDiscAge(r, { radius: 1, d0: 0.1, a: 1 })),
        ),
      );
    }
    expect(orderOf(linear)).toBeGreaterThan(SECOND);
    expect(orderOf(square)).toBeGreaterThan(SECOND);
  });

  it('keeps its mean where dispersion dies in the centre as r^2 and the age there has no bound', () => {
    const grid = gridOf(DISC, 128);
    expect(Math.abs(faceMean(grid, aged(grid, (r) => r * r).u) / (1 / 4) - 1)).toBeLessThan(1e-3);
    const { u } = solved(grid, {
      conductivity: fieldOf(grid, (x, y) => x * x + y * y),
      loss: constant(grid, 3),
      edge: evenEdges(grid, 1),
    });
    expect(Math.abs(faceMean(grid, u) - pumpedDiscEffectiveness(3))).toBeLessThan(1e-3);
  });
});

describe('annulus and strip', () => {
  it('as a ring and as a disc with a bore has a I0 + b K0 and the mean that goes with it, to second order', () => {
    for (const [spec, bores] of [
      [RING, []],
      [DISC, [CENTRE_BORE]],
    ] as const) {
      const field: number[] = [];
      const mean: number[] = [];
      for (const cells of CELLS) {
        const grid = gridOf(spec, cells, { bores });
        const { u } = lossy(grid, 9);
        field.push(rmsError(grid, u, radial(annulusShare({ inner: 0.3, outer: 1, m: 3 }))));
        mean.push(faceMean(grid, u) - annulusEffectiveness({ inner: 0.3, outer: 1, m: 3 }));
      }
      expect(orderOf(field)).toBeGreaterThan(SECOND);
      expect(orderOf(mean)).toBeGreaterThan(SECOND);
    }
  });

  it('has the age of an annulus open at both edges, to second order', () => {
    const errors = CELLS.map((cells) => {
      const grid = gridOf(RING, cells);
      const exact = radial((r) => annulusAge(r, { inner: 0.3, outer: 1, dispersion: 1 }));
      return rmsError(grid, aged(grid, () => 1).u, exact);
    });
    expect(orderOf(errors)).toBeGreaterThan(SECOND);
  });

  it('is cosh(m x) / cosh(m a) between two sides when the ends of the rectangle have just that value', () => {
    const strip = { halfWidth: 1, modulus: 2.5 };
    const spec: OutlineSpec = { kind: 'rectangle', length: 2, width: 1.5, cornerRadius: 0 };
    const errors = CELLS.map((cells) => {
      // between the cells, so that no leg is a whole number of halves
      const grid = gridOf(spec, cells, { offset: { x: 0.3, y: 0.1 } });
      const edge = Float64Array.from(grid.cuts.cell, (_, k) => stripShare(cutPoint(grid, k).x, strip));
      const { u } = solved(grid, { conductivity: constant(grid, 1), loss: constant(grid, 2.5 ** 2), edge });
      return rmsError(grid, u, (x) => stripShare(x, strip));
    });
    expect(orderOf(errors)).toBeGreaterThan(SECOND);
    expect(errors[2]).toBeLessThan(2e-4);
  });
});

describe('any outline', () => {
  it('carries exp(0.8 x + 1.1 y), which satisfies the balance with loss, to second order, with a bore off centre', () => {
    const exact = (x: number, y: number) => Math.exp(0.8 * x + 1.1 * y);
    for (const spec of [DISC, RECTANGLE, SLOT, HEXAGON]) {
      // enough cells for the bore in the widest of the faces
      const errors = [40, 80, 160].map((cells) => {
        const grid = gridOf(spec, cells, { bores: [SIDE_BORE] });
        const edge = Float64Array.from(grid.cuts.cell, (_, k) => {
          const { x, y } = cutPoint(grid, k);
          return exact(x, y);
        });
        const loss = constant(grid, 0.8 ** 2 + 1.1 ** 2);
        return rmsError(grid, solved(grid, { conductivity: constant(grid, 1), loss, edge }).u, exact);
      });
      expect(orderOf(errors)).toBeGreaterThan(SECOND);
      expect(errors[2]).toBeLessThan(5e-4);
    }
  });

  it('closes the balance of sources, sinks and outflow to 1e-6 on every face, with and without a bore', () => {
    for (const spec of [DISC, RING, RECTANGLE, SLOT, HEXAGON]) {
      for (const bores of spec === RING ? [[]] : [[], [SIDE_BORE]]) {
        const grid = gridOf(spec, 64, { bores });
        const edge = edgeValues(
          grid,
          grid.boundaries.map((_, b) => 1 + b),
        );
        const { sources, sinks, outflow, residual } = solved(grid, {
          conductivity: fieldOf(grid, (x, y) => 0.05 + x * x + y * y),
          loss: fieldOf(grid, (x) => 2 + x),
          source: fieldOf(grid, (_, y) => 1 + y),
          edge,
        });
        const out = outflow.reduce((sum, value) => sum + value, 0);
        expect(Math.abs(sources - sinks - out) / (sources + sinks)).toBeLessThan(1e-6);
        expect(residual).toBeLessThan(1e-7);
      }
    }
  });

  it('sends the area of the face out across its edge when the source is one', () => {
    for (const [spec, area] of [
      [DISC, Math.PI],
      [HEXAGON, 2 * Math.sqrt(3)],
    ] as const) {
      const { outflow } = aged(gridOf(spec, 64), () => 1);
      // the area of the grid is the face's to 4 pitch^2
      expect(Math.abs(outflow[0] / area - 1)).toBeLessThan(4 / (64 * 64));
    }
  });

  it('keeps a fresh share between 0 and 1, however fast it is lost or uneven the dispersion', () => {
    for (const k of [0, 0.1, 10, 1e4, 1e8]) {
      const grid = gridOf(HEXAGON, 50, { bores: [SIDE_BORE] });
      const { u } = solved(grid, {
        conductivity: fieldOf(grid, (x, y) => (x > 0 ? 1e-6 : 1) * (x * x + y * y)),
        loss: fieldOf(grid, (x, y) => (Math.sin(40 * x * y) > 0 ? k : 0)),
        edge: evenEdges(grid, 1),
      });
      // the matrix allows no value outside; what is left of the residual does, to its own share
      const { least, most } = rangeOf(grid, u);
      expect(least).toBeGreaterThanOrEqual(-1e-6);
      expect(most).toBeLessThanOrEqual(1 + 1e-6);
    }
  });

  it('gives a rectangle turned by 90 degrees the same answer, turned', () => {
    const lying = gridOf({ kind: 'rectangle', length: 2, width: 1.3, cornerRadius: 0.1 }, 48);
    const standing = gridOf({ kind: 'rectangle', length: 1.3, width: 2, cornerRadius: 0.1 }, 48);
    const a = lossy(lying, 5);
    const b = lossy(standing, 5);
    // both are solved to 1e-7 of the throughput, by sweeps in another order
    expect(Math.abs(faceMean(lying, a.u) / faceMean(standing, b.u) - 1)).toBeLessThan(1e-6);
    const turned = a.u.map((_, c) => b.u[Math.floor(c / lying.nx) + standing.nx * (c % lying.nx)]);
    const difference = a.u.map((share, c) => Math.abs(share - turned[c]));
    expect(Math.max(...difference)).toBeLessThan(1e-5);
  });

  it('keeps the mean within 4 (pitch / R)^2 when the face moves by part of a cell', () => {
    for (const spec of [DISC, HEXAGON, RECTANGLE]) {
      const means = [
        { x: 0, y: 0 },
        { x: 0.25, y: 0.1 },
        { x: 0.5, y: 0.37 },
        { x: 0.13, y: 0.49 },
      ].map((offset) => {
        const grid = gridOf(spec, 64, { offset });
        return faceMean(grid, lossy(grid, 9).u);
      });
      // a slope of 3 at the edge, half a pitch between where a cell is counted and where its share lies, 1.3 across
      expect(Math.max(...means) - Math.min(...means)).toBeLessThan(4 / (32 * 32));
    }
  });
});

describe('solver', () => {
  it('takes about as many iterations on 256 cells as on 32', () => {
    for (const spec of [DISC, RECTANGLE, RING]) {
      const counts = [32, 256].map((cells) => aged(gridOf(spec, cells), (r) => 0.1 + r).iterations);
      expect(counts[1]).toBeLessThan(counts[0] + 8);
      expect(counts[1]).toBeLessThan(20);
    }
  });

  it('needs nothing when started from the answer, and less from a near one', () => {
    const grid = gridOf(DISC, 64);
    const space = transportSpace(grid);
    const problem = { source: constant(grid, 1), edge: evenEdges(grid, 0) };
    const u = constant(grid, 0);
    const cold = solveTransport(u, space, { ...problem, conductivity: constant(grid, 1) });
    expect(solveTransport(u, space, { ...problem, conductivity: constant(grid, 1) }).iterations).toBe(0);
    const warm = solveTransport(u, space, { ...problem, conductivity: constant(grid, 1.02) });
    expect(warm.iterations).toBeLessThan(cold.iterations);
  });

  it('does not depend on what the workspace solved before, bit for bit', () => {
    const grid = gridOf(HEXAGON, 40);
    const space = transportSpace(grid);
    const problem = { conductivity: constant(grid, 1), source: constant(grid, 1), edge: evenEdges(grid, 0) };
    const first = constant(grid, 0);
    solveTransport(first, space, problem);
    solveTransport(constant(grid, 0), space, { ...problem, loss: constant(grid, 7), edge: evenEdges(grid, 3) });
    const again = constant(grid, 0);
    solveTransport(again, space, problem);
    expect(again).toEqual(first);
  });

  it('says so when it is not given the iterations it needs', () => {
    const grid = gridOf(DISC, 64);
    const problem = { conductivity: constant(grid, 1), source: constant(grid, 1), edge: evenEdges(grid, 0) };
    const options = { tolerance: 1e-7, mostIterations: 2 };
    const result = solveTransport(constant(grid, 0), transportSpace(grid), problem, options);
    expect(result.converged).toBe(false);
    expect(result.residual).toBeGreaterThan(1e-7);
  });

  it('refuses fields that are negative or not finite, by name', () => {
    const grid = gridOf(DISC, 32);
    const space = transportSpace(grid);
    const good = { conductivity: constant(grid, 1), edge: evenEdges(grid, 0) };
    const run = (change: Partial<TransportProblem>) => () =>
      solveTransport(constant(grid, 0), space, { ...good, ...change });
    expect(run({ conductivity: constant(grid, -1) })).toThrow(/conductivity/);
    expect(run({ loss: constant(grid, Number.NaN) })).toThrow(/loss/);
    expect(run({ source: constant(grid, Infinity) })).toThrow(/source/);
    expect(run({ edge: evenEdges(grid, Number.NaN) })).toThrow(/edge value/);
  });
});
