/**
 * Rate of sinking of Cook, Manufacturing Analysis (1966), from memory: v = 5.9 f (sigma / H) sqrt(R Y) (m/s), sigma the
 * static stress on the face, R the grit radius, Y the amplitude zero-to-peak. A reference for checks.
 */
export function cookRate(setting: {
  readonly frequency: number;
  readonly pressure: number;
  readonly hardness: number;
  readonly gritRadius: number;
  readonly amplitude: number;
}): number {
  const { frequency, pressure, hardness, gritRadius, amplitude } = setting;
  return 5.9 * frequency * (pressure / hardness) * Math.sqrt(gritRadius * amplitude);
}
