import { gritsPerArea } from '#src/physics/population.ts';
import { balance, countHeights, type HeightCounts, sumOver } from './balance.ts';
import { smoothRate } from './book.ts';
import { contactAt, countNear, lowestFace, strideFor } from './contact.ts';
import { type Field, type KernelTables, OUT_OF_REACH } from './kernels/contract.ts';
import type { CutModel } from './model.ts';
import { ENDED, SCALAR } from './scalars.ts';
import { boundBlocks, highestReach } from './start.ts';
import type { CutState } from './state.ts';

/** Floor columns looked at when the load is balanced. */
const SAMPLED_COLUMNS = 40000;
/** Share of the set load below which the grains are said not to carry it. */
const LEAST_BORNE = 0.98;
/** Most times the face is lowered and the columns near it counted anew in one balance. */
const LOOKS = 50;
/** Advance of the tip within one step, in largest grains, past which it fell freely. */
const FREE_FALL = 0.3;
/** Share of the face that must be in contact for the strip to stand for its floor. */
const MOSTLY = 0.5;

/** The load set at the depth reached (N): less near an exit. A feed takes what it takes. */
export function loadNow(model: CutModel, state: CutState): number {
  const { drive, exit } = model.spec;
  const s = state.scalars;
  if (drive.kind === 'feed') return s[SCALAR.setLoad] as number;
  const left = exit ? exit.thickness + (s[SCALAR.floorMean] as number) : Number.POSITIVE_INFINITY;
  return exit && left <= exit.from ? drive.load * exit.loadShare : drive.load;
}

/** Sets the tip's height to where the grains carry the load, and reads what the face does there; likewise for the strip. */
export function balanceAll(model: CutModel, state: CutState): void {
  const s = state.scalars;
  if (model.spec.drive.kind === 'feed') readFloor(model, state);
  else if (model.partial) balancePart(model, state, loadNow(model, state));
  else balanceFloor(model, state, loadNow(model, state));
  if (!stripRuns(model, state) || !state.strip) return;
  const pressure = s[SCALAR.facePressure] as number;
  if (!(pressure > 0)) return;
  const counted = count(model, state, state.strip, state.stripCounts, s[SCALAR.stripFace] as number);
  const area = state.strip.dx * state.strip.dy * counted.faceColumns * counted.weight;
  const solved = balance(counted, state.means, {
    target: pressure,
    factor: (face) => loadFactor(model, state.strip as Field, face - counted.faceMean) / area,
    start: s[SCALAR.stripFace] as number,
    efold: s[SCALAR.stripEfold] as number,
  });
  s[SCALAR.stripFace] = solved.face;
  s[SCALAR.stripEfold] = solved.efold;
  s[SCALAR.stripMean] = counted.faceMean;
}

/** The strip is cut with the floor it stands for: only while most of the face is in contact. */
export function stripRuns(model: CutModel, state: CutState): boolean {
  if (!state.strip) return false;
  return !model.partial || (state.scalars[SCALAR.contactArea] as number) > MOSTLY * model.outline.area;
}

/** The tables of the outermost zone, which carry the edge as it is now. */
export const edgeTables = (state: CutState) => state.zones.zones[0] as KernelTables;

function count(model: CutModel, state: CutState, field: Field, counts: HeightCounts, face: number): HeightCounts {
  const tileZones = field === state.floor ? model.slurry?.tileZones : stripZones(model, state);
  if (field === state.floor && model.partial) {
    const { blocks } = state;
    return countNear(counts, field, edgeTables(state), state.means, {
      face,
      wanted: SAMPLED_COLUMNS,
      tileZones,
      blocks,
    });
  }
  const stride = strideFor(field.nx * field.ny, SAMPLED_COLUMNS);
  return countHeights(counts, field, edgeTables(state), state.means, { face, stride, tileZones });
}

/** The strip's tiles all lie in the middle zone of the face. */
function stripZones(model: CutModel, state: CutState): Uint8Array | undefined {
  if (!model.slurry || !state.strip) return undefined;
  const { tilesX, tilesY } = state.strip;
  return new Uint8Array(tilesX * tilesY).fill(state.means.flat >> 1);
}

/** Load (N) per summed impulse over sampled columns, at this mean gap. */
function loadFactor(model: CutModel, field: Field, gap: number): number {
  const { conditions } = model.spec;
  return conditions.frequency * gritsPerArea(conditions, gap) * field.dx * field.dy;
}

function balanceFloor(model: CutModel, state: CutState, target: number): void {
  const s = state.scalars;
  const counted = count(model, state, state.floor, state.counts, s[SCALAR.face] as number);
  const solved = balance(counted, state.means, {
    target,
    factor: (face) => loadFactor(model, state.floor, face - counted.faceMean),
    start: s[SCALAR.face] as number,
    efold: s[SCALAR.efold] as number,
  });
  const face = bornAt(model, state, counted, { face: solved.face, target });
  s[SCALAR.face] = face;
  if (face === solved.face) s[SCALAR.efold] = solved.efold;
  bookFace(model, state, counted, { face, gap: face - counted.faceMean });
}

/**
 * The face's height where the grits bear the load, and otherwise the lowest they are pressed to: the load they cannot carry
 * is not chased. Says so.
 */
