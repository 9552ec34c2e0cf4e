/**
 * The two loops that matter for speed: raw values of one statistic to letters, and letters through the tables of a machine
 * of one statistic. `stepLetters` starts at `cursor.at`, stops at the first letter that is none or at the end, and leaves the
 * cursor there. Raw values are classified a block at a time, so that neither loop waits for the other.
 *
 * What a step must wait for is one look-up in `next` after the other. What it need not is the handling of the arrays, which
 * the engine repeats in each turn of a loop; four steps a turn hide it. Plain statements and no destructuring here, nor a
 * choice between two values: each of these made a loop several times slower. `test/bench` measures both loops.
 */
import { intervalOf, LEAST_DEPTH, type Zones } from "./statistics.ts";
import type { Tables } from "./tables.ts";

export type LetterIndices = Uint8Array | Uint16Array;

export const BLOCK_VALUES = 1024;

/** Room for the letters of a block, with a number to spare that is no letter; null where 16 bits have none. */
export function letterBlock(letters: number): LetterIndices | null {
  if (letters < 256) return new Uint8Array(BLOCK_VALUES);
  return letters < 65536 ? new Uint16Array(BLOCK_VALUES) : null;
}

/** Where a loop stands: the offset of its state's row, and the index of the next letter. */
export type Cursor = { offset: number; at: number };

/**
 * Writes the letters of the values from `from` to before `to`, at most a block of them; NaN becomes the letter that stands
 * for missing, or none.
 */
export function classify(
  zones: Zones,
  values: Float64Array,
  from: number,
  to: number,
  block: LetterIndices,
): void {
  if (zones.depth === LEAST_DEPTH) classifyBySeven(zones, values, from, to, block);
  else classifyByMany(zones, values, from, to, block);
}

/** Counts the thresholds below a value, all seven: quicker than a way down the heap, which has to wait for each level. */
function classifyBySeven(
  { heap, missing }: Zones,
  values: Float64Array,
  from: number,
  to: number,
  block: LetterIndices,
): void {
  const a = heap[4]!;
  const b = heap[2]!;
  const c = heap[5]!;
  const d = heap[1]!;
  const e = heap[6]!;
  const f = heap[3]!;
  const g = heap[7]!;
  for (let at = from; at < to; at++) {
    const value = values[at]!;
    if (Number.isNaN(value)) block[at - from] = missing;
    else {
      block[at - from] =
        +(value > a) +
        +(value > b) +
        +(value > c) +
        +(value > d) +
        +(value > e) +
        +(value > f) +
        +(value > g);
    }
  }
}

function classifyByMany(
  { heap, depth, missing }: Zones,
  values: Float64Array,
  from: number,
  to: number,
  block: LetterIndices,
): void {
  for (let at = from; at < to; at++) {
    const value = values[at]!;
    if (Number.isNaN(value)) block[at - from] = missing;
    else block[at - from] = intervalOf(heap, depth, value);
  }
}

/** Steps through the first `end` letters while they are below `count`; letter i writes what it raises at `shift + i`. */
export function stepLetters(
  { columnOf, next, raises: raisesOf }: Tables,
  letters: LetterIndices,
  end: number,
  count: number,
  raises: Uint32Array,
  shift: number,
  cursor: Cursor,
): void {
  let { offset, at } = cursor;
  for (; at < end - 3; at += 4) {
    const a = letters[at]!;
    const b = letters[at + 1]!;
    const c = letters[at + 2]!;
    const d = letters[at + 3]!;
    if (a >= count || b >= count || c >= count || d >= count) break;
    const first = offset + columnOf[a]!;
    raises[shift + at] = raisesOf[first]!;
    const second = next[first]! + columnOf[b]!;
    raises[shift + at + 1] = raisesOf[second]!;
    const third = next[second]! + columnOf[c]!;
    raises[shift + at + 2] = raisesOf[third]!;
    const fourth = next[third]! + columnOf[d]!;
    raises[shift + at + 3] = raisesOf[fourth]!;
    offset = next[fourth]!;
  }
  for (; at < end; at++) {
    const letter = letters[at]!;
    if (letter >= count) break;
    const entry = offset + columnOf[letter]!;
    raises[shift + at] = raisesOf[entry]!;
    offset = next[entry]!;
  }
  cursor.offset = offset;
  cursor.at = at;
}
