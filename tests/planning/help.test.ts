import { describe, expect, test } from 'vitest';
import type { Figure, FigureName, Figures, FigureValues } from '#src/planning/figures.ts';
import { type HelpOptions, helpSentence, type Lever, limitingOf } from '#src/planning/help.ts';
import { heldLimits } from '#src/planning/trial.ts';
import { judgeLimits, type LimitRow, type LimitWords } from '#src/planning/verdict.ts';
import { figuresOf, valuesWith } from './figure-values.ts';

const words: LimitWords = {
  labels: {
    floorRaUm: 'floor Ra',
    taperDeg: 'taper',
    edgeChipMaxUm: 'edge chip',
    timeMin: 'time',
    entrySizeMm: 'entry size',
    floorRzUm: 'floor Rz',
  },
  apart: new Set(['stallMargin']),
};

/** Settings of the synthetic process: load (N), grit (um), undersize per side (mm). */
const NOW = { load: 40, grit: 30, undersize: 0.05 };

/** Power laws, so that the right answer is known: Ra as load^0.3 grit, time as 1 / (load grit), taper as grit / load. */
function process({ load, grit, undersize }: typeof NOW): FigureValues {
  return valuesWith({
    timeMin: (2 * 40 * 30) / (load * grit),
    floorRaUm: 0.8 * (load / 40) ** 0.3 * (grit / 30),
    taperDeg: 0.4 * (grit / 30) * (40 / load),
    edgeChipMaxUm: 90 * (grit / 30),
    stallMargin: 1 - load / 160,
    entrySizeMm: [6.06 - 2 * (undersize - 0.05), 4.06 - 2 * (undersize - 0.05)],
  });
}

const load: Lever = {
  name: 'the load',
  unit: 'N',
  now: 40,
  allowed: [5, 150],
  step: 1,
  evaluate: (value) => process({ ...NOW, load: value }),
};
const grit: Lever = {
  name: 'the grit',
  unit: '',
  now: 30,
  allowed: [0, 100],
  choices: [
    { value: 45, label: 'F240' },
    { value: 30, label: 'F320' },
    { value: 24, label: 'F360' },
    { value: 18, label: 'F400' },
  ],
  evaluate: (value) => process({ ...NOW, grit: value }),
};
const undersize: Lever = {
  name: 'the undersize of the tool',
  unit: 'mm per side',
  now: 0.05,
  allowed: [0, 0.2],
  step: 0.005,
  evaluate: (value) => process({ ...NOW, undersize: value }),
};

type Bounds = Partial<Record<FigureName, number | { lower: LimitRow['lower']; upper: LimitRow['upper'] }>>;

interface Asked {
  readonly limits: Bounds;
  readonly levers?: readonly Lever[];
  /** Half width of every band, as a share of the value. */
  readonly band?: number;
  readonly figures?: Partial<Figures>;
  readonly options?: HelpOptions;
}

function ask({ limits, levers = [load, grit, undersize], band = 0, figures = {}, options = {} }: Asked): string | null {
  const widened = (figure: Figure): Figure =>
    typeof figure.value === 'number' && band > 0
      ? { ...figure, low: figure.value * (1 - band), high: figure.value * (1 + band) }
      : figure;
  const plain = figuresOf(process(NOW));
  const banded = Object.fromEntries(Object.entries(plain).map(([name, figure]) => [name, widened(figure)]));
  const all = { ...banded, ...figures } as unknown as Figures;
  const rows = Object.entries(limits).map(([id, bound]): LimitRow => {
    const figure = all[id as FigureName];
    return typeof bound === 'number' ? { id, figure, lower: null, upper: bound } : { id, figure, ...bound };
  });
  const stall = { id: 'stallMargin', figure: all.stallMargin, lower: 0, upper: null };
  return helpSentence(judgeLimits([...rows, stall]), levers, all, { words, ...options });
}

