import { PI, sin } from '#src/base/math.ts';
import { barSpeed } from '../fatigue.ts';
import type { ToolMaterial } from '../records.ts';
import { fallsThroughZero } from './elementary.ts';
import { diameterRatio, type Horn, resonantLength } from './horn.ts';
import { type HornShape, hornWave, resonantWaveNumber } from './waves.ts';

/** A tool fixed to the horn's end. */
export interface EndTool {
  readonly material: ToolMaterial;
  /** Of its cross-section (m2). */
  readonly area: number;
  /** From the horn's end to the tool face (m). */
  readonly length: number;
}

/** Tool length over wavelength above which it is a bar and not a mass. Common practice, no source. */
export const TOOL_LENGTH_SHARE = 1 / 20;
/**
 * Share of the frequency by which a tool may shift the resonance before a warning. Assumed: generators follow the
 * resonance over a few per cent (common practice, no source).
 */
export const DETUNING_SHARE = 0.02;

/** What a mass at its end does to a half-wave horn tuned without it. */
export interface Detuning {
  /** Resonance with the mass over resonance without (1). */
  readonly frequencyRatio: number;
  /** Gain at the shifted resonance (1). */
  readonly gain: number;
}

/**
 * Resonance of a half-wave horn that carries a mass at its output end: u' = mu k^2 u there, mu being the mass over
 * that of a bar of the horn's length and output area, density times area times length. For a plain bar tan x = -mu x.
 * The mode stays above that of a clamped end, so it is the only root between rest and the free resonance. Plane waves,
 * derived; exact for a point mass of any size. Throws a RangeError for a negative mass.
 */
export function endMassDetuning(shape: HornShape, ratio: number, massRatio: number): Detuning {
  const free = resonantWaveNumber(shape, ratio);
  if (!(massRatio >= 0 && massRatio < Number.POSITIVE_INFINITY)) {
    throw new RangeError(`the mass ratio of a tool must be zero or more: ${massRatio}`);
  }
  // counted positive at the free resonance and negative towards rest
  const balance = (k: number) => {
    const { tip, tipStrain } = hornWave(shape, ratio, k);
    return massRatio * k * k * tip - tipStrain;
  };
  const k = massRatio === 0 ? free : fallsThroughZero(balance, 1e-4 * free, free);
  return { frequencyRatio: k / free, gain: Math.abs(hornWave(shape, ratio, k).tip) };
}

/** Mass of a tool (kg). */
export function toolMass({ material, area, length }: EndTool): number {
  return material.density * area * length;
}

/** Mass of the tool over that of a bar with the horn's length and output area (1). */
export function massRatio(horn: Horn, tool: EndTool, frequency: number): number {
  const outputArea = (PI / 4) * horn.outputDiameter * horn.outputDiameter;
  return toolMass(tool) / (horn.material.density * outputArea * resonantLength(horn, frequency));
}

/** What the tool's mass does to a horn tuned to `frequency` (Hz) without it. */
export function toolDetuning(horn: Horn, tool: EndTool, frequency: number): Detuning {
  return endMassDetuning(horn.shape, diameterRatio(horn), massRatio(horn, tool, frequency));
}

/** Tool length over the wavelength of a bar of its material (1). */
export function lengthShare(tool: EndTool, frequency: number): number {
  return (tool.length * frequency) / barSpeed(tool.material);
}

/**
 * Longest tool that is still a mass (m): a twentieth of the wavelength. The bar's inertia tan(x)/x is then 3.4 % above
 * its mass, x = 2 pi / 20.
 */
export function longestMassLikeTool(material: ToolMaterial, frequency: number): number {
  return (TOOL_LENGTH_SHARE * barSpeed(material)) / frequency;
}

/**
 * Stress where a straight tool joins the horn (Pa): what its own inertia pulls, E k A sin(k L) for amplitude A at the
 * face (m, zero-to-peak), up to a quarter wave. Plane waves, derived; no fillet, no brazing.
 */
export function jointStress(tool: EndTool, amplitude: number, frequency: number): number {
  const k = (2 * PI * frequency) / barSpeed(tool.material);
  const reach = Math.min(k * tool.length, PI / 2);
  return tool.material.youngsModulus * k * amplitude * sin(reach);
}
