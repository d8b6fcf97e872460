import { expect, test } from 'vitest';
import { stockLibrary } from '#src/formats/stock-library.ts';
import { publishedConstants } from '#src/physics/constants.ts';
import { slurryConstants } from '#src/physics/process/constants.ts';
import { allChecks } from '#src/run/validation/checks/all.ts';
import { makeLab } from '#src/run/validation/lab.ts';
import { validationTable } from '#src/run/validation/table.ts';

/**
 * Prints the table for trials, with constants of either set changed:
 * SPALLWRIGHT_TABLE=1 SPALLWRIGHT_CONSTANTS='{"crackDepth":0.035,"debrisBulking":10}' npx vitest run ... ; SPALLWRIGHT_CHECKS=D8,D12 for some only.
 */
const { SPALLWRIGHT_TABLE, SPALLWRIGHT_CONSTANTS = '{}', SPALLWRIGHT_CHECKS } = process.env;

function changed<T extends object>(constants: T, changes: Record<string, number>): T {
  const own = Object.entries(changes).filter(([name]) => name in constants);
  return { ...constants, ...Object.fromEntries(own) };
}

test.skipIf(!SPALLWRIGHT_TABLE)('the table as it stands', () => {
  const changes: Record<string, number> = JSON.parse(SPALLWRIGHT_CONSTANTS);
  const unknown = Object.keys(changes).filter((name) => !(name in publishedConstants || name in slurryConstants));
  expect(unknown).toEqual([]);
  const lab = makeLab(stockLibrary, changed(publishedConstants, changes), changed(slurryConstants, changes));
  const asked = SPALLWRIGHT_CHECKS?.split(',');
  const text = (value: number) => (value === 0 ? '0' : value.toPrecision(3));
  const lines: string[] = [];
  const failed = new Set<string>();
  const all = new Set<string>();
  const checks = allChecks.filter(({ id }) => !asked || asked.includes(id));
  for (const row of validationTable(lab, { checks })) {
    const values = row.predicted.map(text).join(' / ');
    const mark = { both: 'in ', one: 'ONE', none: 'OUT' }[row.inside];
    all.add(row.id);
    if (row.inside !== 'both') failed.add(row.id);
    lines.push(
      `${row.id.padEnd(4)} ${mark} ${row.fitted ? 'fit' : '   '} ${values.padEnd(18)} [${text(row.band.low ?? 0)}, ${text(row.band.high ?? Infinity)}] ${row.what} ${row.unit} (published ${row.published.text})`,
    );
  }
  console.log(`${lines.join('\n')}\n${all.size - failed.size} of ${all.size} inside; not: ${[...failed].join(' ')}`);
});
