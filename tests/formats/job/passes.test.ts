import { describe, expect, test } from 'vitest';
import { type Base, only, problemsWith, resolvedWith } from './short-job.ts';

const rough = { title: 'Roughing', stockUm: 90, slurry: { grit: 'F240' } };
const fine = { title: 'Finishing', slurry: { grit: 'F500' } };
const passes =
  (...list: unknown[]) =>
  (job: Base) =>
    Object.assign(job, { passes: list });

describe('passes', () => {
  test('lie over the job field by field, and the last one ends at the drawing', () => {
    const job = resolvedWith((j) => {
      passes({ ...rough, machine: { amplitudeUm: 19 } }, fine)(j);
      Object.assign(j.machine, { frequencyKHz: 22 });
    });
    const [a, b] = job.passes;
    expect(job.passes.map(({ title }) => title)).toEqual(['Roughing', 'Finishing']);
    expect(a?.conditions.amplitude).toBeCloseTo(19e-6, 12);
    expect(b?.conditions.amplitude).toBeCloseTo(18e-6, 12);
    expect(b?.conditions.frequency).toBe(22e3);
    expect(a?.conditions.grit.massMedian).toBeCloseTo(44.5e-6, 12);
    expect(b?.conditions.grit.massMedian).toBeCloseTo(12.8e-6, 12);
    expect(b?.depth).toBe(job.depth);
    // what the job has at its top is that of the last pass
    expect(job.conditions).toBe(b?.conditions);
    expect(job.ranges).toBe(b?.ranges);
  });

  test('of one setting are the job itself', () => {
    const alone = resolvedWith(() => undefined);
    const listed = resolvedWith(passes({}));
    expect(alone.passes).toHaveLength(1);
    expect(listed.passes[0]).toEqual(alone.passes[0]);
  });

  // Tool: cavity less overcut less stock; depth: less the stock.
  test('leave their stock per side and on the floor', () => {
    const job = resolvedWith(passes(rough, fine));
    const [a] = job.passes;
    expect(a?.depth).toBeCloseTo(1e-3 - 90e-6, 12);
    expect(a?.sideGap).toBeCloseTo((a?.predictedOvercut ?? 0) + 90e-6, 12);
    expect(a?.stock).toBeCloseTo(90e-6, 12);
    expect(job.passes[1]?.stock).toBeUndefined();
  });

  test('with their own outline and depth leave the lesser of the two', () => {
    const tool = { outline: { kind: 'circle', diameterMm: 2.6 } };
    const job = resolvedWith(passes({ tool, depthMm: 0.85 }, fine));
    const [a] = job.passes;
    // 0.2 mm of gap less the overcut of F320, 1.9 d50, is less than 0.15 mm on the floor
    expect(a?.stock).toBeCloseTo(0.2e-3 - 1.9 * 29.2e-6, 9);
  });

  test('that give a median take the grade of the job away, and a load takes its feed away', () => {
    const job = resolvedWith((j) => {
      passes({ stockUm: 120, slurry: { d50Um: 40, spread: 0.2 }, machine: { staticLoadN: 1 } }, {})(j);
      Object.assign(j.machine, { feedMmPerMin: 1 });
    });
    expect(job.passes[0]?.conditions.grit.massMedian).toBeCloseTo(40e-6, 12);
    expect(job.passes[0]).toMatchObject({ feed: undefined, staticLoad: 1 });
    expect(job.passes[1]?.feed).toBeCloseTo(1e-3 / 60, 12);
  });

  test('take the tool outline of the job for the last of them alone', () => {
    const job = resolvedWith((j) => {
      passes(rough, fine)(j);
      Object.assign(j.tool, { outline: { kind: 'circle', diameterMm: 2.95 } });
    });
    expect(job.tool).toMatchObject({ kind: 'circle', diameter: 2.95 * 1e-3 });
    expect(job.passes[0]?.sideGap).toBeGreaterThan(0.09e-3);
  });
});