describe('help for a limit that is missed', () => {
  test('is the smallest change that brings it inside, and its cost', () => {
    // 0.8 (F / 40)^0.3 = 0.7 at F = 40 (7 / 8)^(1 / 0.3) = 25.6: 25 N and 2 x 40 / 25 min
    expect(ask({ limits: { floorRaUm: 0.7 }, levers: [load] })).toBe(
      'Floor Ra is the limiting figure, 0.1 um over: taking the load from 40 to 25 N would bring it to 0.695 um and take 3.2 min instead of 2.',
    );
  });

  test('is the lever that leaves it quickest', () => {
    // F360: 0.8 x 24 / 30 um in 2 x 30 / 24 min
    expect(ask({ limits: { floorRaUm: 0.7 } })).toBe(
      'Floor Ra is the limiting figure, 0.1 um over: F360 instead of F320 would bring it to 0.64 um and take 2.5 min instead of 2.',
    );
  });

  test('brings the whole band inside where there is one', () => {
    // 1.2 x 0.64 = 0.768 is over 0.7, 1.2 x 0.8 x 18 / 30 = 0.576 is not
    expect(ask({ limits: { floorRaUm: 0.7 }, band: 0.2, levers: [grit] })).toBe(
      'Floor Ra is the limiting figure, 0.1 um over: F400 instead of F320 would bring it to 0.48 um, at most 0.576, and take 3.3 min instead of 2.',
    );
  });

  test('brings the value inside where no lever brings the band, and says what remains', () => {
    const two = { ...grit, choices: grit.choices?.slice(0, 3) };
    expect(ask({ limits: { floorRaUm: 0.7 }, band: 0.2, levers: [two] })).toBe(
      'Floor Ra is the limiting figure, 0.1 um over: F360 instead of F320 would bring it to 0.64 um, its band still 0.068 um over, and take 2.5 min instead of 2.',
    );
  });

  test('is what comes nearest, and what remains, where no lever does it', () => {
    expect(ask({ limits: { floorRaUm: 0.4 }, levers: [grit, undersize] })).toBe(
      'Floor Ra is the limiting figure, 0.4 um over: no single setting brings it inside, F400 instead of F320 comes nearest with 0.48 um, still 0.08 um over, and takes 3.3 min instead of 2.',
    );
  });

  test('does not push another limit out, and says when nothing else would help', () => {
    // taper 0.4 x 40 / 25 = 0.64 at the load that would do; the grit eases both
    const limits = { floorRaUm: 0.7, taperDeg: 0.5 };
    expect(ask({ limits })).toContain('F360 instead of F320 would bring it to 0.64 um');
    expect(ask({ limits, levers: [load] })).toBe(
      // taper 0.4 x 40 / 32 = 0.5 at 32 N, and 0.8 (32 / 40)^0.3 = 0.748 there
      'Floor Ra is the limiting figure, 0.1 um over: no single setting helps without harm, taking the load from 40 to 25 N would bring it to 0.695 um but taper to 0.64 deg; without that, taking the load from 40 to 32 N comes nearest with 0.748 um, still 0.048 um over, and takes 2.5 min instead of 2.',
    );
  });

  test('names the limits it leaves unmet', () => {
    expect(ask({ limits: { floorRaUm: 0.7, entrySizeMm: 6.055 }, levers: [load] })).toMatch(
      /instead of 2; entry size would still miss\.$/,
    );
  });

  test('is of the side and the size that is out', () => {
    // 6.06 - 2 (u - 0.05) <= 6.03 and >= 6.01, core likewise: u from 0.065
    const limits = { entrySizeMm: { lower: [6.01, 4.01], upper: [6.03, 4.03] } };
    expect(ask({ limits })).toBe(
      'Entry size is the limiting figure, 0.03 mm over: taking the undersize of the tool from 0.05 to 0.065 mm per side would bring it to 6.03 mm and take as long, 2 min.',
    );
    const under = { entrySizeMm: { lower: [6.079, 4.079], upper: [6.12, 4.12] } };
    expect(ask({ limits: under })).toContain('0.019 mm under: taking the undersize of the tool from 0.05 to 0.04 mm');
  });

  test('where time is the limit names the limit with the least room after it', () => {
    // 2 x 40 / F = 1.6 at 50 N; Ra 0.8 x 1.25^0.3 = 0.855
    expect(ask({ limits: { timeMin: 1.6, floorRaUm: 0.9 }, levers: [load] })).toBe(
      'Time is the limiting figure, 0.4 min over: taking the load from 40 to 50 N would bring it to 1.6 min; floor Ra would then have the least room, 0.045 um.',
    );
  });

  test('is found between two steps where the figure has a best setting', () => {
    // a valley of Ra at 80 N, below 0.69 from 80 - 0.01 / 0.003 to 80 + 0.01 / 0.003 N only
    const valley = {
      ...load,
      evaluate: (f: number) => ({ ...process(NOW), floorRaUm: 0.68 + 0.003 * Math.abs(f - 80) }),
    };
    expect(ask({ limits: { floorRaUm: 0.69 }, levers: [valley] })).toContain('taking the load from 40 to 77 N');
  });

  test('takes an estimate of a cut as it moves, not as it stands', () => {
    // the cut's Ra is 1.25 times the estimate's: 1 um, and 0.64 x 1.25 with F360
    const figures = { floorRaUm: { value: 1, low: 0.9, high: 1.1, covers: 'all' } };
    expect(ask({ limits: { floorRaUm: 0.9 }, levers: [grit], figures })).toContain('bring it to 0.8 um, at most 0.88,');
  });

  test('moves a figure the estimate has no law for with its relative, and says when it has none', () => {
    const figures = {
      floorRzUm: { value: 5, low: null, high: null, covers: 'none' },
      toolEdgeRadiusUm: { value: 40, low: null, high: null, covers: 'none' },
    };
    expect(ask({ limits: { floorRzUm: 4.2 }, levers: [grit], figures })).toContain(
      'F360 instead of F320 would bring it to 4 um',
    );
    expect(ask({ limits: { toolEdgeRadiusUm: 30 }, figures })).toContain(
      'over: the estimate does not say what moves it.',
    );
  });

  test('passes over settings that cannot be made, and trials that come to nothing', () => {
    const evaluate = (f: number) => {
      if (f < 30) throw new RangeError('the machine cannot');
      return process({ ...NOW, load: f });
    };
    expect(ask({ limits: { floorRaUm: 0.7 }, levers: [{ ...load, evaluate }] })).toContain(
      'no single setting brings it inside, taking the load from 40 to 30 N comes nearest',
    );
    const stalled = (d: number) => ({ ...process({ ...NOW, grit: d }), timeMin: d < 30 ? null : 2 });
    expect(ask({ limits: { floorRaUm: 0.7 }, levers: [{ ...grit, evaluate: stalled }] })).toContain(
      'none of the settings tried brings it nearer',
    );
  });
});

