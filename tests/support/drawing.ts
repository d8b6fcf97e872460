import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { initRaster, type Rasteriser } from '#src/formats/raster.ts';
import { boxesTouch, type PlacedLabel, type Stroke, strokeTouchesBox } from '#src/picture/sheet.ts';

function bytesOf(path: string): Uint8Array {
  return new Uint8Array(readFileSync(fileURLToPath(new URL(`../../${path}`, import.meta.url))));
}

/** The rasteriser with the fonts of the repository. */
export function testRasteriser(): Promise<Rasteriser> {
  return initRaster(bytesOf('node_modules/@resvg/resvg-wasm/index_bg.wasm'), {
    regular: bytesOf('resources/fonts/Inter-Regular.ttf'),
    semiBold: bytesOf('resources/fonts/Inter-SemiBold.ttf'),
  });
}

/** Text that tries to leave its place: markup, entities, reordering marks, control characters, lone surrogates. */
export const HOSTILE = [
  '</text><script>alert(1)</script>',
  '"><image href="file:///etc/passwd"/>',
  '&lt;&amp;&#0;]]><![CDATA[',
  '\u202eevil\u202c \u0645\u0631\u062d\u0628\u0627 \u05e9\u05dc\u05d5\u05dd',
  '\u0000\u0001\u001f\ud800\uffff line\nbreak\ttab',
  `${'wide '.repeat(100)}`,
] as const;

/** Throws unless the tags of an XML document nest and its attributes are quoted and free of raw angle brackets. */
export function checkWellFormed(xml: string): void {
  const open: string[] = [];
  const tag = /<(\/?)([A-Za-z][\w-]*)((?:\s+[\w:-]+="[^"<]*")*)\s*(\/?)>|<|&(?!(?:amp|lt|gt|quot|#39);)/g;
  for (const match of xml.matchAll(tag)) {
    const [whole, closing, name, , empty] = match;
    if (name === undefined) throw new Error(`stray "${whole}" at ${match.index}`);
    if (closing === '/') {
      if (open.pop() !== name) throw new Error(`</${name}> closes nothing`);
    } else if (empty !== '/') open.push(name);
  }
  if (open.length > 0) throw new Error(`${open.join(', ')} left open`);
}

/** Pairs of labels that touch each other and labels that a line touches, as words. */
export function labelClashes(labels: readonly PlacedLabel[], strokes: readonly Stroke[]): string[] {
  const clashes: string[] = [];
  labels.forEach((label, n) => {
    for (const other of labels.slice(n + 1))
      if (boxesTouch(label.box, other.box)) clashes.push(`${label.text} | ${other.text}`);
    if (strokes.some((stroke) => strokeTouchesBox(stroke, label.box))) clashes.push(`${label.text} | a line`);
  });
  return clashes;
}
