import { nominalSizes, type OutlineSpec, type PathSpec } from '#src/base/outline.ts';
import type { PathLoop, PathPiece } from '#src/base/outline-path.ts';
import { METRES_PER_MILLIMETRE, MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import { formatNumber, roundSignificant } from '../numbers.ts';
import type { OutlineFile, SimpleOutlineFile } from './schema.ts';

/** An outline given by its sizes, in SI. A corner radius left out is a sharp corner. */
export function outlineSpecOf(file: SimpleOutlineFile): Exclude<OutlineSpec, PathSpec> {
  const m = METRES_PER_MILLIMETRE;
  switch (file.kind) {
    case 'circle':
      return { kind: 'circle', diameter: file.diameterMm * m };
    case 'rectangle':
      return {
        kind: 'rectangle',
        length: file.lengthMm * m,
        width: file.widthMm * m,
        cornerRadius: (file.cornerRadiusMm ?? 0) * m,
      };
    case 'slot':
      return { kind: 'slot', length: file.lengthMm * m, width: file.widthMm * m };
    case 'regularPolygon':
      return {
        kind: 'regularPolygon',
        sides: file.sides,
        acrossFlats: file.acrossFlatsMm * m,
        cornerRadius: (file.cornerRadiusMm ?? 0) * m,
      };
    case 'ring':
      return { kind: 'ring', outerDiameter: file.outerDiameterMm * m, innerDiameter: file.innerDiameterMm * m };
  }
}

const mm = (metres: number) => roundSignificant(metres * MILLIMETRES_PER_METRE, 9);

/** An outline in SI as a job file has it (mm, nine digits); loops become path data. */
export function outlineFileOf(spec: OutlineSpec): OutlineFile {
  switch (spec.kind) {
    case 'circle':
      return { kind: 'circle', diameterMm: mm(spec.diameter) };
    case 'rectangle':
      return {
        kind: 'rectangle',
        lengthMm: mm(spec.length),
        widthMm: mm(spec.width),
        cornerRadiusMm: mm(spec.cornerRadius),
      };
    case 'slot':
      return { kind: 'slot', lengthMm: mm(spec.length), widthMm: mm(spec.width) };
    case 'regularPolygon':
      return {
        kind: 'regularPolygon',
        sides: spec.sides,
        acrossFlatsMm: mm(spec.acrossFlats),
        cornerRadiusMm: mm(spec.cornerRadius),
      };
    case 'ring':
      return { kind: 'ring', outerDiameterMm: mm(spec.outerDiameter), innerDiameterMm: mm(spec.innerDiameter) };
    case 'path':
      return { kind: 'path', svgPath: spec.loops.map(pathData).join(' ') };
  }
}

/** One loop as path data in millimetres, y downward. */
function pathData({ x, y, pieces }: PathLoop): string {
  const at = (px: number, py: number) => `${formatNumber(px * 1e3, 9)} ${formatNumber(-py * 1e3, 9)}`;
  let from: { readonly x: number; readonly y: number } = { x, y };
  const drawn = pieces.map((piece: PathPiece) => {
    const chord = Math.hypot(piece.x - from.x, piece.y - from.y);
    from = piece;
    if (piece.kind === 'line' || piece.bulge === 0) return `L${at(piece.x, piece.y)}`;
    const { bulge } = piece;
    const radius = formatNumber((1e3 * chord * (1 + bulge * bulge)) / (4 * Math.abs(bulge)), 9);
    return `A${radius} ${radius} 0 ${Math.abs(bulge) > 1 ? 1 : 0} ${bulge > 0 ? 0 : 1} ${at(piece.x, piece.y)}`;
  });
  return `M${at(x, y)} ${drawn.join(' ')}Z`;
}

/** An outline's sizes as a message shows them: "rectangle 4 x 2.5 mm". */
export function outlineText(spec: OutlineSpec): string {
  const name = spec.kind === 'path' ? 'outline' : spec.kind;
  const sizes = nominalSizes(spec).map((size) => formatNumber(size * MILLIMETRES_PER_METRE, 5));
  return `${name} ${sizes.join(' x ')} mm`;
}

/** Where the sizes of one outline contradict each other: field, value, what is allowed, why and what to do. */
export function outlineFaults(
  file: SimpleOutlineFile,
): { field: string; value: number; allowed: string; message: string }[] {
  const faults: { field: string; value: number; allowed: string; message: string }[] = [];
  const corner = (radiusMm: number | undefined, halfMm: number) => {
    if (radiusMm === undefined || radiusMm <= halfMm) return;
    const allowed = `0 to ${roundSignificant(halfMm, 6)} mm`;
    const message = 'The corner radius is more than half of the side. Make it smaller, or the side longer.';
    faults.push({ field: 'cornerRadiusMm', value: radiusMm, allowed, message });
  };
  if (file.kind === 'rectangle') corner(file.cornerRadiusMm, Math.min(file.lengthMm, file.widthMm) / 2);
  if (file.kind === 'regularPolygon') corner(file.cornerRadiusMm, file.acrossFlatsMm / 2);
  if (file.kind === 'ring' && file.innerDiameterMm >= file.outerDiameterMm) {
    const allowed = `less than outerDiameterMm, ${file.outerDiameterMm} mm`;
    const message = 'The core is as wide as the ring. Make innerDiameterMm the smaller of the two.';
    faults.push({ field: 'innerDiameterMm', value: file.innerDiameterMm, allowed, message });
  }
  if (file.kind === 'slot' && file.widthMm > file.lengthMm) {
    const allowed = `at most lengthMm, ${file.lengthMm} mm`;
    const message = 'The slot is wider than long. A slot is long in x; swap the two.';
    faults.push({ field: 'widthMm', value: file.widthMm, allowed, message });
  }
  return faults;
}
