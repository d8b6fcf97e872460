import { readFileSync } from 'node:fs';

/** Bytes of an invented outline file of the corpus. */
export function corpus(name: string): Uint8Array {
  return readFileSync(new URL(`../../corpus/outlines/${name}`, import.meta.url));
}

/** Text of an invented outline file of the corpus. */
export function corpusText(name: string): string {
  return readFileSync(new URL(`../../corpus/outlines/${name}`, import.meta.url), 'utf8');
}

/** Text of an ASCII DXF with these entities, each a list of codes and values; without a unit when it is undefined. */
export function dxf(entities: readonly (readonly (string | number)[])[], units: number | undefined = 4): string {
  const header = units === undefined ? [] : [9, '$INSUNITS', 70, units];
  const start = [0, 'SECTION', 2, 'HEADER', ...header, 0, 'ENDSEC', 0, 'SECTION', 2, 'ENTITIES'];
  return `${[...start, ...entities.flat(), 0, 'ENDSEC', 0, 'EOF'].join('\n')}\n`;
}
