import Papa from 'papaparse';
import type { Profile } from '#src/base/field.ts';
import {
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
  SECONDS_PER_MINUTE,
} from '#src/base/units.ts';
import { formatNumber } from './numbers.ts';

/** One column: its header with the unit, and how a row gives its number in that unit (NaN for an empty field). */
export interface Column<Row> {
  readonly header: string;
  readonly digits: number;
  readonly of: (row: Row) => number;
}

/**
 * CSV as RFC 4180 has it: a header line, commas, CRLF, a point for decimals, empty fields for what is not known. UTF-8 when
 * encoded; no byte order mark.
 */
export function writeCsv<Row>(columns: readonly Column<Row>[], rows: readonly Row[]): string {
  const fields = columns.map((column) => column.header);
  const data = rows.map((row) =>
    columns.map(({ of, digits }) => {
      const value = of(row);
      return Number.isFinite(value) ? formatNumber(value, digits) : '';
    }),
  );
  return `${Papa.unparse([fields, ...data], { newline: '\r\n' })}\r\n`;
}

/** A moment of a cut (SI). NaN for what is not known. */
export interface HistoryMoment {
  /** Which pass, from 1. */
  readonly pass: number;
  /** Machining time since the start of the pass (s). */
  readonly time: number;
  /** Mean depth of the floor (m). */
  readonly depth: number;
  /** m/s */
  readonly rate: number;
  /** Static load that is set, and the one sampled from the impacts (N). */
  readonly loadSet: number;
  readonly loadSampled: number;
  /** Grits that touch both faces in one cycle. */
  readonly engagedGrits: number;
  /** Mean and largest load on one grit (N). */
  readonly gritLoadMean: number;
  readonly gritLoadLargest: number;
  /** Share of the grit under the tool that is fresh. */
  readonly freshFraction: number;
  /** 1 - load / stall load. */
  readonly stallMargin: number;
  /** m */
  readonly toolLengthLost: number;
  /** m */
  readonly toolEdgeRadius: number;
  /** Ra of the trace (m). */
  readonly floorRa: number;
  /** Width of the largest chip on the entry face (m). */
  readonly edgeChipLargest: number;
  /** m */
  readonly damageDepth: number;
}

const DIGITS = 6;
const um = (metres: number) => metres / METRES_PER_MICROMETRE;
const mm = (metres: number) => metres / METRES_PER_MILLIMETRE;

function column<Row>(header: string, of: (row: Row) => number): Column<Row> {
  return { header, digits: DIGITS, of };
}

const HISTORY: readonly Column<HistoryMoment>[] = [
  column('pass', (row) => row.pass),
  column('timeMin', (row) => row.time / SECONDS_PER_MINUTE),
  column('depthMm', (row) => mm(row.depth)),
  column('rateMmPerMin', (row) => row.rate / METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE),
  column('loadSetN', (row) => row.loadSet),
  column('loadSampledN', (row) => row.loadSampled),
  column('engagedGrits', (row) => row.engagedGrits),
  column('gritLoadMeanN', (row) => row.gritLoadMean),
  column('gritLoadLargestN', (row) => row.gritLoadLargest),
  column('freshFraction', (row) => row.freshFraction),
  column('stallMargin', (row) => row.stallMargin),
  column('toolLengthLostMm', (row) => mm(row.toolLengthLost)),
  column('toolEdgeRadiusUm', (row) => um(row.toolEdgeRadius)),
  column('floorRaUm', (row) => um(row.floorRa)),
  column('edgeChipLargestUm', (row) => um(row.edgeChipLargest)),
  column('damageDepthUm', (row) => um(row.damageDepth)),
];

/** The recorded series of a cut as `history.csv`. */
export function writeHistory(moments: readonly HistoryMoment[]): string {
  return writeCsv(HISTORY, moments);
}

/** A profile as `trace.csv`: position along the trace and height, both in um. */
export function writeTrace({ spacing, z }: Profile): string {
  const columns: Column<number>[] = [
    { header: 'positionUm', digits: 9, of: (index) => um(index * spacing) },
    { header: 'heightUm', digits: DIGITS, of: (index) => um(z[index] as number) },
  ];
  return writeCsv(columns, Array.from(z.keys()));
}