describe('help for a limit at risk', () => {
  const limits = { floorRaUm: 0.9 };
  const sensitivities = (coefficient: number) => [
    {
      figure: 'floorRaUm',
      influences: [
        { input: 'toughness of the work', coefficient, firstOrder: coefficient ** 2 },
        { input: 'hardness of the work', coefficient: 0.1, firstOrder: 0.01 },
      ],
      explained: 0.95,
      orderedBy: 'coefficient' as const,
    },
  ];

  test('tells the end of the band and brings it inside', () => {
    // 1.2 x 0.8 (F / 40)^0.3 = 0.9 at 40 (0.9 / 0.96)^(1 / 0.3) = 32.3
    expect(ask({ limits, band: 0.2, levers: [load] })).toBe(
      'Floor Ra is the limiting figure, inside at 0.8 um but with a band up to 0.96, 0.06 um over: taking the load from 40 to 32 N would bring it to 0.748 um, at most 0.898, and take 2.5 min instead of 2.',
    );
  });

  test('names the property most of the band comes from, or the largest part', () => {
    const told = (coefficient: number) =>
      ask({ limits, band: 0.2, options: { sensitivities: sensitivities(coefficient) } });
    // 0.8 squared is more than half, 0.6 squared is not
    expect(told(-0.8)).toMatch(/\. Most of its band comes from the toughness of the work\.$/);
    expect(told(0.6)).toMatch(/\. The largest part of its band comes from the toughness of the work\.$/);
    expect(ask({ limits: { floorRaUm: 0.7 }, options: { sensitivities: sensitivities(0.8) } })).not.toContain(
      'band comes',
    );
  });

  test('promises nothing of a band that is open', () => {
    const figures = { timeMin: { value: 2, low: 1.8, high: null, covers: 'open above' } };
    expect(ask({ limits: { timeMin: 3 }, figures })).toBe(
      'Time is the limiting figure, inside at 2 min but with a band that is open above: whether a setting closes it cannot be told from single trials.',
    );
  });
});

