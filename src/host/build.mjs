// Builds dist/ in one go: into a folder beside it first, so that a build that fails or is stopped leaves the old one whole.
import { execFileSync } from 'node:child_process';
import { existsSync, renameSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = fileURLToPath(new URL('../..', import.meta.url));
const dist = join(root, 'dist');
const fresh = join(root, `dist.${process.pid}.partial`);
const old = join(root, `dist.${process.pid}.old.partial`);

try {
  const { build } = await import('vite');
  await build({
    configFile: join(root, 'src/vite.config.ts'),
    logLevel: 'warn',
    build: { outDir: fresh },
  });
  // libraries that do not keep to their schema are no build
  execFileSync(process.execPath, [join(fresh, 'cli.js'), 'libraries', '--check'], {
    stdio: ['ignore', 'ignore', 'inherit'],
  });
  if (existsSync(dist)) renameSync(dist, old);
  renameSync(fresh, dist);
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exitCode = 1;
} finally {
  for (const folder of [fresh, old]) rmSync(folder, { recursive: true, force: true });
}
