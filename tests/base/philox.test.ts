import { expect, test } from 'vitest';
import { multiplyHigh, philox, streamKey } from '#src/base/philox.ts';

const hex = (words: Uint32Array) => Array.from(words, (w) => w.toString(16).padStart(8, '0')).join(' ');

// Known answers distributed with Salmon, Moraes, Dror and Shaw, "Parallel random numbers: as easy as 1, 2, 3", SC 2011;
// the first is as published, the other two from memory of the same file.
test('Philox4x32-10 gives the published known answers', () => {
  const out = new Uint32Array(4);
  expect(hex(philox(out, 0, 0, 0, 0, 0, 0))).toBe('6627e8d5 e169c58d bc57ac4c 9b00dbd8');
  const ones = 0xffffffff;
  expect(hex(philox(out, ones, ones, ones, ones, ones, ones))).toBe('408f276d 41c83b0e a20bc7c6 6d5451fd');
  expect(hex(philox(out, 0x243f6a88, 0x85a308d3, 0x13198a2e, 0x03707344, 0xa4093822, 0x299f31d0))).toBe(
    'd16cfe09 94fdcceb 5001e420 24126ea1',
  );
});

test('the high half of a 32-bit product is that of exact integers', () => {
  let x = 0x12345678n;
  for (let k = 0; k < 2000; k++) {
    x = (x * 6364136223846793005n + 1442695040888963407n) & 0xffffffffffffffffn;
    const a = Number(x >> 32n);
    const b = Number(x & 0xffffffffn);
    expect(multiplyHigh(a, b) >>> 0).toBe(Number((BigInt(a) * BigInt(b)) >> 32n));
  }
});

test('streams with other names have other keys', () => {
  const keys = new Set<number>();
  for (let pass = 0; pass < 8; pass++)
    for (let field = 0; field < 8; field++) for (let r = 0; r < 8; r++) keys.add(streamKey(pass, field, r));
  expect(keys.size).toBe(512);
});

test('draws are uniform: a chi-square over bytes of each word stays within five standard deviations', () => {
  const out = new Uint32Array(4);
  const counts = Array.from({ length: 4 }, () => new Float64Array(256));
  const n = 40000;
  for (let k = 0; k < n; k++) {
    philox(out, k, k % 7, 3, 0, 1, 2);
    for (let w = 0; w < 4; w++) {
      const bin = (out[w] as number) >>> 24;
      (counts[w] as Float64Array)[bin] = ((counts[w] as Float64Array)[bin] as number) + 1;
    }
  }
  for (const count of counts) {
    const chi2 = count.reduce((sum, c) => sum + (c - n / 256) ** 2 / (n / 256), 0);
    // chi-square with 255 degrees of freedom: mean 255, standard deviation sqrt(510)
    expect(Math.abs(chi2 - 255)).toBeLessThan(5 * Math.sqrt(510));
  }
});
