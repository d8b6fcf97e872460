import type { Profile } from '#src/base/field.ts';
import { checkProfile, highPass, meanLine } from './gaussian.ts';
import { withoutLine } from './linear.ts';
import {
  type CoreParameters,
  coreParameters,
  type MaterialRatioCurve,
  materialRatio,
  materialRatioCurve,
  ratioHeight,
} from './material-ratio.ts';
import {
  type HeightParameters,
  heightParameters,
  meanElementWidth,
  rootMeanSquareSlope,
  type SectionParameters,
  sectionParameters,
} from './profile-parameters.ts';
import { robustMeanLine } from './robust-gaussian.ts';
import {
  type Departure,
  lengthsFor,
  type Setting,
  type SettingClass,
  settingForRa,
  settingOf,
  spacingDepartures,
} from './settings.ts';

export interface ProfileOptions {
  /** Holds the class instead of choosing it from Ra; needed to follow one trace through a cut. */
  readonly setting?: SettingClass;
  /** Mean line of the Rk family: ISO 16610-31 as ISO 21920 asks, or the plain Gaussian of the other parameters. */
  readonly core?: 'robust' | 'gaussian';
  /** Rmr(c): depth c (m) below the height at `reference` (0 to 1). Default Rz/4 below 5 %: common practice, no source. */
  readonly materialRatio?: { readonly depth?: number; readonly reference?: number };
  /** Rdc between these ratios. Default 2 and 98 %: common practice, no source. */
  readonly ratioHeight?: { readonly p: number; readonly q: number };
}

/** Parameters of ISO 21920-2; lengths in metres. */
export interface TextureParameters
  extends HeightParameters,
    SectionParameters,
    Omit<CoreParameters, 'upper' | 'lower'> {
  readonly rsm: number;
  readonly rdq: number;
  readonly rdc: number;
  /** Rmr(c), 0 to 1, and the level it was read at (m above the mean line). */
  readonly rmr: number;
}

/** The settings a texture was measured with; lengths in metres. */
export interface TextureSettings {
  readonly class: SettingClass;
  readonly lFilter: number;
  /** Undefined when no S-filter was applied. */
  readonly sFilter: number | undefined;
  readonly spacing: number;
  readonly sections: number;
  readonly sectionLength: number;
  readonly evaluationLength: number;
  /** Where the evaluation length starts on the profile. */
  readonly start: number;
}

export interface ProfileTexture {
  readonly parameters: TextureParameters;
  readonly settings: TextureSettings;
  readonly departures: readonly Departure[];
  /** Roughness profile over the evaluation length (m above the mean line). */
  readonly roughness: Profile;
  readonly curve: MaterialRatioCurve;
}

interface Filtered {
  readonly setting: Setting;
  /** S-filtered profile, whole length. */
  readonly primary: Profile;
  readonly roughness: Profile;
  readonly settings: TextureSettings;
  readonly departures: readonly Departure[];
}

/** Highest less lowest of a profile. */
function rangeOf(z: Float64Array): number {
  return (
    z.reduce((high, height) => Math.max(high, height), -Infinity) - z.reduce((low, h) => Math.min(low, h), Infinity)
  );
}

/** Middle part of a filtered profile; heights that are rounding against the raw profile are set to zero. */
function middleOf(profile: Profile, from: number, count: number, rounding: number): Profile {
  const z = profile.z.slice(from, from + count);
  if (z.every((height) => Math.abs(height) <= rounding)) z.fill(0);
  return { spacing: profile.spacing, z };
}

/** Takes off the form line, then filters with one class and cuts the evaluation length from the middle. */
function filterWith(profile: Profile, setting: Setting): Filtered {
  const { spacing, z } = profile;
  const lengths = lengthsFor(setting, z.length * spacing);
  const grid = spacingDepartures(setting, spacing);
  const formless = { spacing, z: withoutLine(z) };
  const primary = grid.filtered ? meanLine(formless, setting.sFilter) : formless;
  const count = Math.min(z.length, Math.round(lengths.evaluationLength / spacing));
  const from = Math.floor((z.length - count) / 2);
  const roughness = middleOf(highPass(primary, setting.lFilter), from, count, 1e-13 * rangeOf(z));
  const { sections, sectionLength, evaluationLength } = lengths;
  return {
    setting,
    primary,
    roughness,
    settings: {
      class: setting.class,
      lFilter: setting.lFilter,
      sFilter: grid.filtered ? setting.sFilter : undefined,
      spacing,
      sections,
      sectionLength,
      evaluationLength,
      start: from * spacing,
    },
    departures: [...lengths.departures, ...grid.departures],
  };
}

