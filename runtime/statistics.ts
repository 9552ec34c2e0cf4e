/**
 * The statistics of a machine file, checked, and how a value becomes a letter.
 *
 * Cuts become thresholds: a value belongs above a cut exactly when it is greater than the cut's threshold, which is the cut
 * itself where the letter below owns it, and the next double below where the letter above does. One kind of comparison,
 * `value > threshold`, then gives ownership, ±∞ and −0 as the language wants them. The thresholds lie in a heap (the
 * root is node 1, the children of node i are 2i and 2i + 1), filled up with +∞ to three levels at least: the way down takes no
 * unpredictable branch, and where it ends, counted from the left, is the letter.
 */
import type { CutInFile } from "./machine-file.ts";
import {
  checkDistinct,
  checkList,
  checkName,
  checkObject,
  checkText,
  checkWhole,
  checkWord,
  note,
  type Problem,
  show,
} from "./problems.ts";

/** What is read at a trial, one for each statistic: a number for zones, a name or text for letters. */
export type Value = number | string | null | undefined;

type Common = {
  readonly name: string;
  readonly letters: readonly string[];
  /** The letter that stands for a missing value; −1 for none. */
  readonly missing: number;
};

export type Zones = Common & {
  readonly kind: "zones";
  readonly cuts: readonly Pick<CutInFile, "at" | "owner">[];
  /** The thresholds as a heap: 2^depth − 1 nodes, the first at 1. */
  readonly heap: Float64Array;
  readonly depth: number;
};

export type Letters = Common & {
  readonly kind: "letters";
  /** By letter: what the data may say instead of the name, or null. */
  readonly texts: readonly (string | null)[];
  /** Names and texts to letters; a text goes before a name. */
  readonly letterOf: ReadonlyMap<string, number>;
};

export type Statistic = Zones | Letters;

/** Most letters of all statistics together multiply to `MOST_SYMBOLS`, so no one has more. */
const MOST_LETTERS = 65536;
/** Every heap has three levels at least, and so room for seven thresholds. */
export const LEAST_DEPTH = 3;

export function checkStatistic(value: unknown, where: string, problems: Problem[]): Statistic | undefined {
  if (typeof value !== "object" || value === null) {
    return note(problems, "wrong_type", where, `an object is due here, not ${show(value)}`);
  }
  const kind = checkWord(
    "kind" in value ? value.kind : undefined,
    `${where}.kind`,
    ["zones", "letters"],
    problems,
  );
  if (kind === undefined) return undefined;
  return kind === "zones" ? checkZones(value, where, problems) : checkLetters(value, where, problems);
}

function checkZones(value: unknown, where: string, problems: Problem[]): Zones | undefined {
  const object = checkObject(value, where, ["name", "kind", "letters", "cuts", "missing"], problems);
  if (object === undefined) return undefined;
  const common = checkCommon(object, where, problems);
  const list = checkList(object.cuts, `${where}.cuts`, 1, MOST_LETTERS - 1, problems);
  const cuts = list?.map((cut, i) => checkCut(cut, `${where}.cuts[${i}]`, problems));
  if (common === undefined || cuts === undefined || !cuts.every((cut) => cut !== undefined)) return undefined;
  const intervals = cuts.length + 1;
  const added = common.letters.length === intervals + 1 && common.missing === intervals;
  if (common.letters.length !== intervals && !added) {
    const what = `${cuts.length} cuts make ${intervals} intervals, and a last letter without one must be the one that stands for missing; these are ${common.letters.length} letters`;
    return note(problems, "bad_length", `${where}.letters`, what);
  }
  const thresholds = cuts.map((cut) => (cut.owner === "below" ? cut.at : nextBelow(cut.at)));
  for (let i = 1; i < cuts.length; i++) {
    const [before, here] = [cuts[i - 1]!, cuts[i]!];
    if (thresholds[i - 1]! < thresholds[i]! && before.at <= here.at) continue;
    const what = `cut ${show(here.at)} follows ${show(before.at)}: cuts increase, or are equal around a letter that owns both`;
    return note(problems, "bad_order", `${where}.cuts[${i}].at`, what);
  }
  return { ...common, kind: "zones", cuts, ...heapOf(thresholds) };
}

