import { plainText } from './svg.ts';

/** Widths of lettering, so that labels can be laid out before anything draws them. */

export type Weight = 400 | 600;

/** Advance widths of U+0020 to U+007E in thousandths of the size, read from the fonts shipped in resources/fonts. */
// biome-ignore format: a table
const REGULAR: readonly number[] = [
  281, 288, 466, 633, 642, 982, 644, 300, 365, 365, 501, 662, 288, 460, 288, 360, 631, 407, 610, 618, 646, 593, 620, 566,
  619, 620, 288, 302, 662, 662, 662, 511, 966, 690, 654, 730, 722, 601, 590, 746, 743, 269, 571, 672, 565, 903, 753, 765,
  639, 765, 644, 642, 646, 744, 690, 985, 682, 679, 629, 365, 360, 365, 471, 456, 323, 562, 612, 571, 612, 583, 370, 613,
  591, 242, 242, 549, 242, 876, 591, 600, 612, 612, 376, 528, 327, 591, 562, 818, 546, 562, 552, 426, 333, 426, 662,
];
// biome-ignore format: a table
const SEMIBOLD: readonly number[] = [
  252, 321, 523, 644, 650, 1004, 663, 326, 373, 373, 540, 673, 319, 465, 319, 379, 660, 423, 623, 636, 666, 612, 640, 576,
  640, 640, 319, 329, 673, 673, 673, 543, 999, 728, 659, 737, 722, 605, 588, 749, 746, 277, 580, 703, 565, 922, 759, 769,
  645, 773, 652, 650, 660, 736, 728, 1020, 720, 713, 652, 373, 379, 373, 481, 469, 351, 574, 624, 583, 624, 591, 389, 625,
  612, 262, 262, 569, 262, 900, 612, 609, 624, 624, 397, 549, 353, 612, 587, 839, 569, 588, 566, 455, 359, 455, 673,
];

/** Other signs that drawings use, regular and semi-bold. */
const SIGNS: Readonly<Record<string, readonly [number, number]>> = {
  '\u2212': [662, 673],
  '\u00b5': [586, 614],
  '\u00b0': [456, 458],
  '\u00d7': [662, 673],
  '\u2264': [662, 673],
  '\u2265': [662, 673],
  '\u03bb': [642, 669],
  '\u2009': [182, 166],
  '\u00b1': [662, 673],
  '\u2026': [864, 956],
  '\u00d8': [765, 769],
};

/** Width taken for a sign the tables do not hold: a full square, the widest any script commonly needs. */
const UNKNOWN_ADVANCE = 1000;

/** Width of a label in units of `size`'s own; kerning left out, so a little generous. */
export function textWidth(text: string, size: number, weight: Weight = 400): number {
  const table = weight === 600 ? SEMIBOLD : REGULAR;
  let sum = 0;
  for (const character of plainText(text)) {
    const index = (character.codePointAt(0) as number) - 32;
    sum += table[index] ?? SIGNS[character]?.[weight === 600 ? 1 : 0] ?? UNKNOWN_ADVANCE;
  }
  return (sum * size) / 1000;
}

/** `text` cut to `width` with an ellipsis where it is longer; empty where not even the ellipsis fits. */
export function fitText(text: string, width: number, size: number, weight: Weight = 400): string {
  const line = plainText(text);
  if (textWidth(line, size, weight) <= width) return line;
  const characters = [...line];
  while (characters.length > 0) {
    characters.pop();
    const shorter = `${characters.join('').trimEnd()}\u2026`;
    if (textWidth(shorter, size, weight) <= width) return shorter;
  }
  return '';
}

/** Words of `text` in lines no wider than `width`, at most `most` of them, the last cut with an ellipsis. */
export function wrapText(text: string, width: number, size: number, most: number): string[] {
  const lines: string[] = [];
  let line = '';
  const words = plainText(text).split(' ');
  for (let n = 0; n < words.length; n++) {
    const longer = line === '' ? (words[n] as string) : `${line} ${words[n]}`;
    if (line === '' || textWidth(longer, size) <= width) {
      line = longer;
      continue;
    }
    if (lines.length + 1 === most) return [...lines, fitText(`${line} ${words.slice(n).join(' ')}`, width, size)];
    lines.push(fitText(line, width, size));
    line = words[n] as string;
  }
  return line === '' ? lines : [...lines, fitText(line, width, size)];
}
