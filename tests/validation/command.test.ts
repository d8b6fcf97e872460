import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, test, vi } from 'vitest';
import { validate } from '#src/cli/commands/validate.ts';
import { mainChecks } from '#src/run/validation/checks/all.ts';
import { MARKERS } from '#src/run/validation/markdown.ts';

const checks = mainChecks.slice(0, 2);
let folder = '';
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'spallwright-'));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

async function file(name: string, text: string): Promise<string> {
  const path = join(folder, name);
  await writeFile(path, text);
  return path;
}

describe('validate', () => {
  test('refuses a file it cannot put the table into, before it works anything out', async () => {
    const bare = await file('bare.md', '# Nothing here\n');
    await expect(validate({ write: bare, json: false })).rejects.toMatchObject({ code: 2 });
    await expect(validate({ write: join(folder, 'none.md'), json: false })).rejects.toMatchObject({ code: 2 });
    expect(await readFile(bare, 'utf8')).toBe('# Nothing here\n');
  });

  test('prints one JSON object and puts its checks into the file, between the markers and nowhere else', async () => {
    const path = await file('notes.md', `before\n${MARKERS.begin}\nold\n${MARKERS.end}\nafter\n`);
    const said: string[] = [];
    const out = vi.spyOn(process.stdout, 'write').mockImplementation((text) => said.push(String(text)) > 0);
    const code = await validate({ write: path, json: true }, checks).finally(() => out.mockRestore());
    expect(code).toBe(0);
    const { rows, summary } = JSON.parse(said.join(''));
    expect(rows.map(({ id }: { id: string }) => id)).toEqual(['D1', 'D2']);
    expect(summary.main.checks).toBe(2);
    const text = await readFile(path, 'utf8');
    expect(text.startsWith('before\n') && text.endsWith('\nafter\n')).toBe(true);
    expect(text).not.toContain('old\n');
    for (const { id } of checks) expect(text).toContain(`\n| ${id} |`);
    // the range over properties holds the nominal value it is about
    for (const { predicted, propertyRange } of rows) {
      if (!propertyRange) continue;
      expect(propertyRange[0]).toBeLessThanOrEqual(Math.min(...predicted));
      expect(propertyRange[1]).toBeGreaterThanOrEqual(Math.max(...predicted));
    }
  });
});
