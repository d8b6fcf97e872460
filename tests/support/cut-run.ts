import { makeOutline } from '#src/base/outline.ts';
import type { EstimateSetting } from '#src/physics/estimate.ts';
import { advance, isDone } from '#src/voxel/advance.ts';
import { type Cut, makeCut, runCut } from '#src/voxel/cut.ts';
import type { Kernel } from '#src/voxel/kernels/contract.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import type { CutSpec } from '#src/voxel/model.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { SCALAR } from '#src/voxel/state.ts';

/** What a cut did between two depths. SI. */
export interface SteadyCut {
  readonly cut: Cut;
  readonly rate: number;
  /** Sampled over set load, and the hits it rests on. */
  readonly load: number;
  readonly hits: number;
  /** Grains touching both faces per area and cycle (1/m2). */
  readonly engaged: number;
  readonly candidatesPerHit: number;
  readonly overlap: number;
  /** Arithmetic mean roughness of the flat floor, or of the strip where there is one, every 5 um of depth (m). */
  readonly sa: number;
}

/** A cut run to its end. */
export function finishedCut(spec: CutSpec): Cut {
  const cut = makeCut(spec);
  const runner = serialRunner(createFastKernel(), cut.model, cut.state);
  while (!isDone(cut.model, cut.state)) runCut(cut, runner, 1000);
  return cut;
}

/** Cuts to the depth asked for and averages from `from` (m) on. */
export function steadyCut(spec: CutSpec, from: number, kernel: Kernel = createFastKernel()): SteadyCut {
  const cut = makeCut(spec);
  const { model, state } = cut;
  const runner = serialRunner(kernel, model, state);
  const s = state.scalars;
  let start: Float64Array | null = null;
  const looks: number[] = [];
  while (!isDone(model, state)) {
    advance(model, state, runner);
    const depth = -(s[SCALAR.floorMean] as number);
    if (!start && depth >= from) start = s.slice();
    // a floor forgets itself within two chip depths, so looks 5 um apart are independent
    if (depth >= from + looks.length * 5e-6) looks.push(roughness(cut));
  }
  const since = (k: number) => (s[k] as number) - ((start as Float64Array)[k] as number);
  const time = since(SCALAR.time);
  const load = spec.drive.kind === 'load' ? spec.drive.load : Number.NaN;
  return {
    cut,
    rate: -since(SCALAR.floorMean) / time,
    load: since(SCALAR.impulse) / time / load,
    hits: since(SCALAR.engaged),
    engaged: since(SCALAR.impacts) / since(SCALAR.cycles) / model.outline.area,
    candidatesPerHit: since(SCALAR.candidates) / since(SCALAR.engaged),
    overlap: 1 - since(SCALAR.overlap) / since(SCALAR.credited),
    sa: looks.reduce((sum, sa) => sum + sa, 0) / looks.length,
  };
}

/** Sa of the strip, or of the flat floor without one (m). */
export function roughness(cut: Cut): number {
  const field = cut.state.strip ?? cut.state.floor;
  const flat = (c: number) => field.edges.length === 0 || field.edges[c] === 0;
  let sum = 0;
  let n = 0;
  field.heights.forEach((h, c) => {
    if (!flat(c)) return;
    sum += h;
    n++;
  });
  const mean = sum / n;
  let deviation = 0;
  field.heights.forEach((h, c) => {
    if (flat(c)) deviation += Math.abs(h - mean);
  });
  return deviation / n;
}

/** The estimate's setting of a cut under a load. */
export function settingOf(spec: CutSpec): EstimateSetting {
  const outline = makeOutline(spec.tool);
  const load = spec.drive.kind === 'load' ? spec.drive.load : 0;
  return {
    conditions: spec.conditions,
    pressure: load / outline.area,
    faceArea: outline.area,
    outlineArea: outline.area,
    perimeter: outline.perimeter,
    depth: spec.depth,
    runout: spec.runout,
  };
}
