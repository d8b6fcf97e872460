import { mkdirSync, readdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, describe, expect, test } from 'vitest';
import { scratch, spallwright } from '../support/cli.ts';
import { smallJob, smallJobText } from '../support/jobs.ts';

const { path: root, remove } = scratch();
afterAll(remove);
writeFileSync(join(root, 'good.job.json'), smallJobText());

let count = 0;

/** Cuts a job file of this content and says how that ended, and what was written beside it. */
async function cutOf(content: string | Uint8Array | null, more: readonly string[] = []) {
  const folder = join(root, `case-${++count}`);
  mkdirSync(folder);
  if (content !== null) writeFileSync(join(folder, 'x.job.json'), content);
  const ended = await spallwright(['cut', 'x.job.json', '--out', 'out', ...more], folder);
  const written = readdirSync(folder).filter((name) => name !== 'x.job.json');
  return { ...ended, written };
}

const machine = (changes: object) => smallJobText({ machine: { ...smallJob.machine, ...changes } });
const cavity = (changes: object) => smallJobText({ cavity: { ...smallJob.cavity, ...changes } });

/** What is wrong, the file, and what the message must name: the path, the value, what is allowed. */
const CASES: readonly (readonly [string, string | Uint8Array | null, readonly string[]])[] = [
  ['no file', null, ['x.job.json', 'does not exist']],
  ['an empty file', '', ['x.job.json', 'empty']],
  ['no JSON', '{ "spallwright": 1,, }', ['not JSON', 'line 1', 'column 20']],
  ['a binary file', Uint8Array.of(0x89, 0x50, 0x4e, 0x47, 0, 1, 2), ['not a text file']],
  ['text that is not UTF-8', Uint8Array.of(0x7b, 0xff, 0xfe, 0x7d), ['UTF-8']],
  ['a huge file', `${' '.repeat(10_000_001)}{}`, ['larger than 10 MB']],
  ['a list', '[]', ['x.job.json', 'an object']],
  ['another version', smallJobText({ spallwright: 2 }), ['spallwright', '2', '1']],
  ['no version', smallJobText({ spallwright: undefined }), ['spallwright', 'missing']],
  ['an unknown field', machine({ amplitudUm: 20 }), ['machine.amplitudUm', 'amplitudeUm']],
  ['a wrong type', machine({ amplitudeUm: 'a lot' }), ['machine.amplitudeUm', '"a lot"', '0.1 to 200 um']],
  ['a value out of range', machine({ amplitudeUm: 900 }), ['machine.amplitudeUm', '900', '0.1 to 200 um']],
  [
    'an unknown material',
    smallJobText({ workpiece: { material: 'borosilicat_33' } }),
    ['workpiece.material', 'borosilicat_33', 'borosilicate_33'],
  ],
  ['an unknown grade', smallJobText({ slurry: { abrasive: 'b4c', grit: 'F321' } }), ['slurry.grit', 'F321', 'F320']],
  ['a cavity deeper than the work', cavity({ depthMm: 9 }), ['workpiece.thicknessMm', '9 mm']],
  [
    'a tool larger than the cavity',
    smallJobText({ tool: { outline: { kind: 'circle', diameterMm: 0.6 } } }),
    ['tool.outline', 'larger than the cavity'],
  ],
  [
    'a drawing that is not there',
    cavity({ outline: { kind: 'drawing', file: 'none.dxf' } }),
    ['none.dxf', 'beside the job'],
  ],
];

describe('a job that cannot be cut', () => {
  // Bad input exits with 2, says what is wrong, where and what is allowed, and leaves nothing behind.
  test.each(CASES)('because of %s is refused and nothing is written', async (_name, content, said) => {
    const { code, stdout, stderr, written } = await cutOf(content);
    for (const words of said) expect(stderr).toContain(words);
    expect({ code, stdout, written }).toEqual({ code: 2, stdout: '', written: [] });
  });

  // All problems in one go: three faults in one file are three paragraphs.
  test('has all its problems named at once', async () => {
    const { code, stderr } = await cutOf(
      smallJobText({ machine: { amplitudeUm: -1, staticLoadN: 'x' }, cut: { seed: 1.5 } }),
    );
    expect(code).toBe(2);
    for (const path of ['machine.amplitudeUm', 'machine.staticLoadN', 'cut.seed']) expect(stderr).toContain(path);
    expect(stderr).toContain('3 problems');
  });

  // A folder in place of the job is no crash.
  test('because it is a folder is refused', async () => {
    const { code, stderr } = await spallwright(['cut', '.', '--out', 'out'], root);
    expect({ code, stderr }).toEqual({ code: 2, stderr: '. is a folder. Give a job file.\n' });
  });

  // Programs get the same problems as one JSON object, with path, value and what is allowed.
  test('is refused in JSON where that was asked for', async () => {
    const { code, stdout } = await cutOf(machine({ amplitudeUm: 900 }), ['--json']);
    expect(code).toBe(2);
    const { error } = JSON.parse(stdout);
    expect(error).toMatchObject({ code: 2, problems: [{ path: 'machine.amplitudeUm', value: 900 }] });
  });
});

/** Arguments that are refused, and what the message must say. */
const ARGUMENTS: readonly (readonly [readonly string[], string])[] = [
  [['cut', 'good.job.json'], '--out'],
  [['cut', '--out', 'out'], "missing required argument 'job'"],
  [['cut', 'good.job.json', '--out', 'out', '--seed', '-1'], '0 to 4294967295'],
  [['cut', 'good.job.json', '--out', 'out', '--workers', 'many'], '1 to 64'],
  [['cut', 'good.job.json', '--out', 'out', '--quality', 'superb'], 'preview, standard, fine'],
  [['cut', 'good.job.json', '--out', 'good.job.json'], 'not a folder'],
  [['cut', 'good.job.json', '--out', 'good.job.json/out'], 'a part of the path is a file'],
  [['cut', 'good.job.json', '--out', ''], '--out is empty'],
  // a file system that will have no folders made
  ...(process.platform === 'linux'
    ? [[['cut', 'good.job.json', '--out', '/proc/nowhere/out'], 'cannot be written'] as const]
    : []),
  [['chop', 'good.job.json'], "unknown command 'chop'"],
  [['estimate', 'good.job.json', '--fast'], "unknown option '--fast'"],
];

describe('arguments that cannot be right', () => {
  // Exit code 2, words that say what is allowed, nothing written.
  test.each(ARGUMENTS)('%j are refused', async (args, said) => {
    const before = readdirSync(root);
    const { code, stderr } = await spallwright(args, root);
    expect(stderr).toContain(said);
    expect(code).toBe(2);
    expect(readdirSync(root)).toEqual(before);
  });
});
