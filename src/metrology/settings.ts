import { METRES_PER_MILLIMETRE as MM, METRES_PER_MICROMETRE as UM } from '#src/base/units.ts';

/** Setting classes of ISO 21920-3. */
export type SettingClass = 'Sc1' | 'Sc2' | 'Sc3' | 'Sc4' | 'Sc5';

export interface Setting {
  readonly class: SettingClass;
  /** Largest Ra and Rz of the class (m); Infinity for the last. */
  readonly raLimit: number;
  readonly rzLimit: number;
  /** Nesting index of the L-filter (m). */
  readonly lFilter: number;
  /** Section length and evaluation length (m). */
  readonly sectionLength: number;
  readonly evaluationLength: number;
  /** Nesting index of the S-filter (m). */
  readonly sFilter: number;
  /** Largest spacing of points (m). */
  readonly largestSpacing: number;
}

const rows: readonly (readonly [SettingClass, number, number, number, number, number])[] = [
  ['Sc1', 0.02, 0.16, 0.08, 2.5, 0.5],
  ['Sc2', 0.1, 0.8, 0.25, 2.5, 0.5],
  ['Sc3', 2, 16, 0.8, 2.5, 0.5],
  ['Sc4', 10, 80, 2.5, 8, 1.5],
  ['Sc5', Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, 8, 25, 5],
];

/**
 * ISO 21920-3: Ra and Rz limits, L-filter and lengths from a published extract; S-filter and spacing from memory. Five
 * sections make the evaluation length.
 */
export const SETTINGS: readonly Setting[] = rows.map(([name, ra, rz, section, sFilter, spacing]) => ({
  class: name,
  raLimit: ra * UM,
  rzLimit: rz * UM,
  lFilter: section * MM,
  sectionLength: section * MM,
  evaluationLength: 5 * section * MM,
  sFilter: sFilter * UM,
  largestSpacing: spacing * UM,
}));

export function settingOf(name: SettingClass): Setting {
  return SETTINGS.find((setting) => setting.class === name) as Setting;
}

/** The class an Ra (m) belongs to: the first whose limit it does not exceed. @throws RangeError for a negative or NaN. */
export function settingForRa(ra: number): Setting {
  if (!(ra >= 0)) throw new RangeError(`no setting class for an Ra of ${ra} m`);
  return SETTINGS.find((setting) => ra <= setting.raLimit) as Setting;
}

/** Where a measurement left the standard, one entry each; `stated` is the sentence to print beside the figure. */
export interface Departure {
  readonly kind: 'sections' | 'short' | 'spacing' | 'sFilter' | 'class' | 'core';
  readonly stated: string;
}

/** The lengths a profile of a given length allows, and what that departs from. Lengths in metres. */
export interface Lengths {
  readonly sections: number;
  readonly sectionLength: number;
  readonly evaluationLength: number;
  readonly departures: readonly Departure[];
}

const inMm = (length: number) => `${Number((length / MM).toPrecision(4))} mm`;
const inUm = (length: number) => `${Number((length / UM).toPrecision(4))} um`;

/** Section count and lengths for a profile of `length` under a setting: five sections or as many as fit, at least one. */
export function lengthsFor(setting: Setting, length: number): Lengths {
  const { sectionLength } = setting;
  const fit = Math.floor(length / sectionLength + 1e-9);
  if (fit >= 5) return { sections: 5, sectionLength, evaluationLength: setting.evaluationLength, departures: [] };
  if (fit >= 1) {
    const stated = `${fit} ${fit === 1 ? 'section' : 'sections'} of ${inMm(sectionLength)} instead of 5: the profile is ${inMm(length)} long`;
    return {
      sections: fit,
      sectionLength,
      evaluationLength: fit * sectionLength,
      departures: [{ kind: 'sections', stated }],
    };
  }
  const stated = `one section of ${inMm(length)}, shorter than the ${inMm(sectionLength)} of ${setting.class}: waves longer than the profile are removed as form`;
  return { sections: 1, sectionLength: length, evaluationLength: length, departures: [{ kind: 'short', stated }] };
}

/** Departures of a point spacing from a setting, and whether the S-filter can act at all. */
export function spacingDepartures(
  setting: Setting,
  spacing: number,
): { filtered: boolean; departures: readonly Departure[] } {
  const departures: Departure[] = [];
  if (spacing > setting.largestSpacing * (1 + 1e-9)) {
    const stated = `points every ${inUm(spacing)}, wider than the ${inUm(setting.largestSpacing)} of ${setting.class}`;
    departures.push({ kind: 'spacing', stated });
  }
  // two points per wave at least: otherwise the profile holds nothing as short as the index
  const filtered = 2 * spacing <= setting.sFilter * (1 + 1e-9);
  if (!filtered) {
    const stated = `no S-filter: its index of ${inUm(setting.sFilter)} is below two spacings of ${inUm(spacing)}`;
    departures.push({ kind: 'sFilter', stated });
  }
  return { filtered, departures };
}
