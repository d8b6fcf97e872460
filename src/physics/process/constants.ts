import type { ConstantNote } from '../constants.ts';

/** Constants of the slurry under the face: exchange, debris and crushing. The same for every material and tool; see the notes. */
export interface SlurryConstants {
  /** Local stirring k_D and pumping k_P in the dispersion D = X U (k_D h + k_P length). */
  readonly stirring: number;
  readonly pumping: number;
  /** Mean speed of the slurry along the side gap over the tool's peak speed. */
  readonly sideSpeed: number;
  /** Width of the side gap the slurry passes over the median grain. */
  readonly sideGap: number;
  /**
   * Width at which the side gap resists a forced flow over the median grain: 1.4 at the foot, 1.7 to 2.1 at the entry once
   * the wall has opened (found in the cut); the loss goes by the inverse cube, averaged over the depth.
   */
  readonly sideFlowGap: number;
  /** Reynolds number of the film at which viscosity halves the exchange. */
  readonly exchangeReynolds: number;
  /** Debris over the grit's own volume that halves the useful hits. */
  readonly shielding: number;
  /** Volume of fines made per volume of crushed grit. */
  readonly finesYield: number;
  /** Volume of film a flake of debris bars over its own: a disc of radius c and depth b sweeps about 2 c / b times it. */
  readonly debrisBulking: number;
}

export const slurryConstants: SlurryConstants = {
  stirring: 2,
  pumping: 0.025,
  sideSpeed: 1,
  sideGap: 1.5,
  sideFlowGap: 1.75,
  exchangeReynolds: 20,
  shielding: 0.2,
  finesYield: 1,
  debrisBulking: 16,
};

export const slurryNotes: Record<keyof SlurryConstants, ConstantNote> = {
  stirring: { min: 0.5, max: 4, source: 'assumed: eddies of the film\u2019s own height at the tool\u2019s speed' },
  pumping: {
    min: 0.01,
    max: 0.05,
    source: 'assumed: a small share of the breathing of the film carries over from cycle to cycle',
  },
  sideSpeed: { min: 0.3, max: 2, source: 'assumed: the side of the tool drags the slurry at about its own speed' },
  sideGap: { min: 1.2, max: 2, source: 'side gap of 1.5 to 2 grains, common practice, from memory' },
  sideFlowGap: { min: 1.5, max: 2.1, source: 'found in the cut: foot 1.4 grains, entry 1.7 to 2.1' },
  exchangeReynolds: { min: 5, max: 60, source: 'assumed: films below this Reynolds number no longer stir' },
  shielding: {
    min: 0.1,
    max: 0.4,
    source: 'assumed: debris of a fifth of the grit\u2019s volume halves the useful hits',
  },
  finesYield: { min: 0.5, max: 1, source: 'volume is conserved when a grain breaks' },
  debrisBulking: {
    min: 6,
    max: 45,
    source:
      'fitted: best load of 0.03 to 0.6 MPa (check D8). Flakes as the crack laws give them sweep 2 c / b, about 40 times their volume, and are broken up under the tool',
  },
};
