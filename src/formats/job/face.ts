import type { HeightField } from '#src/base/field.ts';
import { DEGREES_PER_RADIAN, METRES_PER_MILLIMETRE } from '#src/base/units.ts';
import type { Bore } from '#src/physics/slurry/grid.ts';
import type { ToolFace } from '#src/physics/tool-face.ts';
import type { OutlineOrigin } from '../outline/finish.ts';
import { decodePng } from '../png.ts';
import type { z } from '../zod.ts';
import { attachmentOf } from './attachments.ts';
import { type Desk, type PartialJob, refuse } from './desk.ts';
import { readOutline } from './outline-input.ts';
import { boresSchema, faceSchema } from './schema-sections.ts';

type ReliefFile = Extract<z.infer<typeof faceSchema>, { kind: 'relief' }>;

/** Largest picture of a relief: bytes, and pixels along a side. */
const LARGEST_PNG = 32_000_000;
const MOST_PIXELS = 2048;
const PNG_ALLOWED = `an opaque grey PNG of 8 bits, 2 x 2 to ${MOST_PIXELS} x ${MOST_PIXELS} pixels`;
/** Difference of colour channels that still counts as grey. */
const GREY = 2;

/** Size a PNG claims to have, read before anything is unpacked; undefined when it is no PNG. */
function claimedSize(bytes: Uint8Array): { width: number; height: number } | undefined {
  if (bytes.length < 33 || bytes[0] !== 0x89 || String.fromCharCode(...bytes.subarray(1, 4)) !== 'PNG')
    return undefined;
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  return { width: view.getUint32(16), height: view.getUint32(20) };
}

/** Grey of every pixel, 0 to 255, row after row from the top; a sentence saying why not. */
function greysOf(bytes: Uint8Array): { width: number; height: number; grey: Uint8Array } | string {
  const claimed = bytes.length > LARGEST_PNG ? undefined : claimedSize(bytes);
  if (claimed === undefined) return 'This is not a PNG. Save the picture as one.';
  const { width, height } = claimed;
  if (Math.min(width, height) < 2 || Math.max(width, height) > MOST_PIXELS) {
    return `The picture has ${width} x ${height} pixels. Scale it.`;
  }
  try {
    const { data } = decodePng(bytes);
    const grey = new Uint8Array(width * height);
    for (let n = 0; n < grey.length; n++) {
      const [r, g, b, a] = [data[4 * n] ?? 0, data[4 * n + 1] ?? 0, data[4 * n + 2] ?? 0, data[4 * n + 3] ?? 0];
      if (Math.max(r, g, b) - Math.min(r, g, b) > GREY) return 'The picture has colours. Save it in greys.';
      if (a !== 255) return 'The picture is see-through in places. Save it opaque.';
      grey[n] = g;
    }
    return { width, height, grey };
  } catch {
    return 'This PNG is damaged, or not of 8 bits a channel. Save it again as an 8 bit grey PNG.';
  }
}

function reliefOf(desk: Desk, file: ReliefFile): ToolFace | undefined {
  const bytes = attachmentOf(desk, 'tool.face.file', file.file);
  if (!bytes) return undefined;
  const read = greysOf(bytes);
  if (typeof read === 'string') return refuse(desk, 'tool.face.file', file.file, PNG_ALLOWED, read);
  const { width: nx, height: ny, grey } = read;
  const dx = (file.lengthMm * METRES_PER_MILLIMETRE) / nx;
  const dy = (file.widthMm * METRES_PER_MILLIMETRE) / ny;
  const z = new Float32Array(nx * ny);
  const scale = (file.heightMm * METRES_PER_MILLIMETRE) / 255;
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx; i++) z[j * nx + i] = (grey[(ny - 1 - j) * nx + i] as number) * scale;
  }
  const heights: HeightField = { nx, ny, dx, dy, x0: (-(nx - 1) * dx) / 2, y0: (-(ny - 1) * dy) / 2, z };
  return { kind: 'relief', heights };
}

/**
 * The form of the tool's face in SI, flat where the job says nothing; undefined when it is not whole or refused.
 * @param origin where drawn outlines have their origin
 */
export function faceOf(desk: Desk, tool: NonNullable<PartialJob['tool']>, origin: OutlineOrigin): ToolFace | undefined {
  if (tool.face === undefined) return { kind: 'flat' };
  const whole = faceSchema.safeParse(tool.face);
  if (!whole.success) return undefined;
  const { data } = whole;
  switch (data.kind) {
    case 'flat':
      return { kind: 'flat' };
    case 'stepped': {
      const pilot = readOutline(desk, 'tool.face.pilot', data.pilot, origin);
      return pilot && { kind: 'stepped', pilot: pilot.outline.spec, step: data.stepMm * METRES_PER_MILLIMETRE };
    }
    case 'cone':
      return { kind: 'cone', angle: data.angleDeg / DEGREES_PER_RADIAN };
    case 'sphere':
      return { kind: 'sphere', radius: data.radiusMm * METRES_PER_MILLIMETRE };
    case 'relief':
      return reliefOf(desk, data);
  }
}

/** The slurry bores in SI; none where the job says nothing, undefined when they are not whole. */
export function boresOf(tool: NonNullable<PartialJob['tool']>): Bore[] | undefined {
  if (tool.bores === undefined) return [];
  const whole = boresSchema.safeParse(tool.bores);
  return whole.data?.map(({ xMm, yMm, diameterMm }) => ({
    x: xMm * METRES_PER_MILLIMETRE,
    y: yMm * METRES_PER_MILLIMETRE,
    radius: (diameterMm * METRES_PER_MILLIMETRE) / 2,
  }));
}