describe('passes that do not go together', () => {
  test.each<[string, unknown[], string, RegExp]>([
    ['say nothing of what they leave', [{}, {}], 'passes[0].stockUm', /what this pass leaves/],
    ['leave a stock after the last', [rough, { stockUm: 10 }], 'passes[1].stockUm', /nothing takes the stock away/],
    ['end beside the drawing', [rough, { depthMm: 0.9 }], 'passes[1].depthMm', /another depth than the cavity, 1 mm/],
    ['leave all of the depth', [{ stockUm: 1200 }, {}], 'passes[0].stockUm', /cuts nothing/],
    [
      'go up',
      [{ ...rough, depthMm: 0.9 }, { ...rough, depthMm: 0.8 }, fine],
      'passes[1].depthMm',
      /Pass 2 \(Roughing\) ends at 0\.8 mm, above Pass 1/,
    ],
    ['go deeper than the cavity', [{ ...rough, depthMm: 1.2 }, fine], 'passes[0].depthMm', /above Pass 1.*1\.2 mm/],
    [
      'finish with a tool larger than the cavity',
      [rough, { tool: { outline: { kind: 'circle', diameterMm: 3.2 } } }],
      'passes[1].tool.outline',
      /larger than the cavity/,
    ],
    [
      'name no grade there is',
      [{ ...rough, slurry: { grit: 'F330' } }, fine],
      'passes[0].slurry.grit',
      /Did you mean F320/,
    ],
    [
      'leave nothing of the tool',
      [{ stockUm: 1499, depthMm: 0.5 }, fine],
      'passes[0].stockUm',
      /Nothing is left of the tool/,
    ],
  ])('because they %s are refused, at the field of the pass', (_, list, path, message) => {
    const problem = only(problemsWith(passes(...list)), path);
    expect(problem.severity).toBe('refuse');
    expect(problem.message).toMatch(message);
  });

  test('with less stock than the roughing cracks are warned about with both numbers', () => {
    const problem = only(problemsWith(passes({ ...rough, stockUm: 4 }, fine)), 'passes[0].stockUm');
    expect(problem.severity).toBe('warn');
    expect(problem.message).toMatch(/takes off 4 um, and the cracks of Pass 1 \(Roughing\) reach [\d.]+ um/);
    expect(problemsWith(passes(rough, fine))).toEqual([]);
  });

  test('whose roughing tool is larger than the finishing tool are warned about', () => {
    const problems = problemsWith(
      passes(
        { ...rough, slurry: {}, depthMm: 0.9, tool: { outline: { kind: 'circle', diameterMm: 2.9 } } },
        { tool: { outline: { kind: 'circle', diameterMm: 2.85 } } },
      ),
    );
    expect(
      problems.some(({ path, message }) => path === 'passes[0].tool.outline' && /reaches over that of/.test(message)),
    ).toBe(true);
  });

  test('say once what all of them share, and name the pass of what one alone has', () => {
    const shared = problemsWith((j) => {
      passes(rough, fine)(j);
      Object.assign(j.machine, { amplitudeUm: 62 });
    });
    expect(only(shared, 'machine.amplitudeUm').message).toMatch(/^62 um would crack/);
    const one = problemsWith((j) => {
      passes({ ...rough, tool: { material: 'tool_steel' } }, fine)(j);
      Object.assign(j.machine, { amplitudeUm: 62 });
    });
    const own = one.filter(({ path }) => path === 'machine.amplitudeUm');
    expect(own.map(({ message }) => message.slice(0, 6)).toSorted()).toEqual(['Pass 1', 'Pass 2']);
  });

  test('of which one has a wrong field give that problem alone', () => {
    const problems = problemsWith(passes({ ...rough, slurry: { grit: 220 } }, fine));
    expect(problems.map(({ path }) => path)).toEqual(['passes[0].slurry.grit']);
    const unknown = problemsWith(passes({ ...rough, slurry: { gritt: 'F220' } }, fine));
    expect(only(unknown, 'passes[0].slurry.gritt').message).toMatch(/Did you mean grit/);
    expect(only(problemsWith(passes(null, fine)), 'passes[0]').severity).toBe('refuse');
  });
});
