import { type ChildProcess, spawn } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';

const PROGRAM = resolve('dist/cli.js');
if (!existsSync(PROGRAM)) throw new Error('dist is missing: run "npm run build" first');

/** How a command ended. */
export interface Ended {
  readonly code: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

/** Runs the built command line; `meanwhile` gets the process and what it has said on the error stream so far. */
export function spallwright(
  args: readonly string[],
  cwd: string,
  meanwhile?: (child: ChildProcess, stderr: string) => void,
): Promise<Ended> {
  return new Promise((done, failed) => {
    const child = spawn(process.execPath, [PROGRAM, ...args], { cwd, stdio: ['ignore', 'pipe', 'pipe'] });
    let stdout = '';
    let stderr = '';
    child.stdout.setEncoding('utf8').on('data', (text: string) => {
      stdout += text;
    });
    child.stderr.setEncoding('utf8').on('data', (text: string) => {
      stderr += text;
      meanwhile?.(child, stderr);
    });
    child.on('error', failed);
    child.on('close', (code) => done({ code, stdout, stderr }));
  });
}

/** A folder of a test's own, and how to take it away. */
export function scratch(): { readonly path: string; readonly remove: () => void } {
  const path = mkdtempSync(join(tmpdir(), 'spallwright-'));
  return { path, remove: () => rmSync(path, { recursive: true, force: true }) };
}
