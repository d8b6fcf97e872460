import { toolSideWear } from '#src/physics/tool-wear.ts';
import type { WallLaw } from '#src/physics/wall.ts';
import { wallRate } from '#src/physics/wall.ts';

const GAPS = 64;

/** A function of the gap, tabulated and held at its ends. */
function tabulated(f: (gap: number) => number, from: number, to: number): (gap: number) => number {
  const values = Array.from({ length: GAPS + 1 }, (_, i) => f(from + ((to - from) * i) / GAPS));
  return (gap) => {
    const x = Math.max(0, Math.min(GAPS - 1e-9, ((gap - from) / (to - from)) * GAPS));
    const i = Math.floor(x);
    return (values[i] as number) + (x - i) * ((values[i + 1] as number) - (values[i] as number));
  };
}

/**
 * Wall and side of the tool followed together, point by point, from the entry down: every open row of wall wears at its
 * own gap, every point of the tool's side wears at the gap it passes and comes down to the face as that wears back.
 * Returns how far the side stands in at the edge at the end (m).
 */
export function marchSide(
  law: WallLaw,
  { sinkRate, faceRate }: { sinkRate: number; faceRate: number },
  depth: number,
  steps = 800,
): number {
  const h = depth / steps;
  const wear = faceRate / sinkRate;
  const wall = tabulated((gap) => wallRate(law, gap) / sinkRate, 0.6 * law.foot, law.widest);
  const tool = tabulated((gap) => toolSideWear(law, gap) / faceRate, 0.6 * law.foot, law.widest);
  const points = Math.ceil(steps * (1 + wear)) * 3;
  const ds = (depth * (1 + wear) * 1.01) / points;
  const side = new Float64Array(points + 2);
  const rows = new Float64Array(steps);
  let lost = 0;
  const sideAt = (height: number) => {
    const x = (height + lost) / ds;
    const i = Math.floor(x);
    return (side[i] as number) + (x - i) * ((side[i + 1] as number) - (side[i] as number));
  };
  for (let j = 0; j < steps; j++) {
    const z = (j + 1) * h;
    lost = wear * z;
    rows[j] = law.foot - sideAt(0);
    for (let q = 0; q <= j; q++)
      rows[q] = (rows[q] as number) + wall((rows[q] as number) + sideAt(z - (q + 0.5) * h)) * h;
    for (let i = Math.ceil(lost / ds); i * ds - lost < z && i <= points; i++) {
      const q = Math.min(j, Math.max(0, Math.floor((z - (i * ds - lost)) / h)));
      side[i] = (side[i] as number) + tool((rows[q] as number) + (side[i] as number)) * wear * h;
    }
  }
  return sideAt(0);
}
