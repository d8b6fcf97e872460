import { describe, expect, it } from 'vitest';
import { annulusFlow, eccentricFlow, plugAge, plugShare, radialFlowAge } from '#src/physics/slurry/closed-forms.ts';
import {
  type Delivery,
  filmMobility,
  flowSpace,
  LEAST_GAUGE_PRESSURE,
  orificeFlow,
  outletsFor,
  sideResistance,
  solveFlow,
  stefanForce,
} from '#src/physics/slurry/flow.ts';
import { edgeValues, type FaceGrid, faceArea, faceMean } from '#src/physics/slurry/grid.ts';
import { solveTransport, transportSpace } from '#src/physics/slurry/transport.ts';
import {
  CENTRE_BORE,
  DISC,
  fieldOf,
  freeOutlet,
  gridOf,
  HEXAGON,
  orderOf,
  RING,
  rangeOf,
  rmsError,
  SIDE_BORE,
} from './faces.ts';

const CELLS = [32, 64, 128];
const SECOND = 1.6;
const MM = 1e-3;
const MM3 = 1e-9;
const UM = 1e-6;
const constant = (grid: FaceGrid, value: number) => new Float64Array(grid.active.length).fill(value);
const radial = (f: (r: number) => number) => (x: number, y: number) => f(Math.hypot(x, y));

/** Through-flow of mobility 1 under 1 Pa between the two boundaries of a face. */
function throughFlow(grid: FaceGrid) {
  const transport = transportSpace(grid);
  const flow = solveFlow(flowSpace(transport), constant(grid, 1), [freeOutlet(0), freeOutlet(1)], 1000);
  return { transport, flow };
}

describe('published figures', () => {
  it('passes 818, 205 and 44 mm3/s round a tool of 10 mm (plane Poiseuille flow, derived)', () => {
    const flow = (width: number, depth: number) =>
      50e3 / sideResistance(Math.PI * 10 * MM, { width, depth, viscosity: 4e-3 });
    const byHand = (w: number, depth: number) => (Math.PI * 10e-3 * w ** 3 * 50e3) / (12 * 4e-3 * depth);
    expect(flow(50 * UM, 20 * MM)).toBeCloseTo(byHand(50e-6, 20e-3), 18);
    expect(flow(50 * UM, 20 * MM) / MM3).toBeCloseTo(204.5, 1);
    expect(flow(50 * UM, 5 * MM) / MM3).toBeCloseTo(818, 0);
    expect(flow(30 * UM, 20 * MM) / MM3).toBeCloseTo(44, 0);
  });

  it("resists closing with Stefan's 3 pi mu R^4 V / 2h^3: 29.61 N and 0.0137 N (from memory)", () => {
    const speed = 2 * Math.PI * 20e3 * 20 * UM;
    expect(stefanForce({ viscosity: 4e-3, radius: 5 * MM, speed, film: 100 * UM })).toBeCloseTo(29.61, 2);
    expect(stefanForce({ viscosity: 1e-3, radius: 0.25 * MM, speed, film: 15 * UM })).toBeCloseTo(0.0137, 4);
  });

  it("has Stefan's force as the integral of the pressure that the balance gives a closing film, to second order", () => {
    const film = { viscosity: 4e-3, radius: 1, speed: 2.5, film: 0.01 };
    const errors = CELLS.map((cells) => {
      const grid = gridOf(DISC, cells);
      const u = constant(grid, 0);
      solveTransport(u, transportSpace(grid), {
        conductivity: constant(grid, filmMobility(film.film, film.viscosity)),
        source: constant(grid, film.speed),
        edge: edgeValues(grid, [0]),
      });
      return (faceMean(grid, u) * faceArea(grid)) / stefanForce(film) - 1;
    });
    expect(orderOf(errors)).toBeGreaterThan(SECOND);
    expect(Math.abs(errors[2])).toBeLessThan(5e-4);
  });

  it('turns 1 bar of water into 14.1 m/s at most (Torricelli)', () => {
    expect(orificeFlow(1, 1e5, 1000)).toBeCloseTo(Math.sqrt(200), 12);
  });
});

