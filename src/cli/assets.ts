import { readFile } from 'node:fs/promises';
import type { Assets } from '#src/run/handlers.ts';

/** A file that the build puts beside the program. */
export function assetUrl(name: string): URL {
  return new URL(`./assets/${name}`, import.meta.url);
}

/** Reads what drawing to pixels needs: the drawing module and the fonts. */
export async function readAssets(): Promise<Assets> {
  const [module, regular, semiBold] = await Promise.all(
    ['resvg.wasm', 'Inter-Regular.ttf', 'Inter-SemiBold.ttf'].map((name) => readFile(assetUrl(name))),
  );
  return { module, fonts: { regular, semiBold } } as Assets;
}