function bornAt(
  model: CutModel,
  state: CutState,
  counted: HeightCounts,
  { face, target }: { face: number; target: number },
): number {
  const s = state.scalars;
  const { means } = state;
  const born =
    sumOver(counted, means, means.impulse, face).all * loadFactor(model, state.floor, face - counted.faceMean);
  const starved = s[SCALAR.starvedGap] as number;
  if (born >= LEAST_BORNE * target && starved === 0) return face;
  if ((s[SCALAR.stalled] as number) === 0) {
    s[SCALAR.stalled] = 1;
    s[SCALAR.stallDepth] = Math.max(0, -(s[SCALAR.floorMean] as number));
  }
  return lowestFace(counted, means, Math.max(face, counted.faceMean), starved > 0 ? starved : model.lowestGap);
}

/**
 * The balance of a face of which only part may be in contact. Where that is too little to bear the load, the face stands at
 * the lowest gap grit is pressed to and the load is not reached; what comes near as it is lowered is counted anew.
 */
function balancePart(model: CutModel, state: CutState, target: number): void {
  const s = state.scalars;
  const { means } = state;
  const { largest } = means;
  let face = s[SCALAR.face] as number;
  for (let look = 0; look < LOOKS; look++) {
    const counted = count(model, state, state.floor, state.counts, face);
    const solved = balance(counted, means, {
      target,
      factor: (at) => loadFactor(model, state.floor, contactAt(counted, means, at).gap),
      start: face,
      efold: s[SCALAR.efold] as number,
    });
    if (counted.faceColumns === 0 && contactAt(counted, means, face).columns === 0) {
      if (!fallTo(model, state)) return;
      face = s[SCALAR.face] as number;
      continue;
    }
    const lowest = (s[SCALAR.starvedGap] as number) || model.lowestGap;
    const next = lowestFace(counted, means, Math.max(solved.face, face - largest), lowest);
    if (next === solved.face) s[SCALAR.efold] = solved.efold;
    const lowered = face - next;
    face = next;
    if (lowered > largest / 2) continue;
    s[SCALAR.face] = face;
    bookFace(model, state, counted, { face, gap: contactAt(counted, means, face).gap });
    bookAdvance(state, largest);
    return;
  }
  throw new RangeError('the tool finds nothing under its face to rest on');
}

/** Lets the tip fall to what stands next in its way; false, and the cut over, where nothing does. */
function fallTo(model: CutModel, state: CutState): boolean {
  const s = state.scalars;
  boundBlocks(state.floor, edgeTables(state), s[SCALAR.face] as number);
  const next = highestReach(state.floor);
  if (next <= OUT_OF_REACH) {
    s[SCALAR.ended] = ENDED.through;
    return false;
  }
  s[SCALAR.face] = Math.min(s[SCALAR.face] as number, next + model.startGap);
  return true;
}

/** Takes the advance of the tip since the last balance into the rate, unless it fell freely or the slurry was renewed. */
function bookAdvance(state: CutState, largest: number): void {
  const s = state.scalars;
  const lowered = (s[SCALAR.balancedFace] as number) - (s[SCALAR.face] as number);
  if ((s[SCALAR.advanceCounts] as number) === 1 && lowered < FREE_FALL * largest) {
    smoothRate(state, lowered, s[SCALAR.lastCycles] as number);
  }
  s[SCALAR.balancedFace] = s[SCALAR.face] as number;
  s[SCALAR.advanceCounts] = 1;
}

/** With a set feed the face is where it is; the load is what it takes. */
function readFloor(model: CutModel, state: CutState): void {
  const s = state.scalars;
  const face = s[SCALAR.face] as number;
  const counted = count(model, state, state.floor, state.counts, face);
  const { means } = state;
  const gap = model.partial ? contactAt(counted, means, face).gap : face - counted.faceMean;
  const { drive, conditions } = model.spec;
  if (model.partial && drive.kind === 'feed') s[SCALAR.ratePerCycle] = drive.feed / conditions.frequency;
  bookFace(model, state, counted, { face, gap });
}

function bookFace(
  model: CutModel,
  state: CutState,
  counted: HeightCounts,
  { face, gap }: { face: number; gap: number },
): void {
  const s = state.scalars;
  const { means } = state;
  const load = sumOver(counted, means, means.impulse, face);
  if (model.partial) bookContact(model, state, counted, face);
  else s[SCALAR.floorMean] = counted.faceMean;
  s[SCALAR.toolDents] = sumOver(counted, means, means.toolDent, face).all;
  const factor = Number.isFinite(gap) ? loadFactor(model, state.floor, gap) : 0;
  const { drive } = model.spec;
  s[SCALAR.setLoad] = drive.kind === 'load' ? loadNow(model, state) : load.all * factor;
  const flat = model.partial ? flatInContact(counted, state, face) : counted.faceColumns * counted.weight;
  const sampled = flat * state.floor.dx * state.floor.dy;
  s[SCALAR.facePressure] = sampled > 0 ? (load.flat * factor) / sampled : 0;
}

/** Columns of the flat face in contact, those counted for what they stand for. */
function flatInContact(counted: HeightCounts, { means }: CutState, face: number): number {
  return contactAt(counted, { ...means, zones: means.zones.subarray(0, means.flat) }, face).columns;
}

/**
 * Area in contact and depth of the tip of a face in partial contact. At its fringe columns come into reach that are not cut
 * yet, so that the smaller the contact, the more the floor under the tip is told by the hits instead of by the columns.
 */
function bookContact(model: CutModel, state: CutState, counted: HeightCounts, face: number): void {
  const s = state.scalars;
  const { columns, gap, struck } = contactAt(counted, state.means, face);
  const area = Math.min(model.outline.area, columns * state.floor.dx * state.floor.dy);
  s[SCALAR.contactArea] = area;
  if (!Number.isFinite(gap)) return;
  s[SCALAR.contactGap] = gap;
  s[SCALAR.floorMean] = Math.min(0, face - struck - (area / model.outline.area) * (gap - struck));
}
