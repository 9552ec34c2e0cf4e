/**
 * The loops that matter for speed: a machine of one statistic stepped over a typed array, of letters or of raw values. A loop
 * starts at `cursor.at`, stops at the first missing value or at the end, and leaves the cursor there.
 *
 * What a step must wait for is one look-up in `next` after the other. What it need not wait for is the handling of the arrays,
 * which the engine repeats in each turn of a loop: four letters a turn hide it. Classifying a value takes longer than that
 * wait, so there is nothing to hide. Plain statements only: destructuring made these loops several times slower, and so did
 * views on parts of an array. Against a bare loop with its tables built in (`test/bench`), letters take 1.2 times as long,
 * values with seven cuts 2.3 times.
 */
import { intervalOf, LEAST_DEPTH, type Zones } from "./statistics.ts";
import type { Tables } from "./tables.ts";

/** Where a loop stands: the offset of its state's row, and the index of the next reading. */
export type Cursor = { offset: number; at: number };

export function stepLetters(
  { columnOf, next, raises: raisesOf }: Tables,
  letters: Uint8Array | Uint16Array,
  count: number,
  raises: Uint32Array,
  cursor: Cursor,
): void {
  let { offset, at } = cursor;
  for (const end = letters.length - 3; at < end; at += 4) {
    const a = letters[at]!;
    const b = letters[at + 1]!;
    const c = letters[at + 2]!;
    const d = letters[at + 3]!;
    if (a >= count || b >= count || c >= count || d >= count) break;
    const first = offset + columnOf[a]!;
    raises[at] = raisesOf[first]!;
    const second = next[first]! + columnOf[b]!;
    raises[at + 1] = raisesOf[second]!;
    const third = next[second]! + columnOf[c]!;
    raises[at + 2] = raisesOf[third]!;
    const fourth = next[third]! + columnOf[d]!;
    raises[at + 3] = raisesOf[fourth]!;
    offset = next[fourth]!;
  }
  for (; at < letters.length; at++) {
    const letter = letters[at]!;
    if (letter >= count) break;
    const entry = offset + columnOf[letter]!;
    raises[at] = raisesOf[entry]!;
    offset = next[entry]!;
  }
  cursor.offset = offset;
  cursor.at = at;
}

export function stepValues(
  tables: Tables,
  zones: Zones,
  values: Float64Array,
  raises: Uint32Array,
  cursor: Cursor,
): void {
  if (zones.depth === LEAST_DEPTH) stepBySeven(tables, zones.heap, values, raises, cursor);
  else stepByMany(tables, zones, values, raises, cursor);
}

/** Up to seven cuts: all thresholds are compared and those below the value counted, which waits for nothing. */
function stepBySeven(
  { columnOf, next, raises: raisesOf }: Tables,
  heap: Float64Array,
  values: Float64Array,
  raises: Uint32Array,
  cursor: Cursor,
): void {
  const a = heap[4]!;
  const b = heap[2]!;
  const c = heap[5]!;
  const d = heap[1]!;
  const e = heap[6]!;
  const f = heap[3]!;
  const g = heap[7]!;
  let { offset, at } = cursor;
  for (; at < values.length; at++) {
    const value = values[at]!;
    if (Number.isNaN(value)) break;
    const below = +(value > a) + +(value > b) + +(value > c) + +(value > d);
    const letter = below + +(value > e) + +(value > f) + +(value > g);
    const entry = offset + columnOf[letter]!;
    raises[at] = raisesOf[entry]!;
    offset = next[entry]!;
  }
  cursor.offset = offset;
  cursor.at = at;
}

function stepByMany(
  { columnOf, next, raises: raisesOf }: Tables,
  { heap, depth }: Zones,
  values: Float64Array,
  raises: Uint32Array,
  cursor: Cursor,
): void {
  let { offset, at } = cursor;
  for (; at < values.length; at++) {
    const value = values[at]!;
    if (Number.isNaN(value)) break;
    const entry = offset + columnOf[intervalOf(heap, depth, value)]!;
    raises[at] = raisesOf[entry]!;
    offset = next[entry]!;
  }
  cursor.offset = offset;
  cursor.at = at;
}
