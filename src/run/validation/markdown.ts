import { formatNumber } from '#src/formats/numbers.ts';
import { ABOVE_ONE, BELOW_ONE, type Range, type Row } from './record.ts';
import { summaryOf } from './summary.ts';

/** What the table stands between in a Markdown file. */
export const MARKERS = { begin: '<!-- validation:begin -->', end: '<!-- validation:end -->' } as const;

const shown = (value: number) => formatNumber(value, 3);

/** A band in words: `1.5 to 9.5`; a sign or an order as `above 1`. */
export function bandText(band: Range): string {
  const { low, high } = band;
  if (low === ABOVE_ONE.low && high === null) return 'above 1';
  if (low === BELOW_ONE.low && high === BELOW_ONE.high) return 'below 1';
  if (low === null) return high === null ? 'any' : `at most ${shown(high)}`;
  return high === null ? `at least ${shown(low)}` : `${shown(low)} to ${shown(high)}`;
}

const INSIDE = { both: 'yes', one: '**at one reading**', none: '**no**' } as const;

const cell = (text: string) => text.replaceAll('|', '\\|');

function line(row: Row): string {
  const model = row.predicted.map(shown).join(' / ');
  const unit = row.unit === '' ? '' : ` (${row.unit})`;
  const range = row.propertyRange ? ` [${row.propertyRange.map(shown).join(' to ')}]` : '';
  const cells = [
    row.id,
    `${row.what}${unit}`,
    row.published.text,
    `${model}${range}`,
    bandText(row.band),
    INSIDE[row.inside],
  ];
  return `| ${cells.map(cell).join(' | ')} |`;
}

const sameCheck = (rows: readonly Row[]) => {
  const checks = new Map<string, Row[]>();
  for (const row of rows) checks.set(row.id, [...(checks.get(row.id) ?? []), row]);
  return [...checks.values()];
};

function note(rows: readonly Row[]): string {
  const [first] = rows as [Row, ...Row[]];
  const bands = [...new Set(rows.map(({ why }) => why))].join('; ');
  const fitted = first.fitted ? ', **fitted**' : '';
  return `- ${first.id}: ${first.claim}. ${first.source} (${first.basis}${fitted}). Band: ${bands}.`;
}

function misses(rows: readonly Row[]): string[] {
  const reasons = new Map<string, Set<string>>();
  for (const { id, inside, reason } of rows) {
    if (inside === 'both') continue;
    reasons.set(id, (reasons.get(id) ?? new Set()).add(reason));
  }
  return [...reasons].map(([id, said]) => `- ${id}: ${[...said].join('; ')}.`);
}

const HEAD = '| check | compared | published | model, 19 / 38 um | band | inside |\n|---|---|---|---|---|---|';

/** The table of the rows as Markdown: lines, what they come to, claims with their sources, reasons of the misses. */
export function markdownTable(rows: readonly Row[]): string {
  const { others, sentence } = summaryOf(rows);
  const missed = misses(rows);
  return [
    `${sentence} Of the ${others.checks} other checks ${others.inside} are inside, ${others.notFittedInside} of these not fitted. A check is inside when all its lines are, with the amplitude read as 19 and as 38 um zero-to-peak; in brackets the range over hardness and toughness of the work.`,
    `${HEAD}\n${rows.map(line).join('\n')}`,
    `Claims, sources, and why the bands are as wide as they are:\n\n${sameCheck(rows).map(note).join('\n')}`,
    ...(missed.length > 0 ? [`Why the misses miss:\n\n${missed.join('\n')}`] : []),
  ].join('\n\n');
}

/**
 * A Markdown text with the table between its markers; null where the markers are not there once each and in order.
 */
export function withTable(text: string, table: string): string | null {
  const [before, rest, more] = text.split(MARKERS.begin);
  if (before === undefined || rest === undefined || more !== undefined) return null;
  const [, after, tail] = rest.split(MARKERS.end);
  if (after === undefined || tail !== undefined) return null;
  return `${before}${MARKERS.begin}\n\n${table}\n\n${MARKERS.end}${after}`;
}
