import { writeFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { constantNotes } from '#src/physics/constants.ts';
import { slurryNotes } from '#src/physics/process/constants.ts';
import { allChecks, mainChecks } from '#src/run/validation/checks/all.ts';
import { bandText, MARKERS, markdownTable, withTable } from '#src/run/validation/markdown.ts';
import type { Row } from '#src/run/validation/record.ts';
import { missFactor, summaryOf, validationSummary } from '#src/run/validation/summary.ts';
import { fittedChecks, isWithin, lineCount, validationTable } from '#src/run/validation/table.ts';
import { stockLab } from './support.ts';

const SUMMARY = new URL('../../src/run/validation/summary.json', import.meta.url);

/** SPALLWRIGHT_GOLDEN=update writes the summary anew (`npm run golden:update`). */
test.runIf(process.env.SPALLWRIGHT_GOLDEN === 'update')('the summary is written', () => {
  const summary = summaryOf([...validationTable(stockLab())]);
  writeFileSync(SUMMARY, `${JSON.stringify(summary, null, 2)}\n`);
  expect(Object.keys(summary.states)).toHaveLength(allChecks.length);
});

describe('the checks as data', () => {
  test('D1 to D14 are all there, and no id twice', () => {
    expect(mainChecks.map(({ id }) => id)).toEqual(Array.from({ length: 14 }, (_, k) => `D${k + 1}`));
    expect(new Set(allChecks.map(({ id }) => id)).size).toBe(allChecks.length);
  });

  test('every check names its source and how it is known, every line its published value and why its band is that wide', () => {
    for (const { id, claim, source, parts } of allChecks) {
      expect(claim.length * source.length * parts.length, id).toBeGreaterThan(0);
      for (const { what, why, published, band } of parts) {
        expect(Math.min(what.length, why.length, published.text.length), `${id} ${what}`).toBeGreaterThan(0);
        expect((band.low ?? -Infinity) < (band.high ?? Infinity), `${id} ${what}`).toBe(true);
      }
    }
  });

  test('a band holds the published value it is about', () => {
    for (const { id, parts } of allChecks) {
      for (const { what, published, band } of parts) {
        if (published.low === null || published.high === null) continue;
        // overlap, not cover: a band may be narrower than a published range that mixes settings
        const apart = published.low > (band.high ?? Infinity) || published.high < (band.low ?? -Infinity);
        expect(apart, `${id} ${what}`).toBe(false);
      }
    }
  });

  test('every constant that was fitted names a check, or a check names it', () => {
    const named = new Set(allChecks.flatMap(({ settled = [] }) => settled));
    const ids = new Set(allChecks.map(({ id }) => id));
    for (const [name, { source }] of Object.entries({ ...constantNotes, ...slurryNotes })) {
      if (!source.startsWith('fitted')) continue;
      const cited = [...source.matchAll(/\b[A-Z]\d+\b/g)].some(([id]) => ids.has(id));
      expect(cited || (named as Set<string>).has(name), `${name}: ${source}`).toBe(true);
    }
  });

  test('a check that a constant was fitted to counts as fitted: D1 by the rate of glass, D5 by tool wear', () => {
    const fitted = fittedChecks(allChecks);
    expect(fitted.has('D1') && fitted.has('D5')).toBe(true);
    expect(fitted.has('D2') || fitted.has('D3')).toBe(false);
  });
});

describe('the summary that a verdict shows', () => {
  test('it has every check of the table and nothing else', () => {
    expect(Object.keys(validationSummary.states)).toEqual(allChecks.map(({ id }) => id));
  });

  test('its tallies add up, and its sentence says them', () => {
    const { main, others, states, sentence, errors } = validationSummary;
    const inside = Object.values(states).filter((state) => state.startsWith('inside')).length;
    expect(main.inside + others.inside).toBe(inside);
    expect(main.checks + others.checks).toBe(allChecks.length);
    expect(sentence).toContain(`${main.inside} of ${main.checks}`);
    expect(sentence).toContain(String(errors.rate?.factor));
  });
});

const row: Row = {
  id: 'D1',
  claim: 'c',
  what: 'w',
  unit: 'mm',
  published: { text: '2', low: 2, high: 2 },
  source: 's',
  basis: 'from memory',
  band: { low: 1, high: 4 },
  why: 'y',
  predicted: [2, 3],
  inside: 'both',
  fitted: false,
  reason: '',
};

describe('judging a value', () => {
  test('the ends of a band are inside, an open end never ends, and no number is outside every band', () => {
    expect(isWithin(1, { low: 1, high: 2 }) && isWithin(2, { low: 1, high: 2 })).toBe(true);
    expect(isWithin(1e300, { low: 1, high: null }) && isWithin(-1e300, { low: null, high: 1 })).toBe(true);
    expect(isWithin(Number.NaN, { low: null, high: null })).toBe(false);
  });

  test('a check with one line outside is outside, wherever the line stands', () => {
    const out: Row = { ...row, predicted: [5, 5], inside: 'none', reason: 'r' };
    for (const rows of [
      [row, out],
      [out, row],
      [row, out, row],
    ])
      expect(summaryOf(rows).states).toEqual({ D1: 'outside' });
    expect(summaryOf([row]).states).toEqual({ D1: 'inside' });
    expect(summaryOf([{ ...row, inside: 'one' }]).main).toEqual({ checks: 1, inside: 0, notFittedInside: 0 });
  });

  test('the factor of a miss is the worse reading over the nearer end, the same above and below', () => {
    // 2 published: 3 / 2 above, 2 / 0.5 = 4 below
    expect(missFactor({ ...row, predicted: [3, 2] })).toBe(1.5);
    expect(missFactor({ ...row, predicted: [0.5, 3] })).toBe(4);
    expect(missFactor({ ...row, published: { text: '1 to 3', low: 1, high: 3 }, predicted: [1.5, 2.9] })).toBe(1);
    expect(missFactor({ ...row, predicted: [2, -1] })).toBe(Infinity);
    expect(missFactor({ ...row, published: { text: 'falls', low: null, high: null } })).toBeUndefined();
  });
});

describe('the table as Markdown', () => {
  test('a file keeps everything outside the markers, and writing twice is writing once', () => {
    fc.assert(
      fc.property(fc.string(), fc.string(), fc.string(), (before, old, after) => {
        fc.pre(![before, old, after].some((part) => part.includes('validation:')));
        const text = `${before}${MARKERS.begin}${old}${MARKERS.end}${after}`;
        const once = withTable(text, 'table') as string;
        expect(once.startsWith(before) && once.endsWith(after)).toBe(true);
        expect(withTable(once, 'table')).toBe(once);
      }),
      { seed: 1, numRuns: 200 },
    );
  });

  test('without both markers, once each and in order, there is no place', () => {
    const { begin, end } = MARKERS;
    for (const text of ['', begin, end, `${end}${begin}`, `${begin}${begin}${end}`, `${begin}${end}${end}`])
      expect(withTable(text, 't')).toBeNull();
  });

  test('each line has one row of six cells, a miss its reason, and a bar in words no cell of its own', () => {
    const missed: Row = { ...row, id: 'D2', what: 'a | b', predicted: [5, 3], inside: 'one', reason: 'because' };
    const text = markdownTable([row, missed]);
    const lines = text.split('\n').filter((line) => line.startsWith('| D'));
    expect(lines.map((line) => line.replaceAll('\\|', '').split('|').length)).toEqual([8, 8]);
    expect(text).toContain('- D2: because.');
    expect(text).not.toContain('- D1: .');
  });

  test('bands read as words', () => {
    expect(bandText({ low: 1.5, high: 9.5 })).toBe('1.5 to 9.5');
    expect(bandText({ low: 1.001, high: null })).toBe('above 1');
    expect(bandText({ low: 0, high: 0.999 })).toBe('below 1');
    expect(bandText({ low: 0, high: 1.02 })).toBe('0 to 1.02');
    expect(bandText({ low: 2, high: null })).toBe('at least 2');
  });

  test('a table of all checks has a line for every part', () => {
    expect(lineCount()).toBe(allChecks.reduce((sum, { parts }) => sum + parts.length, 0));
  });
});
