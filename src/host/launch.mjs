// `npm start` and `npm run spallwright`: builds what is missing or stale, then becomes dist/cli.js.
import { spawnSync } from 'node:child_process';
import { existsSync, readdirSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';

const root = fileURLToPath(new URL('../..', import.meta.url));
const program = join(root, 'dist/cli.js');
const SOURCES = ['src', 'resources', 'package.json', 'package-lock.json'];

/** Time of the newest file in a folder and below, or of the file (ms). */
function newest(path) {
  const status = statSync(path, { throwIfNoEntry: false });
  if (!status) return 0;
  if (!status.isDirectory()) return status.mtimeMs;
  return readdirSync(path).reduce((latest, name) => Math.max(latest, newest(join(path, name))), status.mtimeMs);
}

const stale = () => SOURCES.some((name) => newest(join(root, name)) > newest(program));

if (!existsSync(program) || stale()) {
  if (!existsSync(join(root, 'node_modules/vite'))) {
    console.error('The packages are not installed yet. Run "npm ci" first.');
    process.exit(3);
  }
  console.error('Building Spallwright (a few seconds, only after a change) ...');
  const built = spawnSync(process.execPath, [join(root, 'src/host/build.mjs')], {
    stdio: ['ignore', 'inherit', 'inherit'],
  });
  if (built.signal === 'SIGINT') process.exit(130);
  if (built.status !== 0) {
    console.error('The build failed, see above.');
    process.exit(3);
  }
}

if (process.argv[2] !== '--build-only') {
  // npm runs scripts in the project's folder; paths are meant from where the command was typed
  if (process.env.npm_lifecycle_event && process.env.INIT_CWD) process.chdir(process.env.INIT_CWD);
  process.argv[1] = program;
  await import(pathToFileURL(program).href);
}
