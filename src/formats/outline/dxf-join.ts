import type { PathLoop, PathPiece } from '#src/base/outline.ts';
import { reverseLoop } from '#src/base/outline-path.ts';
import type { Chain } from './dxf-entities.ts';

/** Chains joined into loops, and places where more than two ends meet. */
export interface Joined {
  readonly loops: readonly PathLoop[];
  readonly branches: readonly { readonly x: number; readonly y: number; readonly ends: number }[];
}

/** One end of a chain: chains are numbered, their starts are even and their ends odd. */
interface End {
  readonly x: number;
  readonly y: number;
  readonly id: number;
}

function endsOf(chains: readonly Chain[]): End[] {
  return chains.flatMap((chain, k) => {
    const last = chain.pieces[chain.pieces.length - 1] as PathPiece;
    return [
      { x: chain.x, y: chain.y, id: 2 * k },
      { x: last.x, y: last.y, id: 2 * k + 1 },
    ];
  });
}

/** Half of the cells around one: the other half see it from their side. */
const AROUND = Array.from({ length: 25 }, (_, k) => [Math.floor(k / 5) - 2, (k % 5) - 2] as const).filter(
  ([i, j]) => i > 0 || (i === 0 && j > 0),
);

/**
 * Ends within the tolerance of each other, in groups. Ends in one cell of half the tolerance are near enough by its size, so
 * that the first stands for them; cells whose firsts are near enough go together.
 */
function groupEnds(ends: readonly End[], tolerance: number): End[][] {
  const numberOf = new Map<string, number>();
  const cells: { readonly i: number; readonly j: number; readonly first: End; readonly members: End[] }[] = [];
  for (const end of ends) {
    const [i, j] = [Math.floor((2 * end.x) / tolerance), Math.floor((2 * end.y) / tolerance)] as const;
    const known = numberOf.get(`${i},${j}`);
    if (known !== undefined) {
      (cells[known] as (typeof cells)[0]).members.push(end);
      continue;
    }
    numberOf.set(`${i},${j}`, cells.length);
    cells.push({ i, j, first: end, members: [end] });
  }
  const parent = Int32Array.from(cells, (_, k) => k);
  const root = (k: number): number => {
    let top = k;
    while (parent[top] !== top) {
      parent[top] = parent[parent[top] as number] as number;
      top = parent[top] as number;
    }
    return top;
  };
  cells.forEach(({ i, j, first }, k) => {
    for (const [di, dj] of AROUND) {
      const other = numberOf.get(`${i + di},${j + dj}`);
      if (other === undefined) continue;
      const its = (cells[other] as (typeof cells)[0]).first;
      if (Math.hypot(its.x - first.x, its.y - first.y) <= tolerance) parent[root(k)] = root(other);
    }
  });
  const groups = new Map<number, End[]>();
  cells.forEach(({ members }, k) => {
    const gathered = groups.get(root(k));
    if (gathered === undefined) groups.set(root(k), members);
    else for (const member of members) gathered.push(member);
  });
  return [...groups.values()];
}

/** Joins chains whose partners at each end are known, from one end on; every chain walked is marked as used. */
function walk(first: number, partner: Int32Array, chains: readonly Chain[], used: Uint8Array): PathLoop {
  const pieces: PathPiece[] = [];
  const entry = chains[first >> 1] as Chain;
  const begin = (first & 1) === 0 ? entry : (entry.pieces[entry.pieces.length - 1] as PathPiece);
  for (let id = first; id >= 0 && used[id >> 1] === 0; id = partner[id ^ 1] as number) {
    used[id >> 1] = 1;
    const chain = chains[id >> 1] as Chain;
    const run = (id & 1) === 0 ? chain.pieces : reversedPieces(chain);
    for (const piece of run) pieces.push(piece);
  }
  return { x: begin.x, y: begin.y, pieces };
}

/** Pieces of a chain from its end to its start. */
function reversedPieces(chain: Chain): readonly PathPiece[] {
  return reverseLoop({ x: chain.x, y: chain.y, pieces: chain.pieces }).pieces;
}

/**
 * Joins chains end to end into loops, whatever their directions, where two ends lie within `tolerance` of each other (in the
 * chains' own unit). What does not close comes back as an open loop, its gap between its last end and its start.
 */
export function joinChains(chains: readonly Chain[], tolerance: number): Joined {
  const whole = chains.filter(({ closed }) => closed);
  const open = chains.filter((chain) => !chain.closed && !isPoint(chain, tolerance));
  const groups = groupEnds(endsOf(open), tolerance);
  const branches = groups.filter((group) => group.length > 2);
  const partner = new Int32Array(2 * open.length).fill(-1);
  for (const group of groups) {
    if (group.length !== 2) continue;
    const [a, b] = group as [End, End];
    partner[a.id] = b.id;
    partner[b.id] = a.id;
  }
  const used = new Uint8Array(open.length);
  const loops = whole.map(({ x, y, pieces }): PathLoop => ({ x, y, pieces }));
  // from loose ends first, so that what is open is walked once and whole
  for (let id = 0; id < 2 * open.length; id++) {
    if (partner[id] === -1 && used[id >> 1] === 0) loops.push(walk(id, partner, open, used));
  }
  for (let k = 0; k < open.length; k++) if (used[k] === 0) loops.push(walk(2 * k, partner, open, used));
  return { loops, branches: branches.map((group) => ({ x: group[0].x, y: group[0].y, ends: group.length })) };
}

/** A single line shorter than the tolerance: its ends are one point and it joins nothing. */
function isPoint({ x, y, pieces }: Chain, tolerance: number): boolean {
  const [piece] = pieces;
  return pieces.length === 1 && piece?.kind === 'line' && Math.hypot(piece.x - x, piece.y - y) <= tolerance;
}