function checkLetters(value: unknown, where: string, problems: Problem[]): Letters | undefined {
  const object = checkObject(value, where, ["name", "kind", "letters", "texts", "missing"], problems);
  if (object === undefined) return undefined;
  const common = checkCommon(object, where, problems);
  if (common === undefined) return undefined;
  const count = common.letters.length;
  const list = checkList(object.texts, `${where}.texts`, count, count, problems);
  const before = problems.length;
  const texts = list?.map((text, i) =>
    text === null ? null : (checkText(text, `${where}.texts[${i}]`, problems) ?? null),
  );
  if (texts === undefined || problems.length > before) return undefined;
  const letterOf = new Map<string, number>();
  texts.forEach((text, i) => {
    if (text === null) return;
    if (letterOf.has(text)) {
      note(problems, "duplicate_name", `${where}.texts[${i}]`, `${show(text)} stands here a second time`);
    }
    letterOf.set(text, i);
  });
  common.letters.forEach((name, i) => {
    if (!letterOf.has(name)) letterOf.set(name, i);
  });
  return { ...common, kind: "letters", texts, letterOf };
}

function checkCommon(
  object: Readonly<Record<"name" | "letters" | "missing", unknown>>,
  where: string,
  problems: Problem[],
): Common | undefined {
  const name = checkName(object.name, `${where}.name`, problems);
  const list = checkList(object.letters, `${where}.letters`, 1, MOST_LETTERS, problems);
  const letters = list?.map((letter, i) => checkName(letter, `${where}.letters[${i}]`, problems));
  if (name === undefined || letters === undefined || !letters.every((letter) => letter !== undefined)) {
    return undefined;
  }
  checkDistinct(letters, (i) => `${where}.letters[${i}]`, problems);
  if (object.missing === null) return { name, letters, missing: -1 };
  const missing = checkWhole(object.missing, `${where}.missing`, 0, letters.length - 1, problems);
  return missing === undefined ? undefined : { name, letters, missing };
}

function checkCut(value: unknown, where: string, problems: Problem[]): Zones["cuts"][number] | undefined {
  const object = checkObject(value, where, ["at", "exact", "owner"], problems);
  if (object === undefined) return undefined;
  const owner = checkWord(object.owner, `${where}.owner`, ["below", "above"], problems);
  const exact = checkText(object.exact, `${where}.exact`, problems);
  if (exact !== undefined && !/^-?[0-9]+(\/0*[1-9][0-9]*)?$/.test(exact)) {
    note(problems, "bad_text", `${where}.exact`, `${show(exact)} is not a ratio of whole numbers`);
  }
  if (typeof object.at !== "number" || !Number.isFinite(object.at)) {
    return note(problems, "bad_number", `${where}.at`, `a finite number is due here, not ${show(object.at)}`);
  }
  return owner === undefined ? undefined : { at: object.at, owner };
}

/** The greatest double less than a finite one. */
function nextBelow(value: number): number {
  if (value === 0) return -Number.MIN_VALUE;
  const double = new Float64Array([value]);
  const bits = new BigInt64Array(double.buffer);
  bits[0] = bits[0]! + (value > 0 ? -1n : 1n);
  return double[0]!;
}

function heapOf(thresholds: readonly number[]): { readonly heap: Float64Array; readonly depth: number } {
  let depth = LEAST_DEPTH;
  while (2 ** depth - 1 < thresholds.length) depth++;
  const heap = new Float64Array(2 ** depth).fill(Infinity);
  let taken = 0;
  const place = (node: number): void => {
    if (node >= heap.length) return;
    place(2 * node);
    if (taken < thresholds.length) heap[node] = thresholds[taken++]!;
    place(2 * node + 1);
  };
  place(1);
  return { heap, depth };
}

/** The letter of a value; for a missing one the letter that stands for it, or −1 where none does. Takes O(depth) steps. */
export function letterOf(statistic: Statistic, value: Value): number {
  if (statistic.kind === "letters") {
    const letter = typeof value === "string" && value !== "" ? statistic.letterOf.get(value) : undefined;
    return letter ?? statistic.missing;
  }
  if (typeof value !== "number" || Number.isNaN(value)) return statistic.missing;
  return intervalOf(statistic.heap, statistic.depth, value);
}

/** The number of thresholds below a value that is not NaN: three comparisons without a branch, and one more a further level. */
export function intervalOf(heap: Float64Array, depth: number, value: number): number {
  let node = 2 | +(value > heap[1]!);
  node = (node << 1) | +(value > heap[node]!);
  node = (node << 1) | +(value > heap[node]!);
  for (let level = LEAST_DEPTH; level < depth; level++) node = (node << 1) | +(value > heap[node]!);
  return node - heap.length;
}
