import { type Field, OUT_OF_REACH } from '../contract.ts';

const LN2 = Math.LN2;

/** -ln u for u = (r + 1/2) / 2^32: the exponent by counting zeros, the mantissa from a table. */
export function exponential(logs: Float64Array, r: number): number {
  const zeros = Math.clz32(r);
  const mantissa = zeros === 32 ? 0 : (r << zeros) >>> 0;
  // r = 2^(31 - zeros) (1 + fraction); the half is below the table's resolution except at the very bottom
  const fraction = zeros === 32 ? 0 : mantissa * 2 ** -31 - 1;
  const place = fraction * 1024;
  const k = place | 0;
  const low = logs[k] as number;
  return (zeros + 1) * LN2 - (low + (place - k) * ((logs[k + 1] as number) - low));
}

/** Share of grains longer than g, `perMetre` entries of the table a metre. */
export function tailAt(tail: Float32Array, perMetre: number, g: number): number {
  if (g <= 0) return 1;
  const place = g * perMetre;
  const k = place | 0;
  if (k >= tail.length - 1) return 0;
  const low = tail[k] as number;
  return low + (place - k) * ((tail[k + 1] as number) - low);
}

/** Chance that a chip under a grain of diameter d leaves. */
export function detachAt(detach: Float32Array, perMetre: number, d: number): number {
  const place = d * perMetre * (detach.length - 1);
  const k = Math.min(place | 0, detach.length - 2);
  const low = detach[k] as number;
  return low + (place - k) * ((detach[k + 1] as number) - low);
}

/** How far the tool's curved edge stands above its face, `e` beyond the place where it begins to curve (m). */
export function riseAt(edgeRadius: number, e: number): number {
  if (e <= 0) return 0;
  if (e >= edgeRadius) return edgeRadius;
  return edgeRadius - Math.sqrt(edgeRadius * edgeRadius - e * e);
}

/** True where every column of a tile is out of reach or passed by the tool: heights only fall, so it stays so. */
export function isIdle(field: Field, tile: number): boolean {
  const { bounds } = field;
  const blocks = (field.tile / field.block) ** 2;
  for (let k = tile * blocks; k < (tile + 1) * blocks; k++) if ((bounds[k] as number) > OUT_OF_REACH) return false;
  return true;
}
