import { philox } from '#src/base/philox.ts';

/** A seeded stream of uniform numbers in (0, 1), for tests. */
export function seededUniform(seed: number): () => number {
  const out = new Uint32Array(4);
  let n = 0;
  return () => {
    philox(out, n++, 0, 0, 0, seed, 0x7e57);
    return ((out[0] as number) + 0.5) / 4294967296;
  };
}

/** A seeded stream of standard normal numbers (Box and Muller 1958), for tests. */
export function seededNormal(seed: number): () => number {
  const uniform = seededUniform(seed);
  return () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
}