describe('where all limits are met', () => {
  test('the fastest setting that still meets them all is named', () => {
    // 0.8 (F / 40)^0.3 <= 0.85 up to 40 (0.85 / 0.8)^(1 / 0.3) = 48.9
    expect(ask({ limits: { floorRaUm: 0.85, edgeChipMaxUm: 95 } })).toBe(
      'Edge chip is the limiting figure, 5 um inside: taking the load from 40 to 48 N would take 1.7 min instead of 2 and still meet every limit.',
    );
  });

  test('half of the room to the stall is kept', () => {
    // 1 - F / 160 is 0.75 now, half of it at 100 N; looked for to an eighth of the way
    expect(ask({ limits: { edgeChipMaxUm: 200 }, levers: [load] })).toMatch(
      /taking the load from 40 to (9[3-9]|100) N/,
    );
  });

  test('it is said when nothing is faster, and when a limit is not known', () => {
    expect(ask({ limits: { edgeChipMaxUm: 95 }, levers: [undersize] })).toBe(
      'Edge chip is the limiting figure, 5 um inside: no single setting tried cuts faster within the limits.',
    );
    const figures = { taperDeg: { value: null, low: null, high: null, covers: 'not known' } };
    expect(ask({ limits: { edgeChipMaxUm: 95, taperDeg: 1 }, levers: [load], figures })).toMatch(
      /every limit whose figure is known\.$/,
    );
  });

  test('there is nothing to say of a drawing without limits', () => {
    expect(ask({ limits: {} })).toBeNull();
  });
});

test('the limiting figure is the worst by state, then by margin, and the stall only when it is near', () => {
  const figures = figuresOf({ floorRaUm: 0.8, taperDeg: 0.4, edgeChipMaxUm: 90, stallMargin: -0.01 });
  const rows = (names: readonly [FigureName, number][], stall: number | null): LimitRow[] => [
    ...names.map(([id, upper]) => ({ id, figure: figures[id], lower: null, upper })),
    ...(stall === null ? [] : [{ id: 'stallMargin', figure: figures.stallMargin, lower: stall, upper: null }]),
  ];
  const id = (all: readonly LimitRow[]) => limitingOf(heldLimits(judgeLimits(all), figures), words)?.id;
  expect(
    id(
      rows(
        [
          ['floorRaUm', 0.7],
          ['taperDeg', 0.3],
          ['edgeChipMaxUm', 100],
        ],
        null,
      ),
    ),
  ).toBe('taperDeg');
  expect(
    id(
      rows(
        [
          ['floorRaUm', 0.9],
          ['edgeChipMaxUm', 95],
        ],
        -0.02,
      ),
    ),
  ).toBe('edgeChipMaxUm');
  expect(
    id(
      rows(
        [
          ['floorRaUm', 0.9],
          ['edgeChipMaxUm', 95],
        ],
        0,
      ),
    ),
  ).toBe('stallMargin');
});

test('an estimate at hand spares one evaluation of each lever and changes nothing', () => {
  let count = 0;
  const counted = (lever: Lever): Lever => ({
    ...lever,
    evaluate: (value) => {
      count++;
      return lever.evaluate(value);
    },
  });
  const levers = [load, grit, undersize].map(counted);
  const without = ask({ limits: { floorRaUm: 0.7 }, levers });
  const first = count;
  expect(ask({ limits: { floorRaUm: 0.7 }, levers, options: { nominal: process(NOW) } })).toBe(without);
  expect(count - first).toBe(first - levers.length);
});
