/**
 * Philox4x32-10, a counter-based generator: one call turns a 128-bit counter and a 64-bit key into 128 random bits, so a
 * draw depends on its name (tile, step, event, use) and on nothing that ran before it. Salmon, Moraes, Dror and Shaw,
 * "Parallel random numbers: as easy as 1, 2, 3", SC 2011. Known answer: zero counter and key give
 * 6627e8d5 e169c58d bc57ac4c 9b00dbd8.
 */

const MULTIPLIER_0 = 0xd2511f53;
const MULTIPLIER_1 = 0xcd9e8d57;
const WEYL_0 = 0x9e3779b9;
const WEYL_1 = 0xbb67ae85;

/** High 32 bits of the product of two unsigned 32-bit numbers, as a signed one: by halves, in 32-bit integers only. */
export function multiplyHigh(a: number, b: number): number {
  const a0 = a & 0xffff;
  const a1 = a >>> 16;
  const b0 = b & 0xffff;
  const b1 = b >>> 16;
  const p01 = Math.imul(a0, b1);
  const p10 = Math.imul(a1, b0);
  const middle = (Math.imul(a0, b0) >>> 16) + (p01 & 0xffff) + (p10 & 0xffff);
  return (Math.imul(a1, b1) + (p01 >>> 16) + (p10 >>> 16) + (middle >>> 16)) | 0;
}

/** Fills `out[0..3]` (unsigned 32-bit) for counter (c0, c1, c2, c3) under key (k0, k1). */
export function philox(
  out: Uint32Array,
  c0: number,
  c1: number,
  c2: number,
  c3: number,
  k0: number,
  k1: number,
): Uint32Array {
  let x0 = c0 | 0;
  let x1 = c1 | 0;
  let x2 = c2 | 0;
  let x3 = c3 | 0;
  let key0 = k0 | 0;
  let key1 = k1 | 0;
  for (let round = 0; round < 10; round++) {
    const hi0 = multiplyHigh(MULTIPLIER_0, x0);
    const lo0 = Math.imul(MULTIPLIER_0, x0);
    const hi1 = multiplyHigh(MULTIPLIER_1, x2);
    const lo1 = Math.imul(MULTIPLIER_1, x2);
    x0 = hi1 ^ x1 ^ key0;
    x1 = lo1;
    x2 = hi0 ^ x3 ^ key1;
    x3 = lo0;
    key0 = (key0 + WEYL_0) | 0;
    key1 = (key1 + WEYL_1) | 0;
  }
  out[0] = x0;
  out[1] = x1;
  out[2] = x2;
  out[3] = x3;
  return out;
}

/** A 32-bit key word from a few numbers that name a stream: pass, field, replicate. Never seed + replicate. */
export function streamKey(...names: readonly number[]): number {
  const out = new Uint32Array(4);
  let key = 0x5b11a7ed;
  for (const name of names) key = philox(out, name, names.length, 0, 0, key, 0x0f1e2d3c)[0] as number;
  return key;
}