describe('flow between a bore and the edge', () => {
  it('is 2 pi M dp / ln(R/Ri) from the centre and by bipolar coordinates off it, to second order', () => {
    const centred = CELLS.map((cells) => {
      const { flow } = throughFlow(gridOf(DISC, cells, { bores: [CENTRE_BORE] }));
      return flow.outflow[0] / annulusFlow(0.3, 1, 1) - 1;
    });
    const aside = CELLS.map((cells) => {
      const { flow } = throughFlow(gridOf(DISC, cells, { bores: [SIDE_BORE] }));
      return flow.outflow[0] / eccentricFlow({ inner: 0.1, outer: 1, apart: Math.hypot(0.25, 0.05) }, 1) - 1;
    });
    expect(orderOf(centred)).toBeGreaterThan(SECOND);
    // three cells over the bore on the coarsest grid
    expect(Math.abs(aside[2])).toBeLessThan(1e-3);
    expect(Math.abs(aside[2])).toBeLessThan(Math.abs(aside[0]) / 6);
  });

  it('is free of divergence to 1e-9 in every cell, also where the gap varies, and what enters leaves', () => {
    const grid = gridOf(HEXAGON, 64, { bores: [SIDE_BORE, { x: -0.4, y: 0.3, radius: 0.1 }] });
    const mobility = fieldOf(grid, (x, y) => (1 + 0.5 * x - 0.3 * y) ** 3);
    const outlets = [freeOutlet(0), freeOutlet(2), freeOutlet(-1)];
    const flow = solveFlow(flowSpace(transportSpace(grid)), mobility, outlets, 1000);
    expect(flow.divergence).toBeLessThan(1e-9);
    expect(flow.outflow[0] + flow.outflow[1] + flow.outflow[2]).toBeCloseTo(0, 9);
    expect(flow.outflow[1]).toBeLessThan(0);
    expect(flow.outflow[2]).toBeGreaterThan(0);
  });

  it('keeps the pressure between those at the boundaries', () => {
    const grid = gridOf(HEXAGON, 50, { bores: [SIDE_BORE] });
    const { flow } = throughFlow(grid);
    const { least, most } = rangeOf(grid, flow.pressure);
    expect(least).toBeGreaterThanOrEqual(-1e-10);
    expect(most).toBeLessThanOrEqual(1 + 1e-10);
  });

  it('scales with a gap or viscosity changed all over, without another solve, as a fresh solve would', () => {
    const grid = gridOf(DISC, 48, { bores: [CENTRE_BORE] });
    const outlets = [{ pressure: 0, resistance: 0.2, mouth: Infinity }, freeOutlet(1)];
    const space = flowSpace(transportSpace(grid));
    solveFlow(space, constant(grid, 1), outlets, 1000);
    const scaled = solveFlow(space, constant(grid, 3), outlets, 1000);
    const fresh = solveFlow(flowSpace(transportSpace(grid)), constant(grid, 3), outlets, 1000);
    expect(scaled.outflow[0] / fresh.outflow[0]).toBeCloseTo(1, 9);
  });

  it('has the side gap in series: Q = dp / (R side + R face)', () => {
    const grid = gridOf(DISC, 64, { bores: [CENTRE_BORE] });
    const { flow: free, transport } = throughFlow(grid);
    const face = 1 / free.outflow[0];
    const outlets = [{ pressure: 0, resistance: 2, mouth: Infinity }, freeOutlet(1)];
    const flow = solveFlow(flowSpace(transport), constant(grid, 1), outlets, 1000);
    expect(flow.outflow[0]).toBeCloseTo(1 / (2 + face), 9);
    expect(flow.boundaryPressure[0]).toBeCloseTo(2 / (2 + face), 9);
  });
});

