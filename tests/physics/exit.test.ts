import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { publishedConstants } from '#src/physics/constants.ts';
import { craterLaw, radialCrack } from '#src/physics/crater.ts';
import { edgeChipDistance, edgeChipLoad, exitLigament } from '#src/physics/edge-chip.ts';
import {
  breakingThickness,
  crackedStrength,
  exitBreakout,
  exitConstants,
  exitLoad,
  exitNotes,
  thinWallBreaks,
} from '#src/physics/exit.ts';
import { carbide, glass } from './samples.ts';

const constants = publishedConstants;
const crack = radialCrack(craterLaw(glass, constants), 1);
const through = { work: glass, crack, edgeLoad: 1, constants };
const loads = fc.double({ min: 0.01, max: 100, noNaN: true });

describe('the last ligament', () => {
  it('is as strong as its crack lets it be: K = 1.12 sigma sqrt(pi c) (Griffith, Irwin)', () => {
    expect(1.12 * crackedStrength(glass, 30e-6) * Math.sqrt(Math.PI * 30e-6)).toBeCloseTo(0.75e6, 3);
    // glass with a crack of 90 um keeps 40 MPa, the strength of damaged glass (from memory)
    expect(crackedStrength(glass, 90e-6) / 1e6).toBeCloseTo(40, 0);
  });

  it('breaks as a clamped round plate at t = sqrt(3 F / (4 pi sigma)), 0.244 mm under 10 N at 40 MPa', () => {
    expect(breakingThickness(10, 40e6) * 1e3).toBeCloseTo(0.2443, 4);
    expect(breakingThickness(10, 40e6)).toBeCloseTo(exitLigament(10, 40e6), 12);
  });

  it('breaks as a clamped strip where the opening is narrow: sigma = F b / (2 L t^2) with F = p b L', () => {
    // a long ellipse of load F has the strip's pressure in its middle: p = F / (pi/4 b L), sigma = p b^2 / (2 t^2)
    const b = 1e-3;
    const length = 1;
    const t = breakingThickness(10, 40e6, b / length);
    const pressure = 10 / ((Math.PI / 4) * b * length);
    expect((pressure * b * b) / (2 * t * t) / 40e6).toBeCloseTo(1, 5);
  });

  it('thickens as the square root of the load, so that a quarter of the load near the exit halves it', () => {
    const at = (load: number) => exitBreakout({ ...through, load, backing: false });
    expect(at(5).ligament / at(20).ligament).toBeCloseTo(0.5, 10);
    expect(at(5).chipWidth / at(20).chipWidth).toBeCloseTo(0.5, 10);
  });

  it('takes a ring one to three of its thicknesses wide with it (common practice, from memory)', () => {
    const { ligament, chipWidth } = exitBreakout({ ...through, load: 10, backing: false });
    expect(chipWidth / ligament).toBeGreaterThanOrEqual(1);
    expect(chipWidth / ligament).toBeLessThanOrEqual(3);
  });

  it('with a backing is cut through, and the exit chips as an edge under one grit', () => {
    const backed = exitBreakout({ ...through, load: 10, backing: true });
    expect(backed.ligament).toBe(0);
    // 1 N chips glass from 27.39 um off its edge (Chai and Lawn 2007, constant from memory)
    expect(backed.chipDepth * 1e6).toBeCloseTo(27.39, 1);
    expect(backed.chipWidth / backed.chipDepth).toBe(constants.chipWidthRatio);
  });

  it('never chips less without the backing, and less in a tougher work', () => {
    fc.assert(
      fc.property(loads, (load) => {
        const open = exitBreakout({ ...through, load, backing: false });
        const backed = exitBreakout({ ...through, load, backing: true });
        expect(open.chipWidth).toBeGreaterThanOrEqual(backed.chipWidth);
        expect(open.ligament).toBeGreaterThanOrEqual(crack);
        const tough = exitBreakout({ ...through, work: carbide, load, backing: false });
        expect(tough.chipWidth).toBeLessThanOrEqual(open.chipWidth);
      }),
      { seed: 3 },
    );
  });

  it('breaks under the full load when it is thicker than what is left where the load is taken back', () => {
    const ligamentAt = (load: number) => exitBreakout({ ...through, load, backing: false }).ligament;
    const full = ligamentAt(20);
    const exit = { backing: false, loadShare: 0.25 };
    expect(exitLoad(20, { ...exit, from: 0.9 * full }, ligamentAt)).toBe(20);
    expect(exitLoad(20, { ...exit, from: 1.1 * full }, ligamentAt)).toBe(5);
  });
});

describe('the constants of the exit', () => {
  it('lie inside their stated ranges', () => {
    for (const [name, { min, max }] of Object.entries(exitNotes)) {
      const value = exitConstants[name as keyof typeof exitConstants];
      expect(value).toBeGreaterThanOrEqual(min);
      expect(value).toBeLessThanOrEqual(max);
    }
  });
});

describe('a thin wall', () => {
  const wall = { work: glass, load: 0.5, crack: radialCrack(craterLaw(glass, constants), 0.5) };
  const at = (thickness: number, more = {}) => thinWallBreaks({ ...wall, thickness, ...more }, constants);

  it('breaks below its least thickness and stands above it', () => {
    const { least } = at(1);
    expect(at(0.99 * least).breaks).toBe(true);
    expect(at(1.01 * least).breaks).toBe(false);
    expect(at(1.01 * least).by).toBeNull();
  });

  it('is chipped through where the chip of its hardest hit is as wide as it is thick', () => {
    const { leastForChips } = at(1);
    const depth = leastForChips / constants.chipWidthRatio;
    expect(edgeChipLoad(glass.toughness, depth, constants)).toBeCloseTo(0.5, 9);
    expect(depth).toBeCloseTo(edgeChipDistance(glass.toughness, 0.5, constants), 12);
  });

  it('bends as a long cantilever under a point load on its rim, sigma = 6 (0.509 P) / t^2 (Jaramillo 1950, from memory)', () => {
    const { leastForBending } = at(1);
    const stress = (6 * 0.509 * 0.5) / leastForBending ** 2;
    expect(stress / crackedStrength(glass, wall.crack)).toBeCloseTo(1, 10);
    expect(at(1, { lateralLoad: 2 }).leastForBending / leastForBending).toBeCloseTo(2, 10);
  });

  it('of glass under half a newton fails by bending, some 0.1 mm thick; a cracked one earlier', () => {
    const result = at(0.1e-3);
    expect(result.by).toBe('bending');
    expect(result.leastForBending * 1e3).toBeGreaterThan(0.05);
    expect(result.leastForBending * 1e3).toBeLessThan(0.3);
    expect(at(1, { crack: 100e-6 }).least).toBeGreaterThan(result.least);
  });

  it('stands however thin where nothing bears on it', () => {
    expect(at(1e-6, { load: 0, crack: 0 }).breaks).toBe(false);
  });
});
