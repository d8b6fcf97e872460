/** Edit distance: the fewest insertions, deletions and replacements that turn one text into the other (Levenshtein 1966). */
export function editDistance(a: string, b: string): number {
  let row = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const next = [i];
    for (let j = 1; j <= b.length; j++) {
      const replaced = (row[j - 1] as number) + (a[i - 1] === b[j - 1] ? 0 : 1);
      next.push(Math.min(replaced, (row[j] as number) + 1, (next[j - 1] as number) + 1));
    }
    row = next;
  }
  return row[b.length] as number;
}

/** Letters and digits only, in lower case: "Soda-Lime" and "soda_lime" are one name. */
function bare(text: string): string {
  return text.toLowerCase().replace(/[^a-z0-9#]/g, '');
}

/** Names longer than this are not compared, so that a hostile file cannot keep the reader busy. */
const LONGEST_COMPARED = 64;

/**
 * The known name most like the one asked for, or undefined when none is like it: at most two edits in five letters, or
 * one name being the start of the other ("amplitude" for "amplitudeUm"). First in the list wins a tie.
 */
export function nearestName(asked: string, known: Iterable<string>): string | undefined {
  const wanted = bare(asked);
  if (wanted.length === 0 || wanted.length > LONGEST_COMPARED) return undefined;
  let best: string | undefined;
  let least = Infinity;
  for (const name of known) {
    const candidate = bare(name);
    const starts =
      Math.min(wanted.length, candidate.length) >= 3 && (candidate.startsWith(wanted) || wanted.startsWith(candidate));
    const distance = starts ? 0.5 : editDistance(wanted, candidate);
    if (distance < least && (starts || distance <= 0.4 * Math.max(wanted.length, candidate.length))) {
      best = name;
      least = distance;
    }
  }
  return best;
}
