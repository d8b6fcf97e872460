// The build for Node: the command line and its two kinds of thread, everything bundled, beside what they read at run time.
import { copyFileSync, mkdirSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { defineConfig, type Plugin } from 'vite';

const here = (path: string) => fileURLToPath(new URL(path, import.meta.url));

/** Read by the program at run time from `assets/` beside it. */
const ASSETS = {
  'resvg.wasm': here('../node_modules/@resvg/resvg-wasm/index_bg.wasm'),
  'Inter-Regular.ttf': here('../resources/fonts/Inter-Regular.ttf'),
  'Inter-SemiBold.ttf': here('../resources/fonts/Inter-SemiBold.ttf'),
  'demo.job.json': here('../resources/jobs/demo.job.json'),
};

function assets(): Plugin {
  return {
    name: 'assets-beside-the-program',
    apply: 'build',
    writeBundle({ dir = '' }) {
      mkdirSync(`${dir}/assets`, { recursive: true });
      for (const [name, from] of Object.entries(ASSETS)) copyFileSync(from, `${dir}/assets/${name}`);
    },
  };
}

export default defineConfig({
  root: here('.'),
  publicDir: false,
  plugins: [assets()],
  ssr: { noExternal: true },
  build: {
    ssr: true,
    outDir: here('../dist'),
    emptyOutDir: true,
    target: 'node20',
    minify: false,
    sourcemap: true,
    rolldownOptions: {
      input: {
        cli: here('cli/main.ts'),
        'engine.worker': here('cli/engine.worker.ts'),
        'tile.worker': here('cli/tile.worker.ts'),
      },
      output: { format: 'es', entryFileNames: '[name].js', chunkFileNames: '[name]-[hash].js' },
    },
  },
});
