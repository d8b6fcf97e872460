/** Indices of the numbers of a cut that change, one float64 each, saved and restored with the fields. */
export const SCALAR = {
  step: 0,
  /** Process time (s). */
  time: 1,
  /** Height of the tip of the tool at the end of the last step (m). */
  face: 2,
  efold: 3,
  /** Mean height of the floor under the tip (m): that of the flat floor, or of what is in contact, less the face's rise. */
  floorMean: 4,
  /** Smoothed lowering of the floor per cycle (m). */
  ratePerCycle: 5,
  stripFace: 6,
  stripMean: 7,
  stripEfold: 8,
  /** Load per area on the flat floor (Pa). */
  facePressure: 9,
  /** Cycles since the last free-impact lowering and since the last wall step. */
  cyclesSinceRenew: 10,
  cyclesSinceWall: 11,
  /** Rows of the first wall that are open to hits. */
  openRows: 12,
  /** Length the tip of the tool has lost (m). */
  toolLost: 13,
  /** Sums over the cut: floor hits, chips, volumes (m3), impulse (N s) and the load they add up to. */
  candidates: 14,
  engaged: 15,
  chips: 16,
  credited: 17,
  overlap: 18,
  chipRemoved: 19,
  dentRemoved: 20,
  freeRemoved: 21,
  impulse: 22,
  load: 23,
  largestLoad: 24,
  chipRadius: 25,
  chipDepth: 26,
  /** Sums since the last record. */
  recentImpulse: 27,
  recentTime: 28,
  recentEngaged: 29,
  recentLoad: 30,
  recentLargestLoad: 31,
  nextRecordDepth: 32,
  wallHits: 33,
  wallRemoved: 34,
  cycles: 35,
  setLoad: 36,
  /** Tool dents per cycle at the last balance, per grain and square metre of film (m3). */
  toolDents: 37,
  /** Floor hits, each counting its magnification; over the cut and since the last record. */
  impacts: 38,
  recentImpacts: 39,
  /** Depth at which slurry and tool are worked out next (m), and what the slurry came to last. */
  nextSlurryDepth: 40,
  stall: 41,
  freshShare: 42,
  smoothLowered: 43,
  smoothCycles: 44,
  lastCycles: 45,
  /** Area of the face in contact (m2). */
  contactArea: 46,
  /** Depth of the tip at first contact (m). */
  startDepth: 47,
  /** Height of the tip after the last balance (m), and whether the next change of it is an advance: 0 after a renewal. */
  balancedFace: 48,
  advanceCounts: 49,
  /** Volume the tool has lost at its face (m3). */
  toolVolume: 50,
  /** Radius of the tool's edge now, and what its side has lost (m). */
  edgeRadius: 51,
  sideLoss: 52,
  /**
   * 1 once the load is more than the slurry, or the grits at all, can carry; the depth where that began (m); the gap of the
   * starved face, 0 while the load is carried (m); the rate of a steady floor when it last was (m/s).
   */
  stalled: 53,
  stallDepth: 54,
  starvedGap: 55,
  carriedRate: 56,
  /** Why the cut is over before its depth, `ENDED`. */
  ended: 57,
  /** Share of fresh grit in the side gap. */
  wallFresh: 58,
  /** Depth at which the last ligament gave way (m), 0 before; size of the exit chips at a site of usual strength (m). */
  brokeThrough: 59,
  exitChipWidth: 60,
  exitChipDepth: 61,
  /** Time (s) and depth (m) at the last renewal, and the length the tool had lost when its edge was last worked out (m). */
  renewedTime: 62,
  renewedDepth: 63,
  wornLost: 64,
  /** Mean gap over the columns in contact (m), which sets how many grits are under the face. */
  contactGap: 65,
  /** Roughness of a steady floor at the last renewal (m). */
  roughness: 66,
  /** Pressure of the highest rate at the last renewal (Pa). */
  bestPressure: 67,
} as const;
export const SCALARS = 68;

/** Why a cut is over before its depth. */
export const ENDED = { not: 0, ranOut: 1, stalled: 2, through: 3 } as const;
