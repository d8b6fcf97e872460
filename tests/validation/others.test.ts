import { expect, test } from 'vitest';
import { allChecks, mainChecks } from '#src/run/validation/checks/all.ts';
import { summaryOf, validationSummary } from '#src/run/validation/summary.ts';
import { rowsOf } from './support.ts';

const checks = allChecks.slice(mainChecks.length);
const rows = rowsOf(checks);
const { states } = summaryOf(rows);

test.each(checks.map(({ id, claim }) => ({ id, claim })))(
  '$id stands as it did when the summary was written: $claim',
  ({ id }) => {
    expect(states[id]).toBe(validationSummary.states[id]);
  },
);

test('every line has finite values, and a reason where it misses', () => {
  for (const row of rows) {
    for (const value of row.predicted) expect(Number.isFinite(value), `${row.id} ${row.what}`).toBe(true);
    if (row.inside !== 'both') expect(row.reason, `${row.id} ${row.what}`).not.toBe('');
  }
});
