/**
 * The word that was probably meant: of the candidates the one with the fewest slips of the pen (a letter added, left out,
 * changed, or swapped with its neighbour; case does not count), if they are few for the length of the word. O(n · length²).
 */

/** The candidate nearest to `word`, or nothing when none is near; the first of equals. */
export function nearest(word: string, candidates: Iterable<string>): string | undefined {
  let best: string | undefined;
  let least = slipsAllowed(word) + 1;
  const written = word.toLowerCase();
  for (const candidate of candidates) {
    if (candidate === word || Math.abs(candidate.length - word.length) >= least) continue;
    const slips = countSlips(written, candidate.toLowerCase());
    if (slips < least) {
      best = candidate;
      least = slips;
    }
  }
  return best;
}

function slipsAllowed(word: string): number {
  if (word.length > 60) return 0;
  return word.length < 3 ? 0 : word.length < 6 ? 1 : 2;
}

/** The distance of Damerau and Levenshtein in which no letter is touched twice (optimal string alignment). */
function countSlips(a: string, b: string): number {
  let before: number[] = [];
  let above = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const change = a[i - 1] === b[j - 1] ? 0 : 1;
      let least = Math.min((above[j] ?? 0) + 1, (row[j - 1] ?? 0) + 1, (above[j - 1] ?? 0) + change);
      const swapped = i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1];
      if (swapped) least = Math.min(least, (before[j - 2] ?? 0) + 1);
      row.push(least);
    }
    before = above;
    above = row;
  }
  return above[b.length] ?? 0;
}
