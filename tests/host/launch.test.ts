import { spawnSync } from 'node:child_process';
import { writeFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { afterAll, expect, test } from 'vitest';
import { scratch } from '../support/cli.ts';
import { smallJobText } from '../support/jobs.ts';

const { path: root, remove } = scratch();
afterAll(remove);
writeFileSync(join(root, 'good.job.json'), smallJobText());
const launcher = resolve('src/host/launch.mjs');

/** Launches as npm does: in the project's folder, with a note of where the command was typed. */
function launch(args: readonly string[]) {
  const env = { ...process.env, npm_lifecycle_event: 'spallwright', INIT_CWD: root };
  return spawnSync(process.execPath, [launcher, ...args], { env, encoding: 'utf8' });
}

// Paths on the command line are meant from where it was typed, though npm runs scripts in the project's folder.
test('finds files from where the command was typed', () => {
  const { status, stdout } = launch(['check', 'good.job.json']);
  expect(stdout).toContain('The job is sound.');
  expect(status).toBe(0);
});

// The exit code of the program is the exit code of the launcher.
test('hands the exit code on', () => {
  expect(launch(['check', 'nothing.job.json']).status).toBe(2);
});
