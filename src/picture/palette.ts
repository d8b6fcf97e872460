/** Colours of the pictures, the grey-green of glass in section; contrast on paper and on glass is as the drawing rules ask. */

export interface Palette {
  readonly paper: string;
  readonly plotGround: string;
  readonly ink: string;
  readonly ink2: string;
  readonly ink3: string;
  readonly rule: string;
  readonly hair: string;
  /** Material, cut face. */
  readonly glass: string;
  /** Entry face. */
  readonly glassTop: string;
  readonly edit: string;
  readonly meets: string;
  readonly risk: string;
  readonly misses: string;
  /** The one matt tone of the cut surface in full light. */
  readonly matt: string;
}

export const LIGHT: Palette = {
  paper: '#f6f7f4',
  plotGround: '#ecefeb',
  ink: '#14201e',
  ink2: '#43504d',
  ink3: '#5f6b68',
  rule: '#7d8986',
  hair: '#cfd6d2',
  glass: '#becbc5',
  glassTop: '#d6ded9',
  edit: '#00615a',
  meets: '#1d5b92',
  risk: '#8a5a00',
  misses: '#b0243f',
  matt: '#f0f4f1',
};

export const DARK: Palette = {
  paper: '#121817',
  plotGround: '#1b2322',
  ink: '#e6ece9',
  ink2: '#b3beba',
  ink3: '#94a09c',
  rule: '#6b7975',
  hair: '#2c3735',
  glass: '#283432',
  glassTop: '#4a5a57',
  edit: '#72d3bf',
  meets: '#8fbdeb',
  risk: '#e6b450',
  misses: '#ff8f99',
  matt: '#d3dcd8',
};

/** Line weights after drawing practice, in drawing units (1/96 inch at print size). */
export const PEN = {
  cut: 1.7,
  limit: 2,
  dimension: 0.8,
  nominalDash: [7, 4],
  centreDash: [14, 3, 3, 3],
  toolDash: [4, 3],
  newToolDash: [1.2, 2],
  earlierToolDash: [7, 3, 1.5, 3],
} as const;

/** Red, green and blue 0..255 of "#rrggbb". Throws RangeError on anything else. */
export function rgbOf(hex: string): readonly [number, number, number] {
  const match = /^#([0-9a-f]{6})$/i.exec(hex);
  if (match === null) throw new RangeError(`a colour is written #rrggbb, got ${hex}`);
  const value = Number.parseInt(match[1] as string, 16);
  return [value >> 16, (value >> 8) & 255, value & 255];
}

/** "#rrggbb" of red, green and blue 0..255. */
export function hexOf(red: number, green: number, blue: number): string {
  const value = (Math.round(red) << 16) | (Math.round(green) << 8) | Math.round(blue);
  return `#${value.toString(16).padStart(6, '0')}`;
}
