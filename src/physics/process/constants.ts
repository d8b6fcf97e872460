/** Constants of the slurry under the face: exchange, debris and crushing. The same for every material and tool. */
export interface SlurryConstants {
  /** Local stirring k_D and pumping k_P in the dispersion D = X U (k_D h + k_P length). */
  readonly stirring: number;
  readonly pumping: number;
  /** Mean speed of the slurry along the side gap over the tool's peak speed. */
  readonly sideSpeed: number;
  /** Width of the side gap the slurry passes over the median grain. */
  readonly sideGap: number;
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
  exchangeReynolds: 20,
  shielding: 0.2,
  finesYield: 1,
  debrisBulking: 12,
};
