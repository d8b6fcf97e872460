/**
 * The cividis colour map of Nunez, Anderton and Renslow, "Optimizing colormaps with consideration for color vision
 * deficiency", PLoS ONE 13(7) e0199239 (2018): lightness rises evenly and the map reads alike with normal and with
 * red-green deficient sight.
 */

/**
 * Knots out of the 256 published entries: entry number, then red, green, blue (0..1). Straight lines between them keep
 * within 1/255 of the published entries between (tests/picture).
 */
// biome-ignore format: one knot a line reads as the table it is
const KNOTS: readonly number[] = [
  0, 0, 0.135112, 0.304751,
  8, 0, 0.157932, 0.357521,
  16, 0, 0.178802, 0.414764,
  18, 0, 0.18455, 0.428802,
  20, 0, 0.188769, 0.439563,
  22, 0, 0.193366, 0.441561,
  23, 0.003602, 0.195911, 0.441564,
  26, 0.046205, 0.203903, 0.440196,
  28, 0.068968, 0.209372, 0.438863,
  32, 0.103401, 0.220406, 0.43579,
  40, 0.154261, 0.242475, 0.43012,
  48, 0.195057, 0.264372, 0.425924,
  56, 0.230871, 0.286134, 0.423498,
  64, 0.263738, 0.307831, 0.422789,
  72, 0.294669, 0.329531, 0.423716,
  80, 0.32425, 0.351289, 0.42625,
  88, 0.352892, 0.373153, 0.430226,
  96, 0.38083, 0.395164, 0.435653,
  104, 0.408226, 0.417357, 0.44257,
  112, 0.435168, 0.439763, 0.451134,
  120, 0.461616, 0.462405, 0.461969,
  124, 0.474812, 0.473832, 0.467681,
  128, 0.488697, 0.485318, 0.471008,
  136, 0.51792, 0.508454, 0.472707,
  144, 0.54784, 0.531895, 0.471704,
  152, 0.578236, 0.555673, 0.468724,
  160, 0.609105, 0.579816, 0.463638,
  168, 0.640352, 0.604354, 0.456791,
  176, 0.671991, 0.629316, 0.448018,
  184, 0.704037, 0.654731, 0.437147,
  192, 0.736488, 0.680629, 0.424028,
  200, 0.769353, 0.707035, 0.408516,
  208, 0.802667, 0.733978, 0.390153,
  216, 0.836429, 0.761483, 0.368747,
  224, 0.870717, 0.789572, 0.343333,
  232, 0.905589, 0.818257, 0.312889,
  240, 0.941147, 0.84753, 0.275815,
  248, 0.97778, 0.877281, 0.227954,
  251, 0.992218, 0.888385, 0.205468,
  252, 0.994847, 0.892954, 0.203445,
  255, 0.995737, 0.909344, 0.217772,
];

const ENTRIES = 256;

/** The 256 colours (0..255, not rounded), red, green, blue one after the other. */
export function cividisTable(): Float32Array {
  const table = new Float32Array(ENTRIES * 3);
  for (let knot = 0; knot + 4 < KNOTS.length; knot += 4) {
    const first = KNOTS[knot] as number;
    const last = KNOTS[knot + 4] as number;
    for (let entry = first; entry <= last; entry++) {
      const share = (entry - first) / (last - first);
      for (let channel = 1; channel <= 3; channel++) {
        const low = KNOTS[knot + channel] as number;
        const high = KNOTS[knot + 4 + channel] as number;
        table[entry * 3 + channel - 1] = 255 * (low + share * (high - low));
      }
    }
  }
  return table;
}

const TABLE = cividisTable();

/** Colour (0..255 each) at `share` of the range, clamped to 0..1: dark = little, light = much. */
export function cividis(share: number): readonly [number, number, number] {
  const clamped = share > 0 ? Math.min(share, 1) : 0;
  const at = Math.round(clamped * (ENTRIES - 1)) * 3;
  return [TABLE[at] as number, TABLE[at + 1] as number, TABLE[at + 2] as number];
}
