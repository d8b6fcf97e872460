/**
 * The process constants: one named set, the same for every material. Each has a plausible range and says where it comes
 * from; `fitted` names the check it was fitted to (that check is then a calibration and not a validation).
 */
export interface ProcessConstants {
  /** Half-angle psi of a grit's tip (rad): Vickers face, 68 deg. */
  readonly tipHalfAngle: number;
  /** Contact area of the sharp tip is this times the square of the indent (4 tan^2 68 deg = 24.5). */
  readonly tipAreaFactor: number;
  /** Diameter of the tip's rounded end over the grit diameter. */
  readonly tipRoundness: number;
  /** Lateral crack radius: c = k_c (cot psi)^(5/12) E^(3/8) (K_s H)^(-1/2) P^(5/8). */
  readonly crackRadius: number;
  /** Lateral crack depth: b = k_b (cot psi)^(1/3) E^(1/2) / H P^(1/2). */
  readonly crackDepth: number;
  /** Lateral threshold: P0 = factor (cot psi)^(-2/3) (K_s^4 / H^3) (E / H). */
  readonly thresholdFactor: number;
  /** Log-normal scatter of the threshold (standard deviation of ln P0). */
  readonly thresholdScatter: number;
  /** Share of lateral chips that leave. */
  readonly chipYield: number;
  /** Share of a plastic dent's volume that leaves as debris. */
  readonly plasticShare: number;
  /** Reach of the lips pushed up round a dent, from which its debris breaks off, over the radius of contact. */
  readonly lipRadius: number;
  /** Flaw, in contact radii of a grain at its crushing load, from which the lips of a dent still crack off. */
  readonly lipCracks: number;
  /** Volume of tool lost per volume of dent in the tool face. */
  readonly toolPlasticShare: number;
  /** Hardness of a soft metal tool face at work over its tabulated hardness. */
  readonly toolHardening: number;
  /** Tabulated tool hardness below which a metal hardens at work (Pa). */
  readonly toolHardeningLimit: number;
  /** Crushing strength at work over the tabulated one. */
  readonly crushFactor: number;
  /** Dense packing of grit, volume fraction. */
  readonly packing: number;
  /** Lift-off: useful share of hits is 1 / (1 + (c_m d / 2A)^2). */
  readonly liftOff: number;
  /** Blunting: useful share is 1 / (1 + (H_w / (ratio H_a))^power). */
  readonly bluntingPower: number;
  readonly bluntingRatio: number;
  /** Indentation stiffness k of the free-impact load, P = (3U)^(2/3) (k H)^(1/3). */
  readonly freeImpactStiffness: number;
  /** Radial crack: c_r = (xi sqrt(E/H) P / K)^(2/3). */
  readonly radialCrack: number;
  /** Edge chip: P_F = beta K_Ic h^(3/2). */
  readonly edgeChip: number;
  /** Width of an edge chip on the entry face over its depth down the wall. */
  readonly chipWidthRatio: number;
  /** Breadth of an edge chip along the rim over its depth. */
  readonly chipBreadthRatio: number;
  /** Site-to-site log-normal scatter of the edge-chip load along the rim. */
  readonly chipSiteScatter: number;
  /** Hit-to-hit log-normal scatter of the lateral run-out at the wall. */
  readonly runoutScatter: number;
  /** Largest squeeze at the wall over the run-out. */
  readonly runoutCap: number;
  /** Share of fresh grit in the side gap. */
  readonly wallRenewal: number;
  /** Side gap left where the tool's edge passes, over d50 by mass. */
  readonly wallFoot: number;
  /** Overlap: removed over credited volume is factor (b/l)^exponent, at most one. */
  readonly overlapFactor: number;
  readonly overlapExponent: number;
  /** Floor roughness: Sq = factor sqrt(b l). */
  readonly floorRoughness: number;
  /** Sa over Sq of a cut floor. */
  readonly meanOverRms: number;
}

export interface ConstantNote {
  readonly min: number;
  readonly max: number;
  /** Where the value comes from, and what it was fitted to if it was. */
  readonly source: string;
}

export const publishedConstants: ProcessConstants = {
  tipHalfAngle: 1.1868238913561442,
  tipAreaFactor: 24.5,
  tipRoundness: 0.2,
  crackRadius: 0.226,
  crackDepth: 0.035,
  thresholdFactor: 1200 / (0.75 * 0.75),
  thresholdScatter: 0.6,
  chipYield: 1,
  plasticShare: 1,
  lipRadius: 2.5,
  lipCracks: 10,
  toolPlasticShare: 0.013,
  toolHardening: 1.6,
  toolHardeningLimit: 4e9,
  crushFactor: 1.8,
  packing: 0.6,
  liftOff: 0.6,
  bluntingPower: 8,
  bluntingRatio: 1,
  freeImpactStiffness: 24.5,
  radialCrack: 0.016,
  edgeChip: 9.3,
  chipWidthRatio: 3,
  chipBreadthRatio: 5,
  chipSiteScatter: 0.2,
  runoutScatter: 0.25,
  runoutCap: 2,
  wallRenewal: 0.03,
  wallFoot: 1.4,
  overlapFactor: 0.763,
  overlapExponent: -0.19,
  floorRoughness: 0.82,
  meanOverRms: 0.8,
};

