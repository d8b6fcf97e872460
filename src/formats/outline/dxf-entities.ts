import { PI, sinCos } from '#src/base/math.ts';
import type { PathPiece } from '#src/base/outline.ts';
import { PATH_LIMITS } from '#src/base/outline-check.ts';
import { segmentPieces } from '#src/base/outline-path.ts';
import { arc } from '#src/base/outline-segment.ts';
import { type Group, groupNumber } from './dxf-groups.ts';
import { Refusal } from './problems.ts';

/** Pieces end to end from (x, y), in drawing units; closed ones end at their start by right. */
export interface Chain {
  readonly x: number;
  readonly y: number;
  readonly pieces: readonly PathPiece[];
  readonly closed: boolean;
}

/** What a drawing holds that matters here. */
export interface DxfDrawing {
  /** $INSUNITS; undefined when the header does not say. */
  readonly units: number | undefined;
  readonly chains: readonly Chain[];
  /** Entities passed over, by kind. */
  readonly ignored: ReadonlyMap<string, number>;
}

/** Group codes read of each kind of entity; besides them 67 (paper space) and 210 to 230 (which way it faces). */
const READ: Readonly<Record<string, readonly number[]>> = {
  LINE: [10, 20, 11, 21],
  CIRCLE: [10, 20, 40],
  ARC: [10, 20, 40, 50, 51],
  LWPOLYLINE: [10, 20, 42, 70],
};
const COMMON = [67, 210, 220, 230];
/** Most groups of one entity that is no polyline, repeated ones included. */
const MOST_GROUPS = 100;
/** Most different kinds listed; the rest go together. */
const MOST_KINDS = 40;

interface Entity {
  readonly kind: string;
  readonly line: number;
  /** Group 8; DXF's default layer without one. */
  layer: string;
  readonly groups: { readonly code: number; readonly number: number }[];
}

/** The last value of a code; the default when it is missing. @throws Refusal when there is neither */
function numberOf(entity: Entity, code: number, otherwise?: number): number {
  const found = entity.groups.findLast((group) => group.code === code)?.number ?? otherwise;
  if (found !== undefined) return found;
  throw new Refusal(
    `This ${entity.kind} lacks group ${code}. Draw it again.`,
    `${entity.kind} with groups ${(READ[entity.kind] as readonly number[]).join(', ')}`,
    { line: entity.line, column: 1 },
  );
}

/** 1 when an entity faces up, -1 when it faces down and its x is turned over. @throws Refusal when it stands askew */
function facing(entity: Entity): number {
  const [nx, ny, nz] = [numberOf(entity, 210, 0), numberOf(entity, 220, 0), numberOf(entity, 230, 1)] as const;
  const flat = Math.abs(nx) < 1e-9 && Math.abs(ny) < 1e-9 && nz !== 0;
  if (flat) return nz > 0 ? 1 : -1;
  const message = `This ${entity.kind} does not lie in the plane of the drawing. Draw it flat.`;
  throw new Refusal(message, 'extrusion along z', { line: entity.line, column: 1 });
}

function lineChain(entity: Entity): Chain {
  const [x, y] = [numberOf(entity, 10), numberOf(entity, 20)] as const;
  return { x, y, pieces: [{ kind: 'line', x: numberOf(entity, 11), y: numberOf(entity, 21) }], closed: false };
}

/** A circle or an arc from `startDeg` to `endDeg`, counter-clockwise as it faces. */
function arcChain(entity: Entity, startDeg: number, endDeg: number): Chain {
  const face = facing(entity);
  const radius = numberOf(entity, 40);
  if (!(radius > 0)) {
    const place = { line: entity.line, column: 1 };
    throw new Refusal(`This ${entity.kind} has no radius: ${radius}. Draw it again.`, 'radii above 0', place);
  }
  let turn = (endDeg - startDeg) % 360;
  if (turn <= 0) turn += 360;
  // seen from the other side, an angle t is pi - t and turns the other way
  const start = (face > 0 ? startDeg % 360 : 180 - (startDeg % 360)) * (PI / 180);
  const sweep = face * turn * (PI / 180);
  const segment = arc(face * numberOf(entity, 10), numberOf(entity, 20), radius, start, sweep);
  const { sin, cos } = sinCos(start);
  const from = { x: segment.cx + radius * cos, y: segment.cy + radius * sin };
  return { ...from, pieces: segmentPieces(segment), closed: turn === 360 };
}

