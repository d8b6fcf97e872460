import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import type { Result } from '#src/formats/result.ts';
import { FIGURE_NAMES, type FigureName, type FigureValues } from '#src/planning/figures.ts';
import { estimateJob } from '#src/run/estimate-job.ts';
import { makeEstimator } from '#src/run/estimates.ts';
import { openJob } from '#src/run/jobs.ts';
import type { Estimated } from '#src/run/protocol.ts';

const fileOf = (name: string) => JSON.parse(readFileSync(`resources/jobs/${name}.job.json`, 'utf8'));

function estimated(job: unknown): Estimated {
  const answer = estimateJob({ text: JSON.stringify(job), source: 'test' });
  if (answer.state === 'refused') throw new Error(JSON.stringify(answer.problems));
  return answer;
}

const numberOf = ({ figures }: Pick<Result, 'figures'>, name: FigureName) => figures[name].value as number;

describe('the estimate of a job', () => {
  const { result, help, headline } = estimated(fileOf('demo'));

  test('has every value inside its own band, and says what the band covers', () => {
    for (const name of FIGURE_NAMES) {
      const { value, low, high, covers } = result.figures[name];
      if (typeof value !== 'number' || typeof low !== 'number' || typeof high !== 'number') continue;
      expect(low, name).toBeLessThanOrEqual(value);
      expect(high, name).toBeGreaterThanOrEqual(value);
      expect(covers, name).toContain('model error not included');
    }
  });

  test('names what limits it and what would help, from trials of its settings', () => {
    expect(headline).toMatch(/damage depth|edge chip/);
    expect(help).toMatch(/is the limiting figure/);
    expect(result.verdict.help).toBe(help);
    expect(result.modelError).toMatch(/factor/);
  });

  test('says which property moves a figure most', () => {
    const time = result.influences.find(({ figure }) => figure === 'timeMin');
    expect(time?.inputs[0]?.name).toMatch(/toughness|grit/);
  });

  test('is the same again, byte for byte', () => {
    expect(JSON.stringify(estimated(fileOf('demo')).result)).toBe(JSON.stringify(result));
  });
});

/** The mean-field values of a job, without bands and help. */
function valuesOf(job: unknown) {
  const opened = openJob({ text: JSON.stringify(job), source: 'test' });
  if (opened.state === 'refused') throw new Error(JSON.stringify(opened.problems));
  const { values, passes } = makeEstimator().estimate(opened.job);
  const plain = (all: FigureValues, name: FigureName) => all[name] as number;
  return {
    whole: (name: FigureName) => plain(values, name),
    passes: passes.map((pass) => (name: FigureName) => plain(pass.values, name)),
    warnings: opened.warnings,
  };
}

describe('two passes', () => {
  const job = fileOf('si3n4-two-pass');
  const withStock = (stockUm: number) => {
    const [roughing, ...rest] = job.passes;
    return valuesOf({ ...job, passes: [{ ...roughing, stockUm }, ...rest] });
  };

  test('finishing takes the damage of roughing away where the stock allows', () => {
    const { whole, passes, warnings } = withStock(80);
    expect(passes[0]?.('damageDepthUm')).toBeGreaterThan(passes[1]?.('damageDepthUm') as number);
    expect(whole('damageDepthUm')).toBe(passes[1]?.('damageDepthUm'));
    expect(warnings.filter(({ message }) => message.includes('stock'))).toEqual([]);
  });

  test('and says where it does not, with both numbers', () => {
    const { whole, passes, warnings } = withStock(8);
    // the 8 um that finishing takes off the floor leave the rest of the roughing cracks
    expect(whole('damageDepthUm')).toBeGreaterThan(passes[1]?.('damageDepthUm') as number);
    expect(whole('damageDepthUm')).toBeCloseTo((passes[0]?.('damageDepthUm') as number) - 8, 0);
    const warning = warnings.find(({ path }) => path === 'passes[0].stockUm');
    expect(warning?.message).toMatch(/\d um.*\d+(\.\d+)? um/);
  });

  test('times and impacts add up, the stall margin is the least', () => {
    const { whole, passes } = withStock(60);
    const sum = (name: FigureName) => passes.reduce((all, pass) => all + pass(name), 0);
    expect(whole('timeMin')).toBeCloseTo(sum('timeMin'), 9);
    expect(whole('impacts') / sum('impacts')).toBeCloseTo(1, 9);
    expect(whole('stallMargin')).toBe(Math.min(...passes.map((pass) => pass('stallMargin'))));
  });
});

test('a through-cut has no floor, and its exit chips are smaller with a backing', () => {
  const open = estimated(fileOf('quartz-slot-open')).result;
  for (const name of ['floorRaUm', 'floorSizeMm', 'cornerRadiusUm'] as const) {
    expect(open.figures[name].value).toBe(null);
    expect(open.figures[name].covers).toContain('no floor');
  }
  const backed = valuesOf(fileOf('quartz-slot-backed'));
  expect(backed.whole('exitChipMaxUm')).toBeLessThan(numberOf(open, 'exitChipMaxUm'));
});

test('bores make a large flat tool faster (common practice, no source)', () => {
  const solid = valuesOf(fileOf('glass-20mm-solid'));
  const bored = valuesOf(fileOf('glass-20mm-bored'));
  expect(bored.whole('timeMin')).toBeLessThan(solid.whole('timeMin'));
});