describe('delivery', () => {
  const side = { width: 45 * UM, depth: 6 * MM, viscosity: 4e-3 };
  const delivery = (change: Partial<Delivery>): Delivery => ({
    pressure: 0,
    density: 1400,
    film: 45 * UM,
    side,
    ...change,
  });
  const tool = { kind: 'circle', diameter: 12 * MM } as const;
  const bores = [{ x: 0, y: 0, radius: 1.5 * MM }];

  function run(change: Partial<Delivery>, film = 45 * UM) {
    const grid = gridOf(tool, 48, { bores });
    const given = delivery({ film, ...change });
    const mobility = constant(grid, filmMobility(film, 4e-3));
    return { grid, flow: solveFlow(flowSpace(transportSpace(grid)), mobility, outletsFor(grid, given), given.density) };
  }

  it('flooded moves nothing', () => {
    const { flow } = run({});
    expect(flow.east.every((q) => q === 0)).toBe(true);
    expect(flow.cut.every((q) => q === 0)).toBe(true);
    expect(flow.divergence).toBe(0);
  });

  it('pumped goes out over the edge, drawn comes in, by the same amount', () => {
    const pumped = run({ pressure: 5e4 }).flow;
    const drawn = run({ pressure: -5e4 }).flow;
    expect(pumped.outflow[0]).toBeGreaterThan(0);
    expect(drawn.outflow[0] / pumped.outflow[0]).toBeCloseTo(-1, 9);
    // ln(R/Ri) 12 mu / (2 pi h^3) and 12 mu L / (perimeter w^3) in series, less 1 % for the head and the grid
    const face = (12 * 4e-3 * Math.log(4)) / (2 * Math.PI * 45e-6 ** 3);
    const gap = (12 * 4e-3 * 6e-3) / (Math.PI * 12e-3 * 45e-6 ** 3);
    expect(Math.abs(pumped.outflow[0] / (5e4 / (face + gap)) - 1)).toBeLessThan(0.01);
  });

  it('cannot be drawn harder than a vacuum', () => {
    const hard = run({ pressure: -5e5 }).flow;
    const most = run({ pressure: LEAST_GAUGE_PRESSURE }).flow;
    expect(hard.outflow[0]).toBe(most.outflow[0]);
    expect(Math.min(...hard.pressure)).toBeGreaterThanOrEqual(LEAST_GAUGE_PRESSURE);
  });

  it('passes less than a bare mouth would, and comes near it where the film is no obstacle', () => {
    const wide = { width: 1 * MM, depth: 0, viscosity: 4e-3 };
    for (const film of [45 * UM, 200 * UM, 1 * MM, 3 * MM]) {
      const { flow } = run({ pressure: 1e5, side: wide }, film);
      const cap = orificeFlow(2 * Math.PI * 1.5 * MM * film, 1e5, 1400);
      expect(flow.outflow[0]).toBeLessThan(cap);
      if (film === 3 * MM) expect(flow.outflow[0]).toBeGreaterThan(0.95 * cap);
    }
  });

  it('goes through the hollow of a ring, past the core', () => {
    const grid = gridOf({ kind: 'ring', outerDiameter: 12 * MM, innerDiameter: 6 * MM }, 64);
    const [edge, hole] = outletsFor(grid, delivery({ pressure: 1e5 }));
    expect(edge.pressure).toBe(0);
    expect(hole.pressure).toBe(1e5);
    expect(hole.resistance / edge.resistance).toBeCloseTo(2, 12);
  });

  it('is refused where it has no way in or out', () => {
    const solid = gridOf(tool, 48);
    expect(() => outletsFor(solid, delivery({ pressure: 1e5 }))).toThrow(/without a bore/);
    expect(() => outletsFor(solid, delivery({ pressure: -5e4 }))).toThrow(/without a bore/);
    expect(outletsFor(solid, delivery({}))).toHaveLength(1);
    const bored = gridOf(tool, 48, { bores });
    const closed = { width: 0, depth: 1 * MM, viscosity: 4e-3 };
    expect(() => outletsFor(bored, delivery({ pressure: 1e5, side: closed }))).toThrow(/lets no slurry out/);
  });
});

