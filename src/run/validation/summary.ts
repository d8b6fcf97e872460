import { formatNumber } from '#src/formats/numbers.ts';
import { mainChecks } from './checks/all.ts';
import type { Quantity, Row } from './record.ts';
import stored from './summary.json' with { type: 'json' };

/** How one check stands: inside when all its lines are, at both readings of the amplitude. */
export type CheckState = 'inside' | 'inside, fitted' | 'outside' | 'outside, fitted';

/** How a number of checks stand. */
export interface Tally {
  readonly checks: number;
  readonly inside: number;
  readonly notFittedInside: number;
}

/** The largest factor between predicted and published values of one kind of figure. */
export interface ModelError {
  readonly factor: number;
  /** The check and line it is found at. */
  readonly at: string;
}

/** What the table comes to. */
export interface ValidationSummary {
  /** D1 to D14. */
  readonly main: Tally;
  readonly others: Tally;
  readonly states: Readonly<Record<string, CheckState>>;
  /** From D1 to D14, worst of the two readings of the amplitude. */
  readonly errors: Readonly<Partial<Record<Quantity, ModelError>>>;
  /** Model error in one sentence, to be shown beside a verdict. */
  readonly sentence: string;
}

/** The summary as it was when the table was last worked out: needs no run. */
export const validationSummary: ValidationSummary = stored as ValidationSummary;

const MAIN: ReadonlySet<string> = new Set(mainChecks.map(({ id }) => id));

/** Factor by which a value misses the nearer end of the published range; 1 inside, undefined where there is no number. */
export function missFactor({ published: { low, high }, predicted }: Row): number | undefined {
  if (low === null || high === null || !(low > 0)) return undefined;
  return predicted.reduce((worst, value) => (value > 0 ? Math.max(worst, low / value, value / high) : Infinity), 1);
}

function statesOf(rows: readonly Row[]): Record<string, CheckState> {
  const states: Record<string, CheckState> = {};
  for (const { id, inside, fitted } of rows) {
    const held = inside === 'both' && !states[id]?.startsWith('outside');
    states[id] = `${held ? 'inside' : 'outside'}${fitted ? ', fitted' : ''}`;
  }
  return states;
}

function tallyOf(states: readonly CheckState[]): Tally {
  const count = (wanted: (state: CheckState) => boolean) => states.filter(wanted).length;
  return {
    checks: states.length,
    inside: count((state) => state.startsWith('inside')),
    notFittedInside: count((state) => state === 'inside'),
  };
}

/** Rounded up to a tenth: an error is not made to look smaller. */
const upToTenth = (factor: number) => Math.ceil(10 * factor - 1e-9) / 10;

function errorsOf(rows: readonly Row[]): Partial<Record<Quantity, ModelError>> {
  const errors: Partial<Record<Quantity, ModelError>> = {};
  for (const row of rows) {
    const factor = row.quantity && MAIN.has(row.id) ? missFactor(row) : undefined;
    if (row.quantity === undefined || factor === undefined) continue;
    if (factor > (errors[row.quantity]?.factor ?? 0)) errors[row.quantity] = { factor, at: `${row.id}: ${row.what}` };
  }
  for (const [quantity, { factor, at }] of Object.entries(errors))
    errors[quantity as Quantity] = { factor: upToTenth(factor), at };
  return errors;
}

const NAMES: Readonly<Partial<Record<Quantity, string>>> = {
  rate: 'rates',
  toolWear: 'tool wear',
  overcut: 'overcut',
  roughness: 'roughness',
};

function sentenceOf(main: Tally, errors: ValidationSummary['errors']): string {
  const factors = Object.entries(NAMES).flatMap(([quantity, name]) => {
    const error = errors[quantity as Quantity];
    return error ? [`${name} ${formatNumber(error.factor, 2)}`] : [];
  });
  return `Model error, as the largest factor from published values (mostly from memory): ${factors.join(', ')}; ${main.inside} of ${main.checks} checks are inside their bands, ${main.notFittedInside} of these not fitted.`;
}

/** What the rows come to. */
export function summaryOf(rows: readonly Row[]): ValidationSummary {
  const states = statesOf(rows);
  const of = (isMain: boolean) =>
    tallyOf(Object.entries(states).flatMap(([id, state]) => (MAIN.has(id) === isMain ? [state] : [])));
  const main = of(true);
  const errors = errorsOf(rows);
  return { main, others: of(false), states, errors, sentence: sentenceOf(main, errors) };
}