export const constantNotes: Record<keyof ProcessConstants, ConstantNote> = {
  tipHalfAngle: { min: 1.047, max: 1.292, source: 'Vickers geometry, as in the crack laws (60 to 74 deg)' },
  tipAreaFactor: { min: 12, max: 48, source: '4 tan^2(68 deg), Vickers geometry' },
  tipRoundness: { min: 0.04, max: 0.4, source: 'abrasive-wear literature, from memory: tip radius a few to 20 % of d' },
  crackRadius: {
    min: 0.17,
    max: 0.226,
    source: 'Marshall, Lawn and Evans, J. Am. Ceram. Soc. 65 (1982) 561, clamped plate A = 3/(4 pi), from memory',
  },
  crackDepth: {
    min: 0.025,
    max: 0.14,
    source:
      'fitted: Ra of glass about a 27th of the grain (common practice, from memory); impact-by-impact cuts come out at d50/24 (F320) to d50/14 (F600)',
  },
  thresholdFactor: {
    min: 1000,
    max: 11000,
    source:
      'Marshall, Lawn and Evans 1982, zeta0 / A^2 with A = 3/4, from memory; a deliberate mixture with the radius, whose A is the clamped plate',
  },
  thresholdScatter: {
    min: 0.2,
    max: 1.2,
    source: 'assumed: the onset is gradual over a decade (Wensink and Elwenspoek 2002)',
  },
  chipYield: {
    min: 0.3,
    max: 1,
    source:
      'fitted: rate of sinking glass, 3.81 mm/min (check D1; Benedict 1987, from memory), at its physical limit: shallow chips that always leave',
  },
  plasticShare: { min: 0.3, max: 1, source: 'fitted: tungsten carbide to glass (check D4), at its physical limit' },
  lipRadius: {
    min: 2,
    max: 3,
    source:
      'fitted: roughness of hard metal (check D12), the middle of the reach of pile-up round indents, from memory',
  },
  lipCracks: {
    min: 3,
    max: 30,
    source:
      'assumed: the plastic zone under a dent reaches three to nine contact radii; keeps most of a dent in cemented carbide and a few thousandths in ductile metal',
  },
  toolPlasticShare: { min: 0.005, max: 0.03, source: 'fitted: tool wear ratios (check D5)' },
  toolHardening: { min: 1.3, max: 2, source: 'assumed: work-hardened, grit-filled face' },
  toolHardeningLimit: { min: 3e9, max: 5e9, source: 'assumed: hardened steel and carbide do not harden further' },
  crushFactor: {
    min: 0.5,
    max: 2,
    source: 'fitted: rate and load curve of glass (checks D1, D8); listed strengths are good to a factor 2',
  },
  packing: { min: 0.5, max: 0.64, source: 'random packing of grains' },
  liftOff: { min: 0.4, max: 0.8, source: 'fitted: amplitude exponent (check D6) and best grit size' },
  bluntingPower: { min: 4, max: 12, source: 'assumed' },
  bluntingRatio: { min: 0.8, max: 1.2, source: 'assumed' },
  freeImpactStiffness: { min: 20, max: 30, source: 'quasi-static indentation by a Vickers-like grain, derived' },
  radialCrack: {
    min: 0.012,
    max: 0.02,
    source: 'Anstis, Chantikul, Lawn and Marshall, J. Am. Ceram. Soc. 64 (1981) 533, from memory',
  },
  edgeChip: { min: 8, max: 10.6, source: 'Chai and Lawn, Acta Mater. 55 (2007) 2555, from memory' },
  chipWidthRatio: {
    min: 2,
    max: 4,
    source: 'flake proportions, Almond and McCormick, Nature 321 (1986) 53, numbers from memory',
  },
  chipBreadthRatio: { min: 4, max: 8, source: 'flake proportions, as above' },
  chipSiteScatter: { min: 0.1, max: 0.3, source: 'assumed' },
  runoutScatter: {
    min: 0.15,
    max: 0.5,
    source: 'fitted with the cap: entrance chips of one to three grain sizes (common practice, from memory) at F320',
  },
  runoutCap: {
    min: 1.5,
    max: 4,
    source: 'fitted with the scatter; at 0.5 and 4 the chips are four to seven grain sizes',
  },
  wallRenewal: {
    min: 0.01,
    max: 0.1,
    source:
      'assumed: share of first squeezes in clear water at the reference setting; flow, viscosity and debris move it',
  },
  wallFoot: {
    min: 1.3,
    max: 1.8,
    source: 'found in the cut: 41 um for a 29.2 um grit under a sharp edge, 1.6 to 1.8 d50 for other size laws',
  },
  overlapFactor: {
    min: 0.725,
    max: 0.8,
    source: 'found in the cut: phi = 0.763 (b/l)^-0.19 within 5 % over 35 settings',
  },
  overlapExponent: { min: -0.21, max: -0.17, source: 'found in the cut, as above' },
  floorRoughness: { min: 0.6, max: 1, source: 'found in the cut: Sq = 0.82 sqrt(b l), Sa within -27 to +18 %' },
  meanOverRms: { min: 0.795, max: 0.823, source: 'found in the cut; sqrt(2/pi) = 0.798 for a Gaussian floor' },
};
