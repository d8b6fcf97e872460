import { formatNumber } from '#src/formats/numbers.ts';
import type { Result } from '#src/formats/result.ts';
import { FIGURE_NAMES, type Figure, type FigureName } from '#src/planning/figures.ts';
import type { Bound, LimitVerdict } from '#src/planning/verdict.ts';
import { FIGURE_WORDS } from '#src/run/words.ts';

/** Rows of cells as aligned text; cells of the columns in `right` end together. */
export function columns(rows: readonly (readonly string[])[], right: readonly number[] = []): string {
  const widths = rows.reduce<number[]>((all, row) => row.map((cell, n) => Math.max(cell.length, all[n] ?? 0)), []);
  const line = (row: readonly string[]) =>
    row.map((cell, n) => (right.includes(n) ? cell.padStart(widths[n] ?? 0) : cell.padEnd(widths[n] ?? 0))).join('  ');
  return rows.map((row) => `  ${line(row).trimEnd()}`).join('\n');
}

/** A number as people read it: a few digits, millions in words, powers of ten only for the very small. */
export function plain(value: number, digits: number): string {
  if (Math.abs(value) >= 1e6) return `${formatNumber(value / 1e6, digits)} million`;
  if (value !== 0 && Math.abs(value) < 1e-4) return value.toExponential(digits - 1);
  return formatNumber(value, digits);
}

function shown(name: FigureName, value: Figure['value']): string {
  const { digits } = FIGURE_WORDS[name];
  if (value === null) return '-';
  if (typeof value === 'number') return plain(value, digits);
  const parts = value.map((one) => plain(one, digits));
  if (name !== 'rateMmPerMin') return parts.join(' x ');
  return parts[0] === parts[1] ? (parts[0] as string) : parts.join(', ');
}

/** A band as "low to high", an open end as "or more"; empty where there is none. */
function bandText(name: FigureName, { low, high }: Figure): string {
  if (low === null && high === null) return '';
  if (high === null) return `${shown(name, low)} or more`;
  if (low === null) return `${shown(name, high)} or less`;
  const [from, to] = [shown(name, low), shown(name, high)];
  return from === to ? '' : `${from} to ${to}`;
}

function boundText(bound: Bound, digits: number): string | null {
  if (bound === null) return null;
  if (typeof bound === 'number') return plain(bound, digits);
  return bound.map((one) => (one === null ? '-' : plain(one, digits))).join(' x ');
}

function limitText({ limit }: LimitVerdict, digits: number): string {
  const lower = boundText(limit.lower, digits);
  const upper = boundText(limit.upper, digits);
  if (lower !== null && upper !== null) return `${lower} to ${upper}`;
  return upper === null ? `at least ${lower}` : `at most ${upper}`;
}

/** The figures of a result as a table: name, value, unit, band, limit of the drawing and how it fares. */
export function figureTable(result: Result): string {
  const judged = new Map(result.verdict.limits.map((limit) => [limit.id, limit]));
  const told = FIGURE_NAMES.filter((name) => result.figures[name].value !== null || judged.has(name));
  const rows = told.map((name) => {
    const { label, unit, digits } = FIGURE_WORDS[name];
    const figure = result.figures[name];
    const verdict = judged.get(name);
    const state = figure.value === null ? 'not known' : (verdict?.state ?? '');
    const limit = verdict ? [limitText(verdict, digits + 1), state] : ['', ''];
    return [label, shown(name, figure.value), unit, bandText(name, figure), ...limit];
  });
  return columns([['', '', '', 'band', 'limit', ''], ...rows], [1]);
}

/** What the bands of a result cover, and what they do not, in a paragraph. */
export function bandNote({ figures, modelError }: Result): string {
  const { covers, low, high } = figures.timeMin;
  return `${low === null && high === null ? '' : `Band: ${covers}. `}${modelError}`;
}
