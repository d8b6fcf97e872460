import { readFile, writeFile } from 'node:fs/promises';
import { stockLibrary } from '#src/formats/stock-library.ts';
import { publishedConstants } from '#src/physics/constants.ts';
import { slurryConstants } from '#src/physics/process/constants.ts';
import { allChecks } from '#src/run/validation/checks/all.ts';
import { makeLab } from '#src/run/validation/lab.ts';
import { bandText, MARKERS, markdownTable, withTable } from '#src/run/validation/markdown.ts';
import type { Check, Row } from '#src/run/validation/record.ts';
import { summaryOf } from '#src/run/validation/summary.ts';
import { lineCount, validationTable } from '#src/run/validation/table.ts';
import { CommandError, EXIT, reasonOf } from '../exit.ts';
import { columns, plain } from '../table.ts';

/** What `validate` is asked for. */
export interface ValidateOptions {
  /** Markdown file that takes the table between its markers. */
  readonly write?: string;
  readonly json: boolean;
}

/**
 * Works out the validation table, prints it, and puts it into a Markdown file where asked; returns the exit code.
 * @param checks the checks of the table: all of them, but in tests
 */
export async function validate(
  { write, json }: ValidateOptions,
  checks: readonly Check[] = allChecks,
): Promise<number> {
  // a file that cannot take the table is found out before a minute of work
  const text = write === undefined ? undefined : await readTarget(write);
  const rows = workedOut(checks, process.stderr);
  if (write !== undefined && text !== undefined) await writeTarget(write, text, markdownTable(rows));
  process.stdout.write(json ? `${JSON.stringify({ rows, summary: summaryOf(rows) })}\n` : report(rows, write));
  return EXIT.done;
}

function workedOut(checks: readonly Check[], stream: NodeJS.WriteStream): Row[] {
  const lab = makeLab(stockLibrary, publishedConstants, slurryConstants);
  const count = lineCount(checks);
  const rows: Row[] = [];
  for (const row of validationTable(lab, { checks, propertyRanges: true })) {
    rows.push(row);
    if (stream.isTTY) stream.write(`\r${rows.length} of ${count} lines`);
  }
  if (stream.isTTY) stream.write('\r\x1b[K');
  return rows;
}

async function readTarget(path: string): Promise<string> {
  const text = await readFile(path, 'utf8').catch((error: unknown) => {
    throw new CommandError(EXIT.badInput, `${path} cannot be read: ${reasonOf(error)}.`);
  });
  if (withTable(text, '') !== null) return text;
  throw new CommandError(
    EXIT.badInput,
    `${path} has no place for the table: it needs ${MARKERS.begin} and ${MARKERS.end} once each, in this order.`,
  );
}

async function writeTarget(path: string, text: string, table: string): Promise<void> {
  await writeFile(path, withTable(text, table) as string).catch((error: unknown) => {
    throw new CommandError(EXIT.badInput, `${path} cannot be written: ${reasonOf(error)}.`);
  });
}

const MARK = { both: 'yes', one: 'at one reading', none: 'NO' } as const;

function report(rows: readonly Row[], write: string | undefined): string {
  const cells = rows.map(({ id, what, unit, published, predicted, band, inside, fitted }) => [
    id,
    unit === '' ? what : `${what} (${unit})`,
    published.text,
    predicted.map((value) => plain(value, 3)).join(' / '),
    bandText(band),
    `${MARK[inside]}${fitted ? ', fitted' : ''}`,
  ]);
  const head = ['', '', 'published', '19 / 38 um', 'band', 'inside'];
  const reasons = rows
    .filter(({ inside }) => inside !== 'both')
    .map(({ id, what, reason }) => [id, `${what}: ${reason}`]);
  return [
    `Model against published values, amplitude read as 19 and as 38 um zero-to-peak\n${columns([head, ...cells])}`,
    ...(reasons.length > 0 ? [`Not inside\n${columns(reasons)}`] : []),
    `${summaryOf(rows).sentence}\nPublished values are from memory unless the table in DEVELOPERS.md says "read".`,
    ...(write === undefined ? [] : [`The table is in ${write}.`]),
    '',
  ].join('\n\n');
}