/** Filters until the class fits the Ra it gives; where two classes hand over to each other the coarser one is kept. */
function chooseSetting(profile: Profile): Filtered {
  const seen: Filtered[] = [];
  let filtered = filterWith(profile, settingOf('Sc3'));
  for (;;) {
    const { ra } = heightParameters(filtered.roughness.z);
    const wanted = settingForRa(ra).class;
    if (wanted === filtered.setting.class) return filtered;
    const before = seen.find((other) => other.setting.class === wanted);
    if (before !== undefined) {
      const coarser = before.setting.lFilter > filtered.setting.lFilter ? before : filtered;
      const finer = coarser === before ? filtered : before;
      const stated = `Ra falls between ${finer.setting.class} and ${coarser.setting.class}: each asks for the other, ${coarser.setting.class} is kept`;
      return { ...coarser, departures: [...coarser.departures, { kind: 'class', stated }] };
    }
    seen.push(filtered);
    filtered = filterWith(profile, settingOf(wanted));
  }
}

function holdSetting(profile: Profile, name: SettingClass): Filtered {
  const filtered = filterWith(profile, settingOf(name));
  const wanted = settingForRa(heightParameters(filtered.roughness.z).ra).class;
  if (wanted === name) return filtered;
  const stated = `${name} was asked for, Ra belongs to ${wanted}`;
  return { ...filtered, departures: [...filtered.departures, { kind: 'class', stated }] };
}

function coreOf(filtered: Filtered, curve: MaterialRatioCurve, robust: boolean): CoreParameters {
  const { primary, roughness, settings, setting } = filtered;
  if (!robust || roughness.z.every((height) => height === 0)) return coreParameters(curve);
  const line = robustMeanLine(primary, setting.lFilter).z;
  const from = Math.round(settings.start / settings.spacing);
  const heights = roughness.z.map((_, k) => primary.z[from + k] - line[from + k]);
  return coreParameters(materialRatioCurve(heights));
}

/**
 * Profile surface texture per ISO 21920-2 with the settings of ISO 21920-3: least-squares line off (F-operation),
 * S-filter, L-filter, evaluation length from the middle, parameters. The class is chosen from Ra until it fits unless
 * one is given. Whatever the profile is too short or too coarse for is listed in `departures`, never silent. A profile
 * without height has zero heights and NaN for Rsk, Rku and RSm.
 * @throws RangeError for fewer than 16 points, a height that is not finite, or a spacing that is not positive.
 */
export function profileTexture(profile: Profile, options: ProfileOptions = {}): ProfileTexture {
  checkProfile(profile);
  if (profile.z.length < 16)
    throw new RangeError(`a texture needs 16 points at least, the profile has ${profile.z.length}`);
  const filtered = options.setting === undefined ? chooseSetting(profile) : holdSetting(profile, options.setting);
  const { roughness, settings } = filtered;
  const z = roughness.z;
  const heights = heightParameters(z);
  const sections = sectionParameters(z, settings.sections);
  const curve = materialRatioCurve(z);
  const robust = options.core !== 'gaussian';
  const { upper: _upper, lower: _lower, ...core } = coreOf(filtered, curve, robust);
  const { depth = sections.rz / 4, reference = 0.05 } = options.materialRatio ?? {};
  const { p, q } = options.ratioHeight ?? { p: 0.02, q: 0.98 };
  const departures = robust
    ? filtered.departures
    : [...filtered.departures, { kind: 'core', stated: 'Rk, Rpk, Rvk from the plain Gaussian filter' } as const];
  return {
    parameters: {
      ...heights,
      ...sections,
      ...core,
      rsm: meanElementWidth(z, settings.spacing, sections),
      rdq: rootMeanSquareSlope(z, settings.spacing),
      rdc: ratioHeight(curve, p, q),
      rmr: materialRatio(curve, depth, reference),
    },
    settings,
    departures,
    roughness,
    curve,
  };
}