function polylineChain(entity: Entity): Chain | undefined {
  const face = facing(entity);
  const vertices: { x: number; y: number; bulge: number }[] = [];
  for (const { code, number } of entity.groups) {
    const last = vertices[vertices.length - 1];
    if (code === 10) vertices.push({ x: face * number, y: Number.NaN, bulge: 0 });
    else if (code === 20 && last) last.y = number;
    else if (code === 42 && last) last.bulge = face * number;
  }
  if (vertices.some(({ y }) => Number.isNaN(y))) numberOf({ ...entity, groups: [] }, 20);
  const [first] = vertices;
  if (first === undefined || vertices.length < 2) return undefined;
  const closed = (numberOf(entity, 70, 0) & 1) === 1;
  const ends = closed ? [...vertices.slice(1), first] : vertices.slice(1);
  const pieces = ends.map(({ x, y }, k): PathPiece => {
    const { bulge } = vertices[k] as typeof first;
    return bulge === 0 ? { kind: 'line', x, y } : { kind: 'arc', x, y, bulge };
  });
  return { x: first.x, y: first.y, pieces, closed };
}

function chainOf(entity: Entity): Chain | undefined {
  switch (entity.kind) {
    case 'LINE':
      return lineChain(entity);
    case 'CIRCLE':
      return arcChain(entity, 0, 360);
    case 'ARC':
      return arcChain(entity, numberOf(entity, 50), numberOf(entity, 51));
    default:
      return polylineChain(entity);
  }
}

function tooMany(line: number): Refusal {
  const allowed = `at most ${PATH_LIMITS.segments} lines and arcs`;
  return new Refusal('The drawing has too many pieces. Save the outline alone, or simplify it.', allowed, {
    line,
    column: 1,
  });
}

/** What is gathered while the groups go by. */
class Gathering {
  units: number | undefined;
  readonly chains: Chain[] = [];
  readonly ignored = new Map<string, number>();
  readonly #layer: string | undefined;
  #pieces = 0;
  #entity: Entity | undefined;

  constructor(layer: string | undefined) {
    this.#layer = layer?.toUpperCase();
  }

  /** The entity in hand is complete. */
  end(): void {
    const entity = this.#entity;
    this.#entity = undefined;
    if (entity === undefined) return;
    if (this.#layer !== undefined && entity.layer.toUpperCase() !== this.#layer) {
      this.ignore(`${entity.kind} on other layers`);
      return;
    }
    const chain = numberOf(entity, 67, 0) === 0 ? chainOf(entity) : 'paper';
    if (chain === 'paper') this.ignore(`${entity.kind} in paper space`);
    else if (chain === undefined) this.ignore(`${entity.kind} without length`);
    else this.add(chain, entity.line);
  }

  add(chain: Chain, line: number): void {
    this.#pieces += chain.pieces.length;
    if (this.#pieces > PATH_LIMITS.segments) throw tooMany(line);
    this.chains.push(chain);
  }

  /** An entity starts. */
  begin({ value, line }: Group): void {
    this.end();
    if (Object.hasOwn(READ, value)) this.#entity = { kind: value, line, layer: '0', groups: [] };
    else this.ignore(value);
  }

  ignore(kind: string): void {
    const short = kind.replaceAll(/[^\w ]/g, '?').slice(0, 40);
    const name = this.ignored.has(short) || this.ignored.size < MOST_KINDS ? short : 'other kinds';
    this.ignored.set(name, (this.ignored.get(name) ?? 0) + 1);
  }

  /** A group of the entity in hand. */
  take(group: Group): void {
    const entity = this.#entity;
    if (entity === undefined) return;
    if (group.code === 8) entity.layer = group.value;
    if (!(READ[entity.kind] as readonly number[]).includes(group.code) && !COMMON.includes(group.code)) return;
    const most = entity.kind === 'LWPOLYLINE' ? 4 * PATH_LIMITS.segments : MOST_GROUPS;
    if (entity.groups.length >= most) throw tooMany(group.line);
    entity.groups.push({ code: group.code, number: groupNumber(group) });
  }
}

/**
 * Reads the header's unit and the entities of a drawing. Blocks are not read, so an INSERT is one entity passed over, however
 * much it stands for.
 * @param layer the only layer that counts, whatever its case; all of them if left out
 * @throws Refusal
 */
export function readDrawing(groups: Iterable<Group>, layer?: string): DxfDrawing {
  const gathering = new Gathering(layer);
  let section = '';
  let variable = '';
  let opening = false;
  let found = false;
  for (const group of groups) {
    if (group.code === 0) {
      opening = group.value === 'SECTION';
      if (opening || group.value === 'ENDSEC') {
        gathering.end();
        section = '';
      } else if (section === 'ENTITIES') gathering.begin(group);
    } else if (opening && group.code === 2) {
      section = group.value;
      opening = false;
      found ||= section === 'ENTITIES';
    } else if (section === 'HEADER') {
      if (group.code === 9) variable = group.value;
      else if (variable === '$INSUNITS' && group.code === 70) gathering.units = groupNumber(group);
    } else if (section === 'ENTITIES') gathering.take(group);
  }
  gathering.end();
  if (!found) throw new Refusal('This DXF has no ENTITIES section. Save the drawing again.', 'a drawing with entities');
  return gathering;
}
