import { expect, test } from 'vitest';
import { formatProblems, type Problem, RefusedError, showValue } from '#src/formats/problems.ts';

const problems: Problem[] = [
  { path: 'cavity.depthMm', value: 12, allowed: 'up to 9 mm', message: 'Deep.', severity: 'warn' },
  {
    path: 'machine.amplitudeUm',
    value: 62,
    allowed: 'up to 39.6 um',
    message: '62 um would crack the tool. Enter less.',
    severity: 'refuse',
    place: { line: 7, column: 15 },
  },
];

test('the terminal shows refusals first, each with where, value, what to do and what is allowed', () => {
  expect(formatProblems(problems, 'a.job.json')).toBe(
    [
      'a.job.json: 1 problem, 1 warning',
      '  machine.amplitudeUm (line 7, column 15): 62',
      '    62 um would crack the tool. Enter less.',
      '    Allowed: up to 39.6 um',
      '  warning, cavity.depthMm: 12',
      '    Deep.',
      '    Allowed: up to 9 mm',
    ].join('\n'),
  );
});

test('no problems are said to be none', () => {
  expect(formatProblems([], 'a.job.json')).toBe('a.job.json: no problems');
});

test('a refusal as an error carries its problems and the same text', () => {
  const error = new RefusedError(problems, 'job');
  expect(error.problems).toBe(problems);
  expect(error.message).toBe(formatProblems(problems, 'job'));
});

test('a value is shown on one line of at most sixty characters', () => {
  expect(showValue(undefined)).toBe('missing');
  expect(showValue(Infinity)).toBe('Infinity');
  expect(showValue('a\nb')).toBe('"a\\nb"');
  expect(showValue('x'.repeat(500))).toHaveLength(60);
  expect(showValue(10n)).toBe('10');
});
