import { constantNotes } from '#src/physics/constants.ts';
import { slurryNotes } from '#src/physics/process/constants.ts';
import { allChecks } from './checks/all.ts';
import { type Lab, READINGS } from './lab.ts';
import { propertyRange } from './property-range.ts';
import type { Check, Inside, Part, Range, Row } from './record.ts';

/** Ids of the checks that a constant was fitted to: by the words beside the constants, or by the check's own. */
export function fittedChecks(checks: readonly Check[]): ReadonlySet<string> {
  const ids = new Set(checks.filter(({ settled }) => settled).map(({ id }) => id));
  for (const { source } of [...Object.values(constantNotes), ...Object.values(slurryNotes)]) {
    if (!source.startsWith('fitted')) continue;
    for (const [id] of source.matchAll(/\b[A-Z]\d+\b/g)) ids.add(id);
  }
  return ids;
}

/** Whether a value is in a band, both ends inside; never when it is not a number. */
export function isWithin(value: number, { low, high }: Range): boolean {
  return value >= (low ?? Number.NEGATIVE_INFINITY) && value <= (high ?? Number.POSITIVE_INFINITY);
}

function insideOf(predicted: readonly number[], band: Range): Inside {
  const hits = predicted.filter((value) => isWithin(value, band)).length;
  if (hits === predicted.length) return 'both';
  return hits > 0 ? 'one' : 'none';
}

/** What is worked out for the table beside the bare values. */
export interface TableOptions {
  readonly checks?: readonly Check[];
  /** Ranges over the properties of the work, for the lines that name one: four times the work for these. */
  readonly propertyRanges?: boolean;
}

function rowOf(lab: Lab, check: Check, part: Part, options: { fitted: boolean; propertyRanges: boolean }): Row {
  const { predict, reason, workVaried, ...stated } = part;
  const predicted = READINGS.map((amplitude) => predict(lab, amplitude));
  const inside = insideOf(predicted, part.band);
  const { id, claim, source, basis } = check;
  const ranged = options.propertyRanges && workVaried !== undefined;
  return {
    id,
    claim,
    source,
    basis,
    ...stated,
    predicted,
    ...(ranged && { propertyRange: propertyRange(lab, predict, workVaried, predicted) }),
    inside,
    fitted: options.fitted,
    reason: inside === 'both' ? '' : (reason ?? ''),
  };
}

/** The lines of the table, one after the other as they are worked out. */
export function* validationTable(lab: Lab, options: TableOptions = {}): Generator<Row> {
  const { checks = allChecks, propertyRanges = false } = options;
  const fitted = fittedChecks(allChecks);
  for (const check of checks) {
    for (const part of check.parts) yield rowOf(lab, check, part, { fitted: fitted.has(check.id), propertyRanges });
  }
}

/** Number of lines in the table. */
export function lineCount(checks: readonly Check[] = allChecks): number {
  return checks.reduce((sum, { parts }) => sum + parts.length, 0);
}