describe('transport in a through-flow', () => {
  it('has the age of radial flow with dispersion to second order, with a bore and in a ring', () => {
    for (const [spec, bores] of [
      [DISC, [CENTRE_BORE]],
      [RING, []],
    ] as const) {
      const errors = CELLS.map((cells) => {
        const grid = gridOf(spec, cells, { bores });
        const { transport, flow } = throughFlow(grid);
        const u = constant(grid, 0);
        const edge = edgeValues(grid, [0, 0]);
        solveTransport(u, transport, { conductivity: constant(grid, 0.3), source: constant(grid, 1), edge, flow });
        const channel = { inner: 0.3, outer: 1, flow: flow.outflow[0], film: 1 };
        return rmsError(
          grid,
          u,
          radial((r) => radialFlowAge(r, channel, 0.3)),
        );
      });
      expect(orderOf(errors)).toBeGreaterThan(SECOND);
    }
  });

  it('without dispersion has the age and the fresh share of plug flow, to first order as upwinding has it', () => {
    const ages: number[] = [];
    const shares: number[] = [];
    for (const cells of CELLS) {
      const grid = gridOf(RING, cells);
      const { transport, flow } = throughFlow(grid);
      const channel = { inner: 0.3, outer: 1, flow: flow.outflow[0], film: 1 };
      const u = constant(grid, 0);
      const conductivity = constant(grid, 0);
      solveTransport(u, transport, { conductivity, source: constant(grid, 1), edge: edgeValues(grid, [0, 0]), flow });
      ages.push(
        rmsError(
          grid,
          u,
          radial((r) => plugAge(r, channel)),
        ),
      );
      // the value beyond the outlet is not seen upstream
      solveTransport(u, transport, { conductivity, loss: constant(grid, 2), edge: edgeValues(grid, [0, 1]), flow });
      shares.push(
        rmsError(
          grid,
          u,
          radial((r) => plugShare(r, channel, 2)),
        ),
      );
    }
    expect(orderOf(ages)).toBeGreaterThan(0.9);
    expect(orderOf(shares)).toBeGreaterThan(0.9);
    expect(ages[2]).toBeLessThan(0.01);
  });

  it('closes the balance to 1e-6 and keeps a fresh share within 0 and 1 at every Peclet number', () => {
    const grid = gridOf(HEXAGON, 64, { bores: [SIDE_BORE] });
    const { transport, flow } = throughFlow(grid);
    for (const conductivity of [1, 1e-1, 1e-2, 1e-3, 1e-4, 0]) {
      const u = constant(grid, 0);
      const { converged, iterations, sources, sinks, outflow, throughput } = solveTransport(u, transport, {
        conductivity: constant(grid, conductivity),
        loss: constant(grid, 1),
        edge: edgeValues(grid, [0, 1]),
        flow,
      });
      expect(converged).toBe(true);
      expect(iterations).toBeLessThan(20);
      expect(Math.abs(sources - sinks - outflow[0] - outflow[1]) / throughput).toBeLessThan(1e-6);
      const { least, most } = rangeOf(grid, u);
      expect(least).toBeGreaterThanOrEqual(-1e-6);
      expect(most).toBeLessThanOrEqual(1 + 1e-6);
    }
  });

  it('carries a constant unchanged, since the flow is free of divergence', () => {
    const grid = gridOf(HEXAGON, 48, { bores: [SIDE_BORE] });
    const { transport, flow } = throughFlow(grid);
    const u = constant(grid, 0);
    solveTransport(u, transport, { conductivity: constant(grid, 0.01), edge: edgeValues(grid, [1, 1]), flow });
    const { least, most } = rangeOf(grid, u);
    expect(least).toBeCloseTo(1, 5);
    expect(most).toBeCloseTo(1, 5);
  });
});
