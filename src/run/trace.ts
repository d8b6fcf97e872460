import type { Profile } from '#src/base/field.ts';
import { type ProfileTexture, profileTexture } from '#src/metrology/profile-texture.ts';
import { type Cut, stripProfile } from '#src/voxel/cut.ts';

/** Where across the strip parallel traces are taken; the middle one is the trace that is shown. */
const ROWS = [0.1, 0.3, 0.5, 0.7, 0.9] as const;
const MIDDLE = 2;
/** The fewer ones that are followed through the cut. */
const FOLLOWED = [0.17, 0.5, 0.83] as const;

/** Roughness of the floor: means over parallel traces, and the middle one whole. */
export interface FloorTexture {
  /** m */
  readonly ra: number;
  readonly rz: number;
  /** Heights above the trace's own mean (m). */
  readonly trace: Profile;
  readonly texture: ProfileTexture;
  /** Where the measurement departs from the standard, one sentence each. */
  readonly departures: readonly string[];
}

function rowsOf(cut: Cut, rows: readonly number[]): Profile[] {
  return rows.map((across) => stripProfile(cut, across)).filter((profile) => profile !== null);
}

const meanOf = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;

function aboutMean({ spacing, z }: Profile): Profile {
  const mean = meanOf(Array.from(z));
  return { spacing, z: z.map((height) => height - mean) };
}

/** Ra of the floor now (m), the mean over parallel traces; NaN without a strip. */
export function floorRa(cut: Cut): number {
  const rows = rowsOf(cut, FOLLOWED);
  if (rows.length === 0) return Number.NaN;
  return meanOf(rows.map((profile) => profileTexture(profile, { core: 'gaussian' }).parameters.ra));
}

/** The texture of the floor now; null without a strip. */
export function floorTexture(cut: Cut): FloorTexture | null {
  const rows = rowsOf(cut, ROWS);
  if (rows.length === 0) return null;
  const textures = rows.map((profile) => profileTexture(profile));
  const texture = textures[MIDDLE] as ProfileTexture;
  return {
    ra: meanOf(textures.map(({ parameters }) => parameters.ra)),
    rz: meanOf(textures.map(({ parameters }) => parameters.rz)),
    trace: aboutMean(rows[MIDDLE] as Profile),
    texture,
    departures: texture.departures.map(({ stated }) => stated),
  };
}
