import { DEGREES_PER_RADIAN, MICROMETRES_PER_METRE, MILLIMETRES_PER_METRE } from '#src/base/units.ts';

/** Numbers as drawings write them: minus sign U+2212, fixed decimals, a word where there is no value. */

/** `value` with fixed decimals; "no value" when it is not finite. */
export function figure(value: number, decimals: number): string {
  if (!Number.isFinite(value)) return 'no value';
  const text = Math.abs(value).toFixed(decimals);
  return value < 0 && Number(text) !== 0 ? `\u2212${text}` : text;
}

/** A length (m) in mm without its unit. */
export function inMm(length: number, decimals = 3): string {
  return figure(length * MILLIMETRES_PER_METRE, decimals);
}

/** A length (m) in µm without its unit: three figures below 10 µm, whole micrometres above. */
export function inUm(length: number): string {
  const um = length * MICROMETRES_PER_METRE;
  const size = Math.abs(um);
  return figure(um, size < 1 ? 3 : size < 10 ? 2 : size < 20 ? 1 : 0);
}

/** An angle (rad) in degrees without its unit. */
export function inDegrees(angle: number): string {
  return figure(angle * DEGREES_PER_RADIAN, 2);
}

/** A time (s) as drawings give it: seconds below two minutes, then minutes. */
export function duration(time: number): string {
  return time < 120 ? `${figure(time, 1)} s` : `${figure(time / 60, 2)} min`;
}

/** A length (m) with its unit, in µm below 0.1 mm and in mm from there on, without trailing zeros: for scale bars. */
export function shortLength(length: number): string {
  if (length < 0.9999e-4) return `${Number((length * MICROMETRES_PER_METRE).toPrecision(3))} \u00b5m`;
  return `${Number((length * MILLIMETRES_PER_METRE).toPrecision(3))} mm`;
}
